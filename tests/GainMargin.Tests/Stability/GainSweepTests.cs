using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>How a sweep behaves: repeatable, cancellable, safe to share, and its options mean what they say.</summary>
public sealed class GainSweepTests
{
    [Fact]
    public void Run_Twice_SameBits()
    {
        foreach (int seed in Enumerable.Range(1, 5))
        {
            Assert.Equal(Json(GainSweep.Run(WideCases.Path(seed, 10))), Json(GainSweep.Run(WideCases.Path(seed, 10))));
        }
    }

    [Fact]
    public void Run_OnePathSharedByThreads_SameBits()
    {
        var path = WideCases.Path(3, 10);
        string[] results = new string[8];

        Parallel.For(0, results.Length, i => results[i] = Json(GainSweep.Run(path)));

        Assert.Single(results.Distinct());
    }

    [Fact]
    public void Run_Cancelled_Throws()
    {
        using var source = new CancellationTokenSource();
        source.Cancel();

        Assert.Throws<OperationCanceledException>(() => GainSweep.Run(Boundaries.Flutter(), cancellation: source.Token));
    }

    [Fact]
    public void Run_CancelledFromProgress_StopsMidway()
    {
        using var source = new CancellationTokenSource();
        var seen = new Reports(report =>
        {
            if (report.Fraction > 0.3)
            {
                source.Cancel();
            }
        });

        Assert.Throws<OperationCanceledException>(() => GainSweep.Run(Boundaries.Flutter(), progress: seen, cancellation: source.Token));
        Assert.InRange(seen.Last.Fraction, 0.3, 0.9);
    }

    [Fact]
    public void Run_WithProgress_ReportsRisingFractionsUpToOne()
    {
        var seen = new Reports(_ => { });

        var boundary = GainSweep.Run(Boundaries.Flutter(), progress: seen);

        Assert.Equal(seen.All.Select(r => r.Fraction).Order(), seen.All.Select(r => r.Fraction));
        Assert.Equal(1, seen.Last.Fraction);
        Assert.InRange(boundary.Completeness.Decompositions, 10, 200);
    }

    [Fact]
    public void Run_KeepLociOff_KeepsNone()
        => Assert.Empty(GainSweep.Run(Boundaries.Flutter(), new SweepOptions { KeepLoci = false }).Loci);

    [Fact]
    public void Run_Loci_AreContinuousAndAscending()
    {
        var path = WideCases.Path(11, 8);
        var boundary = GainSweep.Run(path);

        Assert.Equal(2 * path.Nominal.Structure.Dofs.Count, boundary.Loci.Length);
        foreach (var locus in boundary.Loci)
        {
            Assert.Equal(path.Range.From, locus.Points[0].Gain);
            Assert.Equal(path.Range.To, locus.Points[^1].Gain);
            Assert.All(locus.Points.Zip(locus.Points.Skip(1)), p => Assert.True(p.First.Gain < p.Second.Gain));
        }

        // At each sampled gain the loci together are the spectrum there.
        foreach (int k in new[] { 0, boundary.Loci[0].Points.Length / 2 })
        {
            var roots = ClosedLoopAnalysis.Spectrum(path.At(boundary.Loci[0].Points[k].Gain)).Roots.Select(r => r.Value);
            Assert.All(roots, root => Assert.Contains(boundary.Loci, l => (l.Points[k].Root - root).Magnitude < 1e-8 * (1 + root.Magnitude)));
        }
    }

    [Fact]
    public void Run_SmallerMaximumStep_SaysItCanMissLess()
    {
        var coarse = GainSweep.Run(Boundaries.Flutter());
        var fine = GainSweep.Run(Boundaries.Flutter(), new SweepOptions { MaximumStep = 0.001 });

        Assert.InRange(coarse.Completeness.WidestStep, 0.01, 2.0 / 24 * (1 + 1e-12));
        Assert.InRange(fine.Completeness.WidestStep, 0.0005, 0.002001);
        Assert.NotEqual(coarse.Provenance.OptionsHash, fine.Provenance.OptionsHash);
        Assert.Equal(coarse.Provenance.InputHash, fine.Provenance.InputHash);
    }

    [Fact]
    public void Run_AnyInputChanged_OtherInputHash()
    {
        string[] hashes =
        [
            Hash(Boundaries.Flutter()), Hash(Boundaries.Flutter(-1, 2)), Hash(Boundaries.Divergence()), Hash(Boundaries.ThroughInfinity()),
            Hash(Boundaries.Path(Boundaries.One(1, 0.1, 1), Boundaries.Loop("h", "x", "x", new() { Rate = 1 }, 0.5), -1, 1)),
            Hash(Boundaries.Path(Boundaries.One(1, 0.1, 1), Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.25), -1, 1)),
            Hash(Boundaries.Path(Boundaries.One(1, 0.1, Math.BitIncrement(1.0)), Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5), -1, 1)),
        ];

        Assert.Equal(hashes.Length, hashes.Distinct().Count());
        Assert.Equal(hashes[0], Hash(Boundaries.Flutter()));

        static string Hash(GainPath path) => GainSweep.Run(path, new SweepOptions { MaximumStep = 1 }).Provenance.InputHash;
    }

    [Fact]
    public void Run_GainInDriveUnits_OnsetInDriveUnits()
    {
        var setting = Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5) with { GainUnit = "%", DisplayScale = 0.01 };

        var onset = Assert.Single(GainSweep.Run(Boundaries.Path(Boundaries.One(1, -0.1, 1), setting, 0, 100)).Onsets);

        Assert.Equal(10, onset.Gain, 1e-11);
    }

    [Theory]
    [InlineData(1e-12)]
    [InlineData(1e12)]
    public void Run_GainsOfAnySize_SameAnswerScaled(double size)
    {
        var setting = Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5 * size) with { DisplayScale = 1 / size };

        var onset = Assert.Single(GainSweep.Run(Boundaries.Path(Boundaries.One(1, -0.1, 1), setting, -size, size)).Onsets);

        Assert.Equal(0.1 * size, onset.Gain, 1e-13 * size);
    }

    /// <summary>Two frequencies meet near the release gain and flutter in a pocket narrower than a step.</summary>
    [Fact]
    public void Run_ReleaseGainInANarrowPocket_IsSeenThere()
    {
        var structure = ElasticStructure.FromRowMajor(["a", "b"], [1, 0, 0, 1], [0.006, 0, 0, 0.006], [1, 0.03, -0.03, 4]);
        var path = Boundaries.Path(structure, Boundaries.Loop("g", "a", "a", new() { Position = 1 }, 3), 0, 10.3);

        var boundary = GainSweep.Run(path);

        Assert.Equal(StabilityVerdict.Unstable, ClosedLoopAnalysis.Spectrum(path.Nominal).Verdict);
        Assert.Equal(StabilityVerdict.Unstable, boundary.VerdictAt(boundary.ReleaseGain));
        Assert.Equal([CrossingDirection.Destabilising, CrossingDirection.Restabilising], boundary.Onsets.Select(o => o.Direction));
    }

    [Fact]
    public void Run_EveryKindOfStructure_VerdictAtReleaseIsThatOfTheSpectrum()
    {
        foreach (int seed in Enumerable.Range(1, 40))
        {
            var path = WideCases.Path(seed, 12);
            var boundary = GainSweep.Run(path);
            var there = boundary.VerdictAt(boundary.ReleaseGain);
            var spectrum = ClosedLoopAnalysis.Spectrum(path.Nominal).Verdict;
            bool contradicts = path.Range.From <= boundary.ReleaseGain && boundary.ReleaseGain <= path.Range.To
                && there != StabilityVerdict.Undecided && spectrum != StabilityVerdict.Undecided && there != spectrum;
            Assert.False(contradicts, $"seed {seed}: {there} in the boundary, {spectrum} in the spectrum");
        }
    }

    /// <summary>Entries whose squares overflow: an answer or a refusal, and neither a hang nor a foreign exception.</summary>
    [Theory]
    [InlineData(1e100)]
    [InlineData(1e160)]
    [InlineData(1e250)]
    public void Run_GainsWhoseSquaresOverflow_StillUnstable(double reach)
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0.01, -0.01, -0.01, 0.01], [1, -1, -1, 1]);
        var boundary = GainSweep.Run(Boundaries.Path(structure, Boundaries.Loop("g", "y", "x", new() { Position = 1 }, 0.1), 0, reach));

        Assert.All(boundary.Intervals, i => Assert.NotEqual(StabilityVerdict.Stable, i.Inside));
        Assert.Equal(StabilityVerdict.Unstable, boundary.VerdictAt(0.7 * reach));
    }

    [Fact]
    public void TryGetNearest_TwoOnsets_NearerByRatioOnTheSameSide()
    {
        // Flutter at −0.1 and at the other end nothing: the nearest onset of a positive gain is found by difference.
        var boundary = GainSweep.Run(Boundaries.Flutter());

        Assert.True(boundary.TryGetNearest(-0.2, out var below));
        Assert.Equal(0.5, below.Ratio!.Value, 1e-12);
        Assert.Equal(-6.0206, below.Decibels!.Value, 1e-4);
        Assert.True(boundary.TryGetNearest(0.5, out var above));
        Assert.Null(above.Ratio);
        Assert.Null(above.Decibels);
    }

    [Fact]
    public void ToString_Boundary_ReadsLikeAReport()
    {
        string text = GainSweep.Run(Boundaries.Flutter()).ToString();

        Assert.StartsWith("Stability boundary: gain of loop \"g\", -1 to 1\n", text, StringComparison.Ordinal);
        Assert.Contains("flutter at 1 rad/unit time, restabilising, growing roots 2 → 0", text, StringComparison.Ordinal);
        Assert.Contains("At the release gain 0.5: stable; nearest onset -0.1", text, StringComparison.Ordinal);
        Assert.Contains("Caution: a linear screening, not a clearance", text, StringComparison.Ordinal);
    }

    private static string Json(StabilityBoundary boundary)
    {
        using var stream = new MemoryStream();
        ResultJson.Write(stream, boundary);
        return System.Text.Encoding.UTF8.GetString(stream.ToArray());
    }

    private sealed class Reports(Action<FinderProgress> then) : IProgress<FinderProgress>
    {
        public List<FinderProgress> All { get; } = [];

        public FinderProgress Last => All[^1];

        public void Report(FinderProgress value)
        {
            All.Add(value);
            then(value);
        }
    }
}
