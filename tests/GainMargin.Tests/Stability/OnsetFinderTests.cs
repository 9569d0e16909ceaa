using System.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Stability;

/// <summary>What the search of one loop says and on what evidence.</summary>
public sealed class OnsetFinderTests
{
    /// <summary>Motor, column and tool, with a window of instability of under 1/1000 of the range (invented).</summary>
    internal static GainPath ThinWindow()
    {
        var structure = ElasticStructure.FromRowMajor(
            ["motor", "column", "tool"], [1, 0, 0, 0, 0.92, 0, 0, 0, 0.34], [1.25, -0.29, 0, -0.29, 0.8438, -0.5538, 0, -0.5538, 0.5538],
            [2.16, -2.16, 0, -2.16, 4.94, -2.78, 0, -2.78, 2.78]);
        return GainPath.OneLoop(
            ClosedLoop.Create(structure, ControlLaw.Of(
                Boundaries.Loop("rate", "motor", "motor", new() { Rate = 1 }, 5.03), Boundaries.Loop("position", "column", "motor", new() { Position = 1, Rate = 0.9 }, 5))),
            "position", GainRange.Between(0, 150));
    }

    /// <summary>Modes at 1, 2, 3, … with shapes of either sign at the sensor.</summary>
    private static GainPath Modes(int count, double zeta, FeedbackRatios ratios, double to = 10)
    {
        var table = new ModalTable
        {
            Points = ["motor", "scale"],
            Frequencies = [.. Enumerable.Range(1, count).Select(k => Frequency.FromRadians(k))],
            DampingRatios = [.. Enumerable.Repeat(zeta, count)],
            Shapes = DenseMatrix.Create(2, count, (i, j) => i == 0 ? 1 : (j % 3 == 1 ? -0.8 : 1) / (1 + (0.05 * j))),
        };
        return Boundaries.Path(ElasticStructure.FromModes(table), Boundaries.Loop("g", "scale", "motor", ratios, 0.1), 0, to);
    }

    /// <summary>A chain of unit masses and springs with light damping; motor at one end, scale at the other.</summary>
    private static GainPath EndToEnd(int n, double to)
    {
        var stiffness = DenseMatrix.Create(n, n, (i, j) => i == j ? (i == n - 1 ? 1 : 2) : Math.Abs(i - j) == 1 ? -1 : 0);
        DofNames names = DofNames.Of([.. Enumerable.Range(0, n).Select(i => $"q{i}")]);
        var structure = ElasticStructure.FromMatrices(new StructureMatrices
        {
            Dofs = names,
            Mass = DenseMatrix.CreateIdentity(n),
            Damping = DenseMatrix.OfMatrix(stiffness * 0.01),
            Stiffness = stiffness,
        });
        return Boundaries.Path(structure, Boundaries.Loop("g", names[n - 1], names[0], new() { Position = 1 }, 0.1), 0, to);
    }

    private static OnsetOptions WithoutConfirmation => new() { Confirm = false };

    [Fact]
    public void FindAll_OneLoop_SaysItIsComplete()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Flutter());

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.Equal("complete search of one loop", boundary.Provenance.Method);
        Assert.Null(boundary.Completeness.WhySampled);
        Assert.NotEqual(0, boundary.Completeness.Evaluations);
        Assert.Equal(-0.1, Assert.Single(boundary.Onsets).Gain, 1e-14);
        Assert.Contains("complete, for the loop as computed", boundary.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public void FindAll_ThinWindow_FoundWhereAThousandGainsMissIt()
    {
        var path = ThinWindow();

        var boundary = OnsetFinder.FindAll(path);

        Assert.Equal([OnsetKind.Flutter, OnsetKind.Flutter, OnsetKind.Flutter], boundary.Onsets.Select(o => o.Kind));
        Assert.InRange(boundary.Onsets[1].Gain - boundary.Onsets[0].Gain, 0, path.Range.Width / 999);
        Assert.DoesNotContain(
            Enumerable.Range(1, 998).Select(k => k * path.Range.Width / 999), g => g > boundary.Onsets[0].Gain && g < boundary.Onsets[1].Gain);
        Assert.Equal(
            [StabilityVerdict.Stable, StabilityVerdict.Unstable, StabilityVerdict.Stable, StabilityVerdict.Unstable], boundary.Intervals.Select(i => i.Inside));
    }

    // A pole on the axis at the base gain hides what happens there: another base is taken.
    [Fact]
    public void FindAll_PoleOnTheAxisAtZeroGain_OnsetFoundThere()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Path(Boundaries.One(1, 0, 1), Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), -1, 2));

        Assert.Equal(0, Assert.Single(boundary.Onsets).Gain, 1e-14);
        Assert.Equal([StabilityVerdict.Unstable, StabilityVerdict.Stable], boundary.Intervals.Select(i => i.Inside));
        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
    }

    // A free body and a position loop: no ghost of a flutter beside the divergence at zero gain.
    [Theory]
    [InlineData(50)]
    [InlineData(1)]
    public void FindAll_FreeBodyInAPositionLoop_OneDivergenceAndOneFlutter(double reach)
    {
        DofNames names = ["a", "b", "c"];
        var structure = ElasticStructure.FromRowMajor(names, [1, 0, 0, 0, 1, 0, 0, 0, 1], [0, 0, 0, 0, 0.1, 0, 0, 0, 0.1], [0, 0, 0, 0, 0.5, 0, 0, 0, 1]);
        var loop = FeedbackLoop.Create(
            "g", Sensor.Weighted([new("a", 0.5), new("b", -0.25), new("c", -0.5)]), Actuator.Weighted([new("a", 0.25), new("b", -0.5), new("c", 0.25)]),
            new() { Position = 1 });

        var boundary = OnsetFinder.FindAll(Boundaries.Path(structure, new LoopSetting(loop, 0.1), -reach, reach));

        Assert.Equal([OnsetKind.Divergence, OnsetKind.Flutter], boundary.Onsets.Select(o => o.Kind));
        Assert.Equal(84.0 / 89, boundary.Onsets[1].Gain, 1e-12);
        Assert.Equal([1, 0, 2], boundary.Intervals.Select(i => i.Count.Growing));
    }

    // Two modes so overdamped that their real poles are 8 decades apart; values from exact rational arithmetic.
    [Fact]
    public void FindAll_StronglyOverdampedPair_WindowResolved()
    {
        var structure = ElasticStructure.FromRowMajor(
            ["a", "b"], [1, 0, 0, 1], [62.58038933893899, 0, 0, 2.0841904094160771e-4], [1, 0, 0, 6.609611061070848e-5]);
        var loop = FeedbackLoop.Create(
            "g", Sensor.Weighted([new("a", 1), new("b", 1)]), Actuator.Weighted([new("a", 1), new("b", 0.00390625)]), new() { Position = 1, Rate = -2.678716509444921 });

        var boundary = OnsetFinder.FindAll(Boundaries.Path(structure, new LoopSetting(loop, 0.1), 0, 0.10772433533404419));

        Assert.Equal([0.0538610451, 0.0538632879], boundary.Onsets.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-10);
        Assert.Equal([0, 2, 0], boundary.Intervals.Select(i => i.Count.Growing));
    }

    // Growth just past the onset and at its largest, and least damping, against spectra at many gains.
    [Fact]
    public void FindAll_ExtremesBetweenTheOnsets_AgreeWithSpectra()
    {
        var path = ThinWindow();
        var boundary = OnsetFinder.FindAll(path);
        Complex Fastest(double gain) => ClosedLoopAnalysis.Spectrum(path.At(gain)).Roots.MaxBy(r => r.Value.Real)!.Value;

        var last = boundary.Onsets[^1];
        Assert.Equal(Math.Log(2) / Fastest(last.Gain * Math.Pow(10, 0.05)).Real, last.TimeToDouble!.Value, 1e-8 * last.TimeToDouble.Value);
        Assert.Null(boundary.Onsets[0].TimeToDouble);

        var hump = boundary.Intervals[1];
        double highest = Enumerable.Range(1, 200).Max(k => Fastest(hump.From + ((hump.To - hump.From) * k / 201)).Real);
        Assert.Equal(highest, hump.LargestGrowth!.Root.Real, 1e-3 * highest);
        Assert.True(hump.LargestGrowth.Gain > hump.From && hump.LargestGrowth.Gain < hump.To);
        Assert.Equal(path.Range.To, boundary.Intervals[^1].LargestGrowth!.Gain);

        var stable = boundary.Intervals[2];
        Assert.Null(stable.LargestGrowth);
        double Least(double gain) => ClosedLoopAnalysis.Spectrum(path.At(gain)).Roots.Min(r => r.DampingRatio!.Value);
        Assert.Equal(Least(stable.LeastDamped!.Gain), stable.LeastDamped.DampingRatio, 1e-9);
    }

    // The same structure as modes and as matrices of another shape: two kinds of terms, two kinds of evidence.
    [Theory]
    [InlineData(0)]
    [InlineData(0.03)]
    public void FindAll_ModesAndMatrices_GiveTheSame(double acceleration)
    {
        const int n = 5;
        var random = new Random(3);
        var turned = DenseMatrix.Create(n, n, (_, _) => random.NextDouble() - 0.5).QR().Q;
        double[] omega = [1, 1.7, 2.2, 3.1, 4.4];
        double[] zeta = [0.01, 0.02, 0.005, 0.03, 0.01];
        var ratios = new FeedbackRatios { Position = 1, Rate = 0.2, Acceleration = acceleration };
        DofNames names = ["a", "b", "c", "d", "e"];
        var table = new ModalTable
        {
            Points = names,
            Frequencies = [.. omega.Select(Frequency.FromRadians)],
            DampingRatios = [.. zeta],
            Shapes = turned,
        };
        var modal = Boundaries.Path(ElasticStructure.FromModes(table), Boundaries.Loop("g", "a", "d", ratios, 0.1), -1, 6);
        DenseMatrix Full(Func<int, double> diagonal)
        {
            var full = turned * DenseMatrix.CreateDiagonal(n, n, diagonal) * turned.Transpose();
            return DenseMatrix.OfMatrix(0.5 * (full + full.Transpose()));
        }

        var damping = Full(k => 2 * zeta[k] * omega[k]);
        var structure = ElasticStructure.FromMatrices(new StructureMatrices
        {
            Dofs = names,
            Mass = DenseMatrix.CreateIdentity(n),
            Damping = damping,
            Stiffness = Full(k => omega[k] * omega[k]),
        });
        var coupled = ElasticStructure.FromMatrices(new StructureMatrices
        {
            Dofs = names,
            Mass = DenseMatrix.CreateIdentity(n),
            Damping = damping + (1e-11 * DenseMatrix.Create(n, n, (i, j) => i * j)),
            Stiffness = Full(k => omega[k] * omega[k]),
        });

        var expected = OnsetFinder.FindAll(modal);

        Assert.NotEmpty(expected.Onsets);
        Assert.Equal(0, OnsetFinder.FindAll(modal, WithoutConfirmation).Completeness.Decompositions);
        foreach (var (matrices, tolerance) in new[] { (structure, 1e-11), (coupled, 1e-7) })
        {
            var found = OnsetFinder.FindAll(Boundaries.Path(matrices, Boundaries.Loop("g", "a", "d", ratios, 0.1), -1, 6));
            Assert.Equal(Coverage.Complete, found.Completeness.Flutter);
            Assert.Equal(expected.Onsets.Select(o => (o.Kind, o.Direction, o.Below, o.Above)), found.Onsets.Select(o => (o.Kind, o.Direction, o.Below, o.Above)));
            foreach (var (a, b) in expected.Onsets.Zip(found.Onsets))
            {
                Assert.Equal(a.Gain, b.Gain, tolerance * Math.Max(1, Math.Abs(a.Gain)));
                Assert.Equal(a.Frequency.Radians, b.Frequency.Radians, tolerance * a.Frequency.Radians);
                Assert.Equal(a.GrowthRateSlope!.Value, b.GrowthRateSlope!.Value, 1e3 * tolerance * Math.Abs(a.GrowthRateSlope.Value));
                Assert.InRange(Math.Max(a.BackwardError, b.BackwardError), 0, 1e-14);
                Assert.Equal(a.Energy?.Circulatory ?? 0, b.Energy?.Circulatory ?? 0, 1e3 * tolerance);
                Assert.Equal(a.Energy?.SkewMass ?? 0, b.Energy?.SkewMass ?? 0, 1e3 * tolerance);
                Assert.InRange(Math.Abs(a.Energy?.Residual ?? 0), 0, 1e-12);
                Assert.Equal(a.Energy?.Loops[0].Work ?? 0, b.Energy?.Loops[0].Work ?? 0, 1e3 * tolerance);
            }
        }
    }

    [Fact]
    public void FindAll_ResidualFlexibilityOfAModalTable_IsPartOfTheLoop()
    {
        var table = new ModalTable
        {
            Points = ["x"],
            Frequencies = [Frequency.FromRadians(1)],
            DampingRatios = [0.05],
            Shapes = DenseMatrix.Create(1, 1, 1),
            ResidualFlexibility = DenseMatrix.Create(1, 1, 0.25),
        };

        var boundary = OnsetFinder.FindAll(Boundaries.Path(ElasticStructure.FromModes(table), Boundaries.Loop("g", "x", "x", new() { Position = 1 }, 1), -6, 4));

        // 1 + g(1 + 1/4) = 0 at rest, 1 + g/4 = 0 at infinite frequency.
        Assert.Equal([-4, -0.8], boundary.Onsets.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-13);
        Assert.Equal([OnsetKind.ThroughInfinity, OnsetKind.Divergence], boundary.Onsets.Select(o => o.Kind));
        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
    }

    [Fact]
    public void FindAll_AccelerationLoop_RangeEndsAtTheLossThroughInfinityAndSaysSo()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.ThroughInfinity());

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.ThroughInfinity, onset.Kind);
        Assert.Equal(-1, onset.Gain, 1e-13);
        Assert.Equal((1, 0), (onset.Below.Growing, onset.Above.Growing));
        Assert.Equal(CrossingDirection.Restabilising, onset.Direction);
        Assert.Equal([StabilityVerdict.Undecided, StabilityVerdict.Stable], boundary.Intervals.Select(i => i.Inside));
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.ThroughInfinity && c.Text.Contains("nothing was searched", StringComparison.Ordinal));
    }

    // ẍ + (d + g)ẋ + x = 0 decays at σ where d + g = 2σ.
    [Theory]
    [InlineData(0.25)]
    [InlineData(0.01)]
    public void FindAll_RequiredDecayRate_OnsetWhereThePairReachesIt(double rate)
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Flutter(), new OnsetOptions { DecayRate = rate });

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal((2 * rate) - 0.1, onset.Gain, 1e-13);
        Assert.Equal(Math.Sqrt(1 - (rate * rate)), onset.Frequency.Radians, 1e-13);
        Assert.Equal(rate, boundary.RequiredDecayRate);
        Assert.Equal([StabilityVerdict.Unstable, StabilityVerdict.Stable], boundary.Intervals.Select(i => i.Inside));
        Assert.Null(onset.Energy);
        Assert.Contains("every root must decay at", boundary.ToString(), StringComparison.Ordinal);
        Assert.DoesNotContain("flutter at", boundary.ToString(), StringComparison.Ordinal);
    }

    [Fact]
    public void FindAll_RequiredDecayRateOnMatrices_AgreesWithTheSpectrum()
    {
        const double rate = 0.002;
        var path = ThinWindow();

        var boundary = OnsetFinder.FindAll(path, new OnsetOptions { DecayRate = rate });

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.NotEmpty(boundary.Onsets);
        Assert.All(boundary.Onsets, o => Assert.Contains(
            ClosedLoopAnalysis.Spectrum(path.At(o.Gain)).Roots, r => Math.Abs(r.Value.Real + rate) < 1e-11 && Math.Abs(r.Value.Imaginary - o.Frequency.Radians) < 1e-9));
        Assert.All(boundary.Intervals, i => Assert.Equal(
            ClosedLoopAnalysis.Spectrum(path.At(0.5 * (i.From + i.To))).Roots.Count(r => r.Value.Real > -rate), i.Count.Growing));
    }

    [Fact]
    public void FindAll_RequiredDecayRateOfSeveralGains_SweptForTheSameDemand()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Touch(), new OnsetOptions { DecayRate = 0.125 });

        // x″ + (1 − f)²x′ + 4x = 0 decays at (1 − f)²/2.
        Assert.Equal([0.5, 1.5], boundary.Onsets.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-12);
        Assert.Equal(0.125, boundary.RequiredDecayRate);
        Assert.Equal(Coverage.Sampled, boundary.Completeness.Flutter);
    }

    [Theory]
    [InlineData(20)]
    [InlineData(200)]
    public void FindAll_LightDamping_CostAndOnsetsStayTheSame(int modes)
    {
        var reference = OnsetFinder.FindAll(Modes(modes, 1e-8, new() { Position = 1 }), WithoutConfirmation);
        foreach (double zeta in new[] { 1e-10, 1e-13, 1e-16 })
        {
            var boundary = OnsetFinder.FindAll(Modes(modes, zeta, new() { Position = 1 }), WithoutConfirmation);

            Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
            Assert.InRange(boundary.Completeness.Evaluations, 1, 2 * reference.Completeness.Evaluations);
            Assert.Equal(reference.Onsets.Select(o => o.Gain), boundary.Onsets.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-6 * b);
        }
    }

    [Fact]
    public void FindAll_ChainWithGainsToAMillion_CompleteInAFewThousandEvaluations()
    {
        var boundary = OnsetFinder.FindAll(EndToEnd(40, 1e6), WithoutConfirmation);

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.Equal(19, boundary.Onsets.Length);
        Assert.Equal(38, boundary.Intervals[^1].Count.Growing);
        Assert.InRange(boundary.Completeness.Evaluations, 100, 10_000);
    }

    // Gains that no rounding can resolve: complete as far as the model reaches, open beyond.
    [Fact]
    public void FindAll_GainsBeyondRounding_OpenStretchIsNamed()
    {
        var boundary = OnsetFinder.FindAll(EndToEnd(12, 1e18));

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.OpenStretch);
        Assert.Equal(StabilityVerdict.Undecided, boundary.Intervals[^1].Inside);
        Assert.InRange(boundary.Intervals[^1].From, 1e8, 1e17);
        Assert.Equal(StabilityVerdict.Stable, boundary.VerdictAt(0.1));
    }

    [Fact]
    public void FindAll_UndampedModeThatTheLoopDoesNotSee_StaysMarginalAndIsNamed()
    {
        var table = new ModalTable
        {
            Points = ["x", "y"],
            Frequencies = [Frequency.FromRadians(1), Frequency.FromRadians(3)],
            DampingRatios = [0.05, 0],
            Shapes = DenseMatrix.OfArray(new double[,] { { 1, 1 }, { 1, 0 } }),
        };

        var boundary = OnsetFinder.FindAll(Boundaries.Path(ElasticStructure.FromModes(table), Boundaries.Loop("g", "y", "x", new() { Position = -1 }, 0.5), 0, 2));

        Assert.Equal(1, Assert.Single(boundary.Onsets).Gain, 1e-14);
        Assert.Equal(StabilityVerdict.Marginal, boundary.Intervals[0].Inside);
        Assert.Equal(2, boundary.Intervals[0].Count.Marginal);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.UnseenMode && c.Text.Contains("3 rad", StringComparison.Ordinal));
    }

    // Equal modes are one to the loop; the others stay.
    [Fact]
    public void FindAll_EqualModes_OneIsMovedTheOtherStays()
    {
        var table = new ModalTable
        {
            Points = ["x"],
            Frequencies = [Frequency.FromRadians(1), Frequency.FromRadians(1)],
            DampingRatios = [0.05, 0.05],
            Shapes = DenseMatrix.OfArray(new double[,] { { 0.6, 0.8 } }),
        };

        var boundary = OnsetFinder.FindAll(Boundaries.Path(ElasticStructure.FromModes(table), Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), -1, 1));

        Assert.Equal(-0.1, Assert.Single(boundary.Onsets).Gain, 1e-14);
        Assert.Equal([2, 0], boundary.Intervals.Select(i => i.Count.Growing));
        Assert.Equal([4, 4], boundary.Intervals.Select(i => i.Count.Total));
    }

    public static TheoryData<string, string> Reasons => new()
    {
        { "several", "several gains move together" },
        { "budget", "did not end within its budget" },
        { "beyond", "beyond a loss through infinity" },
        { "residual", "residual flexibility" },
        { "poles", "known well enough" },
    };

    [Theory]
    [MemberData(nameof(Reasons))]
    public void FindAll_SearchNotPossible_SweepsAndSaysWhy(string which, string reason)
    {
        var (path, options) = which switch
        {
            "several" => (Boundaries.Touch(), new OnsetOptions()),
            "budget" => (Modes(60, 1e-2, new() { Position = 1 }), new OnsetOptions { MaximumEvaluations = 100 }),
            "beyond" => (Boundaries.Path(Boundaries.One(1, 0.1, 1), Boundaries.Loop("g", "x", "x", new() { Acceleration = 1 }, -1.5), -2, -1.25), new OnsetOptions()),
            "residual" => (Residual(), new OnsetOptions()),
            _ => (LoopFamilies.Path(510).Path, new OnsetOptions()),
        };

        var boundary = OnsetFinder.FindAll(path, options);

        Assert.Equal(Coverage.Sampled, boundary.Completeness.Flutter);
        Assert.Equal("sampled sweep", boundary.Provenance.Method);
        Assert.Contains(reason, boundary.Completeness.WhySampled, StringComparison.Ordinal);
        Assert.Contains(reason, boundary.ToString(), StringComparison.Ordinal);
    }

    /// <summary>Residual flexibility and a damping that couples the modes.</summary>
    private static GainPath Residual()
    {
        var table = new ModalTable
        {
            Points = ["x"],
            Frequencies = [Frequency.FromRadians(1), Frequency.FromRadians(2)],
            DampingMatrix = DenseMatrix.OfArray(new[,] { { 0.1, 0.05 }, { 0.05, 0.2 } }),
            Shapes = DenseMatrix.OfArray(new double[,] { { 1, 1 } }),
            ResidualFlexibility = DenseMatrix.Create(1, 1, 0.05),
        };
        return Boundaries.Path(ElasticStructure.FromModes(table), Boundaries.Loop("g", "x", "x", new() { Position = 1 }, 1), -1, 4);
    }

    [Fact]
    public void FindAll_Cancelled_Throws()
        => Assert.Throws<OperationCanceledException>(
            () => OnsetFinder.FindAll(Modes(5, 1e-2, new() { Position = 1 }), cancellation: new CancellationToken(canceled: true)));

    [Fact]
    public void FindAll_Progress_EndsAtOne()
    {
        var reports = new List<FinderProgress>();

        OnsetFinder.FindAll(Modes(5, 1e-2, new() { Position = 1 }), progress: new Recorder(reports));

        Assert.Equal(0, reports[0].Fraction);
        Assert.Equal(1, reports[^1].Fraction);
        Assert.Equal(reports.OrderBy(r => r.Fraction).Select(r => r.Fraction), reports.Select(r => r.Fraction));
    }

    [Fact]
    public void FindAll_SameInput_SameBits()
        => Assert.Equal(Written(OnsetFinder.FindAll(ThinWindow())), Written(OnsetFinder.FindAll(ThinWindow())));

    [Fact]
    public void FindAll_ThroughJson_ComesBackWhole()
    {
        var boundary = OnsetFinder.FindAll(ThinWindow(), new OnsetOptions { DecayRate = 1e-4 });
        using var file = new MemoryStream(Written(boundary));

        var read = ResultJson.ReadBoundary(file);

        Assert.Equal(Written(boundary), Written(read));
        Assert.Equal(boundary.ToString(), read.ToString());
        Assert.Equal(boundary.RequiredDecayRate, read.RequiredDecayRate);
        Assert.Equal(boundary.Onsets.Select(o => o.TimeToDouble), read.Onsets.Select(o => o.TimeToDouble));
        Assert.Equal(boundary.Intervals.Select(i => i.LargestGrowth?.Root), read.Intervals.Select(i => i.LargestGrowth?.Root));
        Assert.Equal((boundary.Completeness.Evaluations, boundary.Completeness.Confirmed), (read.Completeness.Evaluations, read.Completeness.Confirmed));
    }

    [Fact]
    public void Options_OutOfRange_AreRefusedByName()
    {
        Refusal.Of<ArgumentOutOfRangeException>("DecayRate", () => _ = new OnsetOptions { DecayRate = -1 }, "-1");
        Refusal.Of<ArgumentOutOfRangeException>("DecayRate", () => _ = new OnsetOptions { DecayRate = double.NaN }, "NaN");
        Refusal.Of<ArgumentOutOfRangeException>("MaximumEvaluations", () => _ = new OnsetOptions { MaximumEvaluations = 10 }, "10");
        Refusal.Of<ArgumentNullException>("path", () => OnsetFinder.FindAll(null!));
        Refusal.Of<ArgumentNullException>("options", () => OnsetFinder.FindAll(Boundaries.Flutter(), new OnsetOptions { Sweep = null! }));
        Refusal.Of<ArgumentException>(
            "options", () => OnsetFinder.FindAll(Boundaries.Flutter(), new OnsetOptions { Sweep = new() { MaximumStep = 0.01, MinimumStep = 0.02 } }), "0.02");
    }

    private static byte[] Written(StabilityBoundary boundary)
    {
        using var file = new MemoryStream();
        ResultJson.Write(file, boundary);
        return file.ToArray();
    }

    private sealed class Recorder(List<FinderProgress> reports) : IProgress<FinderProgress>
    {
        public void Report(FinderProgress value) => reports.Add(value);
    }
}
