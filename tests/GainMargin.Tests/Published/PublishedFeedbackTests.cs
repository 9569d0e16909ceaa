using System.Numerics;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Published;

/// <summary>The sweep against the literature.</summary>
public sealed class PublishedBySweepTests : PublishedFeedbackTests
{
    protected override StabilityBoundary Find(GainPath path) => GainSweep.Run(path);
}

/// <summary>The search without sampling against the literature; for several gains at once it sweeps.</summary>
public sealed class PublishedBySearchTests : PublishedFeedbackTests
{
    protected override StabilityBoundary Find(GainPath path)
    {
        var boundary = OnsetFinder.FindAll(path);
        Assert.Equal(path.MovingLoops.Length == 1 ? Coverage.Complete : Coverage.Sampled, boundary.Completeness.Flutter);
        return boundary;
    }
}

/// <summary>Finders against the literature; CASES.md lists the cases.</summary>
public abstract class PublishedFeedbackTests
{
    protected abstract StabilityBoundary Find(GainPath path);

    // A. L. Kimball 1924; D. M. Smith 1933. Kind B: value from memory, recomputed.
    [Theory]
    [Trait("Published", "P06")]
    [InlineData(0.02, 0.01, 3.0)]
    [InlineData(0.05, 0.02, 3.5)]
    [InlineData(0.01, 0.04, 1.25)]
    public void Find_RotorWithInternalDamping_OnsetAtKimballSpeed(double external, double rotating, double ratio)
    {
        const double omega = 1;
        double both = external + rotating;
        var path = GainPath.CommonFactor(
            FeedbackCases.Two(
                [1, 0, 0, 1], [both, 0, 0, both], [omega * omega, 0, 0, omega * omega],
                FeedbackCases.Loop("down", "y", "x", new() { Position = rotating }, 1), FeedbackCases.Loop("up", "x", "y", new() { Position = -rotating }, 1)),
            GainRange.Between(0, 6));

        var boundary = Find(path);

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.Flutter, onset.Kind);
        Assert.Equal(omega * ratio, onset.Gain, 1e-10);
        Assert.Equal(omega, onset.Frequency.Radians, 1e-10);
        Assert.Equal(StabilityVerdict.Stable, boundary.Intervals[0].Inside);
        Assert.Equal(StabilityVerdict.Unstable, boundary.Intervals[1].Inside);

        // Forward whirl: the second coordinate lags the first by a quarter turn.
        Assert.Equal(-Math.PI / 2, (onset.RightMode["y"] / onset.RightMode["x"]).Phase, 1e-8);
    }

    // D. R. Merkin 1997, ch. 6; J. M. Vance 1988. Kind B: value from memory, recomputed.
    [Theory]
    [Trait("Published", "P07")]
    [InlineData(0.06, 1, 0.1)]
    [InlineData(0.2, 3, 0.25)]
    public void Find_OneCrossTermFixed_OnsetWhereTheProductIsCriticalDamping(double c, double omega, double fixedTerm)
    {
        double expected = c * c * omega * omega / fixedTerm;

        var onset = Assert.Single(Find(FeedbackCases.OneCrossTerm(c, omega, fixedTerm, GainRange.Between(0, 5 * expected))).Onsets);

        Assert.Equal(expected, onset.Gain, 1e-10);
        Assert.Equal(omega, onset.Frequency.Radians, 1e-10);
    }

    // As above: q = cω at frequency ω.
    [Fact]
    [Trait("Published", "P07")]
    public void Find_SkewPairOnOneFactor_OnsetAtCriticalCrossCoupling()
    {
        const double c = 0.06;
        const double omega = 1;

        var onset = Assert.Single(Find(FeedbackCases.SkewPair(c, omega, unit: 0.01, GainRange.Between(0, 20))).Onsets);

        Assert.Equal(c * omega / 0.01, onset.Gain, 1e-10 * onset.Gain);
        Assert.Equal(omega, onset.Frequency.Radians, 1e-10);
    }

    // Merkin's theorem: equal frequencies, no damping, any circulatory stiffness. The growth rate is exact.
    [Fact]
    [Trait("Published", "P07")]
    public void Spectrum_EqualFrequenciesWithoutDamping_UnstableForTinyCirculatoryStiffness()
    {
        var closed = FeedbackCases.SkewPair(0, 1, unit: 0.01, GainRange.Between(0, 2)).At(1);

        var spectrum = ClosedLoopAnalysis.Spectrum(closed);

        Assert.Equal(StabilityVerdict.Unstable, spectrum.Verdict);
        Assert.Contains(spectrum.Facts, f => f.Name == "Merkin");
        Assert.Equal(0.00499993750273421, spectrum.Roots.Max(r => r.Value.Real), 1e-13);
    }

    // M. J. Balas 1979. Kind B. A rigid-body motion drifts at every gain only where no position is fed back.
    [Theory]
    [Trait("Published", "P21")]
    [InlineData(1e-3)]
    [InlineData(1)]
    [InlineData(100)]
    public void Find_CollocatedRateFeedback_NoOnset(double reach)
    {
        var boundary = Find(FeedbackCases.TwoMasses(0.05, 1, "x", GainRange.Between(0, reach)));

        Assert.Empty(boundary.Onsets);
        var interval = Assert.Single(boundary.Intervals);
        Assert.Equal(new RootCount(0, 3, 1, 0), interval.Count);
    }

    // Property of the same theorem on random structures: no growing root at any gain.
    [Fact]
    [Trait("Published", "P21")]
    public void Find_CollocatedRateFeedbackOnRandomStructures_NeverUnstable()
    {
        for (int seed = 1; seed <= 40; seed++)
        {
            var random = new Random(seed);
            int n = 2 + random.Next(6);
            double[] Positive(double floor)
            {
                double[] root = [.. Enumerable.Range(0, n * n).Select(_ => random.NextDouble() - 0.5)];
                return [.. Enumerable.Range(0, n * n).Select(k =>
                    Enumerable.Range(0, n).Sum(j => root[(k / n * n) + j] * root[(k % n * n) + j]) + (k / n == k % n ? floor : 0))];
            }

            var names = DofNames.Of([.. Enumerable.Range(0, n).Select(i => $"q{i}")]);
            var pattern = Enumerable.Range(0, n).Select(i => new PatternWeight(names[i], random.NextDouble() - 0.5)).ToArray();
            var loop = FeedbackLoop.Create("rate", Sensor.Weighted(pattern), Actuator.Weighted(pattern), new() { Rate = 1 });
            var closed = ClosedLoop.Create(
                ElasticStructure.FromRowMajor(names, Positive(0.3), Positive(1e-3), Positive(0.05)), ControlLaw.Of(new LoopSetting(loop, 1)));

            var boundary = Find(GainPath.OneLoop(closed, "rate", GainRange.Between(0, 50)));

            Assert.True(boundary.Onsets.IsEmpty && boundary.Intervals.All(i => i.Inside == StabilityVerdict.Stable), $"seed {seed}: {boundary}");
        }
    }

    // Model of Wie & Bernstein 1992 with a dashpot. Kind C: gain derived from Routh's scheme.
    [Theory]
    [Trait("Published", "P22")]
    [InlineData(0.05, 1)]
    [InlineData(0.1, 2)]
    public void Find_NonCollocatedRateFeedback_OnsetDespiteTheRigidBody(double c, double k)
    {
        double expected = 4 * c * k / (k - (2 * c * c));

        var boundary = Find(FeedbackCases.TwoMasses(c, k, "y", GainRange.Between(0, 4 * expected)));

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.Flutter, onset.Kind);
        Assert.Equal(expected, onset.Gain, 1e-10);
        Assert.Equal(k * expected / (2 * c), onset.Frequency.Radians * onset.Frequency.Radians, 1e-9);
        Assert.Equal(1, onset.Below.Marginal);
        Assert.Contains(boundary.Cautions, caution => caution.Kind == CautionKind.FreeMotion);
    }

    // As above: g_max is unlimited for k ≤ 2c².
    [Fact]
    [Trait("Published", "P22")]
    public void Find_NonCollocatedRateFeedbackWithStrongDashpot_NoOnset()
        => Assert.Empty(Find(FeedbackCases.TwoMasses(1, 1.5, "y", GainRange.Between(0, 1000))).Onsets);

    // As above: without the dashpot unstable for every gain.
    [Fact]
    [Trait("Published", "P22")]
    public void Find_NonCollocatedRateFeedbackWithoutDashpot_UnstableThroughout()
    {
        var boundary = Find(FeedbackCases.TwoMasses(0, 1, "y", GainRange.Between(0, 1)));

        Assert.All(boundary.Intervals, i => Assert.Equal(StabilityVerdict.Unstable, i.Inside));
        Assert.Equal(StabilityVerdict.Marginal, boundary.Intervals[0].AtFrom);
    }

    // J. L. Fanson, T. K. Caughey 1990. Kind B: stable for 0 < g < 1, zero eigenvalue at g = 1 for every filter.
    [Theory]
    [Trait("Published", "P23")]
    [InlineData(0.5, 0.01, 0.2)]
    [InlineData(1, 0.005, 0.5)]
    [InlineData(1.2, 0.02, 0.3)]
    [InlineData(3, 0.01, 0.7)]
    public void Find_PositivePositionFeedback_DivergesAtUnitGain(double filter, double zeta, double filterZeta)
    {
        double square = filter * filter;
        var closed = FeedbackCases.Two(
            [1, 0, 0, 1], [2 * zeta, 0, 0, 2 * filterZeta * filter], [1, 0, -square, square], FeedbackCases.Loop("g", "y", "x", new() { Position = -1 }, 0.5));

        var boundary = Find(GainPath.OneLoop(closed, "g", GainRange.Between(0, 3)));

        var onset = Assert.Single(boundary.Onsets);
        Assert.Equal(OnsetKind.Divergence, onset.Kind);
        Assert.Equal(1, onset.Gain, 1e-12);
        Assert.Equal(StabilityVerdict.Stable, boundary.Intervals[0].Inside);
        Assert.Null(onset.Energy);
        Assert.Equal(Complex.One, onset.RightMode["x"]);
    }

    // H. Ziegler, Ing.-Arch. 20 (1952) 49–56: two links under a follower force, which in absolute angles is one loop. Kind A.
    [Fact]
    [Trait("Published", "P01")]
    public void Find_FollowerForceWithoutDamping_CoalescenceAtZieglersLoad()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Lossless());

        var onset = Assert.Single(boundary.Onsets, o => o.Direction == CrossingDirection.Destabilising);
        Assert.Equal(OnsetKind.LosslessCoalescence, onset.Kind);
        Assert.Equal(3.5 - Math.Sqrt(2), onset.Gain, 1e-13);
        Assert.Equal(Math.Pow(2, -0.25), onset.Frequency.Radians, 1e-12);

        // At 7/2 + √2 the growing pair becomes two growing real roots: no restabilisation.
        Assert.Equal(StabilityVerdict.Unstable, boundary.Intervals[^1].Inside);
        Assert.Single(boundary.Onsets);
        Assert.Equal(StabilityVerdict.Marginal, boundary.Intervals[0].Inside);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.LosslessLoop);
    }

    // As above with equal dampers b in both joints, G. Herrmann, I.-C. Jong, J. Appl. Mech. 32 (1965) 592–597: 41/28 + b²/2. Kind A.
    [Theory]
    [Trait("Published", "P02")]
    [InlineData(1e-6)]
    [InlineData(1e-3)]
    [InlineData(0.1)]
    [InlineData(0.5)]
    public void Find_FollowerForceWithDamping_OnsetFarBelowZieglersLoad(double b)
        => Assert.Equal((41.0 / 28) + (b * b / 2), Find(Boundaries.Lossless(b)).Onsets[0].Gain, 1e-9);
}
