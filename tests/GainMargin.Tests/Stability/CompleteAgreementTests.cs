using System.Globalization;
using System.Text;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>
/// The search of one loop against exact rational arithmetic: where it says complete, every onset is there to 1e-9, nothing
/// else is, and every count is right; beyond a loss through infinity it claims nothing. It must say complete for all but a few.
/// </summary>
public sealed class CompleteAgreementTests
{
    private const double GainTolerance = 1e-9;

    [Fact]
    public void FindAll_RandomLoopsUpToSixStates_MissesNothing()
    {
        int seeds = Seeds.Count(1000);
        int compared = 0;
        int tried = 0;
        int complete = 0;
        var complaints = new StringBuilder();
        foreach (var (seed, test, _, all) in ExactCase.Solvable(seeds))
        {
            tried++;
            var boundary = OnsetFinder.FindAll(test.Path());
            if (boundary.Completeness.Flutter != Coverage.Complete)
            {
                continue;
            }

            complete++;
            var expected = all.Where(e => IsSearched(boundary, e.Gain)).ToList();
            compared += expected.Count;
            bool same = expected.Count == boundary.Onsets.Length && expected.Zip(boundary.Onsets).All(p => IsSame(test, p.First, p.Second));
            if (!same)
            {
                complaints.AppendLine(
                    CultureInfo.InvariantCulture,
                    $"seed {seed}: expected {string.Join(", ", expected.Select(e => e.Gain))}, found {string.Join(", ", boundary.Onsets.Select(o => o.Gain))}");
            }
        }

        Assert.True(complaints.Length == 0, complaints.ToString());
        Assert.True(complete > 0.999 * tried, $"complete in {complete} of {tried} cases");
        Assert.True(compared > seeds, $"only {compared} onsets were compared");
    }

    /// <summary>Twins, free bodies, undamped and overdamped modes side by side: whatever a search decides is right.</summary>
    [Fact]
    public void FindAll_SpecialLoops_WhateverIsDecidedIsRight()
    {
        int seeds = Seeds.Count(1000);
        int complete = 0;
        int decided = 0;
        int intervals = 0;
        var complaints = new StringBuilder();
        for (int seed = 1; seed <= seeds; seed++)
        {
            var test = ExactCase.Special(seed);
            var exact = test.Exact();
            var boundary = OnsetFinder.FindAll(test.Path(), new OnsetOptions { Sweep = new SweepOptions { MaximumDecompositions = 300 } });
            complete += boundary.Completeness.Flutter == Coverage.Complete ? 1 : 0;
            foreach (var interval in boundary.Intervals)
            {
                intervals++;
                decided += interval.Inside == StabilityVerdict.Undecided ? 0 : 1;
                Audit(seed, boundary, interval, exact, complaints);
            }
        }

        Assert.True(complaints.Length == 0, complaints.ToString());
        Assert.True(complete > 0.8 * seeds, $"complete in {complete} of {seeds} cases");
        Assert.True(decided > 0.7 * intervals, $"{decided} of {intervals} intervals were decided");
    }

    private static void Audit(int seed, StabilityBoundary boundary, GainInterval interval, ExactScreening exact, StringBuilder complaints)
    {
        double margin = interval.From == boundary.From && interval.To == boundary.To ? 0
            : boundary.Onsets.Where(o => o.Gain == interval.From || o.Gain == interval.To).Select(o => 2 * o.GainUncertainty).DefaultIfEmpty(0).Max();
        foreach (double share in new[] { 0, 1e-6, 0.01, 0.5, 0.99, 1 - 1e-6, 1 })
        {
            bool isEnd = share is 0 or 1;
            double gain = share == 1 ? interval.To : interval.From + (share * (interval.To - interval.From));
            var verdict = share == 0 ? interval.AtFrom : share == 1 ? interval.AtTo : interval.Inside;
            if (verdict == StabilityVerdict.Undecided || (!isEnd && Math.Min(gain - interval.From, interval.To - gain) <= margin))
            {
                continue;
            }

            // At an onset the gain is known to its uncertainty only.
            bool atOnset = isEnd && boundary.Onsets.Any(o => Math.Abs(o.Gain - gain) <= 2 * o.GainUncertainty);
            if (atOnset)
            {
                continue;
            }

            int growing = exact.UnstableCount(Rational.FromDouble(gain));
            if (isEnd && verdict == StabilityVerdict.Marginal && growing > 0)
            {
                // An onset within rounding of the end.
                growing = Math.Min(exact.UnstableCount(Rational.FromDouble(gain * (1 + 1e-12))), exact.UnstableCount(Rational.FromDouble(gain * (1 - 1e-12))));
            }

            bool right = verdict == StabilityVerdict.Unstable ? growing > 0 && (isEnd || (growing >= interval.Count.Growing && growing <= interval.Count.Growing + interval.Count.Undecided))
                : growing == 0;
            if (!right && !(boundary.Completeness.Flutter == Coverage.Sampled && !isEnd))
            {
                complaints.AppendLine(
                    CultureInfo.InvariantCulture, $"seed {seed} ({boundary.Completeness.Flutter}): {verdict} with {interval.Count} at {gain:R} of {interval.From:R}…{interval.To:R}, but {growing} grow");
            }
        }
    }

    /// <summary>A base gain beyond a loss through infinity once hid everything on the side of zero gain.</summary>
    [Theory]
    [InlineData(54010)]
    [InlineData(63456)]
    [InlineData(77152)]
    public void FindAll_LossThroughInfinityNearZeroGain_SearchesTheSideOfZero(int seed)
    {
        var test = ExactCase.Random(seed);

        var boundary = OnsetFinder.FindAll(test.Path());

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.Equal(
            test.Exact().Onsets(test.Range.From, test.Range.To).Select(e => e.Gain).Where(g => IsSearched(boundary, g)), boundary.Onsets.Select(o => o.Gain), (a, b) => Math.Abs(a - b) < 1e-9);
        Assert.Contains(boundary.Intervals, i => i.From < 0 && i.To > 0 && i.Inside != StabilityVerdict.Undecided);
    }

    private static bool IsSearched(StabilityBoundary boundary, double gain)
        => boundary.Onsets.Where(o => o.Kind == OnsetKind.ThroughInfinity)
            .All(o => Math.Sign(gain) != Math.Sign(o.Gain) || Math.Abs(gain) <= Math.Abs(o.Gain) * (1 + GainTolerance));

    private static bool IsSame(ExactCase test, ExactOnset expected, StabilityOnset found)
        => Math.Abs(expected.Gain - found.Gain) <= GainTolerance * Math.Max(Math.Abs(expected.Gain), 1e-3 * test.Range.Width)
            && expected.UnstableBelow == found.Below.Growing && expected.UnstableAbove == found.Above.Growing;
}
