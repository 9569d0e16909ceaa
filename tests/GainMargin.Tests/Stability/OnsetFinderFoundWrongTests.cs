using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>Systems that a search once got wrong, against exact rational arithmetic: whatever it decides must be right.</summary>
public sealed class OnsetFinderFoundWrongTests
{
    private static ExactCase Case(
        double[] mass, double[] damping, double[] stiffness, double[] drive, double[] sense, FeedbackRatios ratios, double from, double to)
    {
        double[] Diagonal(double[] d) => [.. Enumerable.Range(0, d.Length * d.Length).Select(k => k / d.Length == k % d.Length ? d[k / d.Length] : 0)];
        return new ExactCase(mass.Length, Diagonal(mass), Diagonal(damping), Diagonal(stiffness), drive, sense, ratios, GainRange.Between(from, to));
    }

    internal static ExactCase Of(string which) => which switch
    {
        "an unseen twin of the mode that flutters" => Case([1, 1], [0, 0.375], [0.25, 0.25], [1, 1], [0, 1], new() { Rate = 1 }, -1, 100),
        "the same, base inside" => Case([1, 1], [0, 0.375], [0.25, 0.25], [1, 1], [0, 1], new() { Rate = 1 }, -8, 20),
        "twins, one barely damped" => Case([1, 1], [1e-9, 0], [2.75, 2.75], [1, 2], [1, 1], new() { Position = 1, Rate = -1.0 / 64 }, -0.125, 0.125),
        "triplets, barely damped" => Case(
            [1, 1, 1], [2.2351741790771484e-8, 9.5367431640625e-7, 0], [2.25, 2.25, 2.25], [0, 1, 2], [2, 1, -1], new() { Rate = 0.109375, Acceleration = 1 }, -30, 32),
        "an acceleration alone on an undamped mode" => Case(
            [1, 1], [0, 0.25], [1, 0.5], [1, 1], [1, 1], new() { Acceleration = 1 }, -0.125, -1.0 / 1024),
        "the same beside negative damping" => Case([1, 1], [0, -0.0625], [1, 2], [1, 1], [1, -1], new() { Acceleration = 1 }, 1.0 / 1024, 0.125),
        "an onset so uncertain that others lie on either side" => Case(
            [1, 1, 0.75], [2.842170943040401E-14, 1.4901161193847656E-08, 0], [1e-6, 1, 2.75], [1, 1, 9.313225746154785E-10], [1, 1, 1],
            new() { Position = 1, Rate = -0.015625 }, -0.234375, 0.25),
        "an open band" => Case([1, 1], [1.74999999999825, 1.09375], [0.765625, 0.765625], [-1, 2], [2, 1], new() { Position = 1, Acceleration = 0.8125 }, -7.5, 8),
        _ => Case([1, 1], [0, 2.5], [0.125, -0.375], [1, 2], [1, -1], new() { Rate = 0.15625, Acceleration = 1 }, -128, 128),
    };

    public static TheoryData<string> Cases =>
    [
        "an unseen twin of the mode that flutters", "the same, base inside", "twins, one barely damped", "triplets, barely damped", "an acceleration alone on an undamped mode",
        "the same beside negative damping", "an onset so uncertain that others lie on either side", "an open band", "a loss through infinity",
    ];

    [Theory]
    [MemberData(nameof(Cases))]
    public void FindAll_WhateverIsDecided_IsRight(string which)
    {
        var test = Of(which);
        var exact = test.Exact();
        foreach (bool extremes in new[] { true, false })
        {
            var boundary = OnsetFinder.FindAll(test.Path(), new OnsetOptions { Extremes = extremes });
            foreach (var interval in boundary.Intervals.Where(i => i.Inside != StabilityVerdict.Undecided))
            {
                foreach (double share in new[] { 1e-9, 1e-3, 0.5, 0.999, 1 - 1e-9 })
                {
                    int growing = exact.UnstableCount(Rational.FromDouble(interval.From + (share * (interval.To - interval.From))));
                    Assert.InRange(growing, interval.Count.Growing, interval.Count.Growing + interval.Count.Undecided);
                }
            }

            foreach (var onset in boundary.Onsets.Where(o => o.Kind == OnsetKind.ThroughInfinity && o.Below.Total > 0 && o.Above.Total > 0))
            {
                double aside = 1e-7 * Math.Abs(onset.Gain);
                Assert.Equal(exact.UnstableCount(Rational.FromDouble(onset.Gain - aside)), onset.Below.Growing);
                Assert.Equal(exact.UnstableCount(Rational.FromDouble(onset.Gain + aside)), onset.Above.Growing);
            }

            AssertReleaseIsRight(boundary, exact);
        }
    }

    // n = 1, free at zero gain with a held loop: once an exception of another library.
    [Fact]
    public void FindAll_FreeBodyHeldByALoopThatCancelsItsSpring_NoForeignException()
    {
        var structure = ElasticStructure.FromRowMajor(["x"], [0.515625], [0], [0.0625]);
        var moving = FeedbackLoop.Create("g", Sensor.Weighted([new("x", 2)]), Actuator.Weighted([new("x", 2)]), new() { Rate = 0.3125, Acceleration = 1 });
        var held = FeedbackLoop.Create("held", Sensor.Weighted([new("x", -1)]), Actuator.Weighted([new("x", -1)]), new() { Position = 0.5, Acceleration = 0.125 });
        var closed = ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(moving, 16, DisplayScale: -4), new LoopSetting(held, -0.125)));

        var boundary = OnsetFinder.FindAll(GainPath.OneLoop(closed, "g", GainRange.Between(8, 64)));

        Assert.NotEmpty(boundary.Intervals);
    }

    // A range that ends just beside a divergence: the verdict at the end is that of the end.
    [Theory]
    [InlineData(1e-12)]
    [InlineData(-1e-12)]
    [InlineData(1e-9)]
    [InlineData(-1e-9)]
    public void FindAll_RangeEndsBesideADivergence_VerdictAtTheEndIsRight(double beyond)
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y", "z"], [1, 0, 0, 0, 1, 0, 0, 0, 1], [0.2, -0.1, 0, -0.1, 0.2, -0.1, 0, -0.1, 0.1], [2, -1, 0, -1, 2, -1, 0, -1, 1.5]);
        double divergence = OnsetFinder.FindAll(Boundaries.Path(structure, Boundaries.Loop("g", "x", "x", new() { Position = 1 }, -0.1), -9, 0.1)).Onsets
            .First(o => o.Kind == OnsetKind.Divergence).Gain;
        double end = divergence * (1 + beyond);

        var boundary = OnsetFinder.FindAll(Boundaries.Path(structure, Boundaries.Loop("g", "x", "x", new() { Position = 1 }, -0.1), end, 0.1));

        Assert.Equal(beyond > 0 ? StabilityVerdict.Unstable : StabilityVerdict.Stable, boundary.Intervals[0].AtFrom);
        Assert.Equal(StabilityVerdict.Stable, boundary.Intervals[^1].AtTo);
    }

    // Seeds of random structures whose counts were wrong once: couplings, residues and modes that rounding decides, roots near zero,
    // equal frequencies, gains beside the end of the range.
    [Theory]
    [InlineData(74697)]
    [InlineData(80642)]
    [InlineData(92156)]
    [InlineData(71474)]
    [InlineData(13217)]
    [InlineData(13521)]
    [InlineData(13879)]
    [InlineData(4333)]
    [InlineData(3523)]
    [InlineData(2633)]
    [InlineData(2585)]
    [InlineData(363)]
    [InlineData(181)]
    public void FindAll_StructuresThatRoundingDecides_NothingWrongIsClaimed(int seed)
    {
        var (path, family) = LoopFamilies.Path(seed);

        var audit = BoundaryAudit.Of(seed, family, path, p => OnsetFinder.FindAll(p));

        Assert.Empty(audit.Complaints);
    }

    private static void AssertReleaseIsRight(StabilityBoundary boundary, ExactScreening exact)
    {
        var verdict = boundary.VerdictAt(boundary.ReleaseGain);
        int growing = exact.UnstableCount(Rational.FromDouble(boundary.ReleaseGain));
        Assert.True(verdict == StabilityVerdict.Undecided || (verdict == StabilityVerdict.Unstable) == growing > 0, $"{verdict}, but {growing} grow");
    }
}
