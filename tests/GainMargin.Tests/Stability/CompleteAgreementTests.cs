using System.Globalization;
using System.Text;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>
/// The finder for one loop against exact rational arithmetic: where it says complete, every onset is there to 1e-9, nothing
/// else is, and every verdict is right. It must say so for all but a few.
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
        foreach (var (seed, test, _, expected) in ExactCase.Solvable(seeds))
        {
            tried++;
            var boundary = OnsetFinder.FindAll(test.Path());
            if (boundary.Completeness.Flutter != Coverage.Complete)
            {
                continue;
            }

            complete++;
            compared += expected.Count;
            bool same = expected.Count == boundary.Onsets.Length && expected.Zip(boundary.Onsets).All(p =>
                Math.Abs(p.First.Gain - p.Second.Gain) <= GainTolerance * Math.Max(Math.Abs(p.First.Gain), 1e-3 * test.Range.Width)
                && p.First.UnstableBelow == p.Second.Below.Growing && p.First.UnstableAbove == p.Second.Above.Growing);
            if (!same)
            {
                complaints.AppendLine(
                    CultureInfo.InvariantCulture,
                    $"seed {seed}: expected {string.Join(", ", expected.Select(e => e.Gain))}, found {string.Join(", ", boundary.Onsets.Select(o => o.Gain))}");
            }
        }

        Assert.True(complaints.Length == 0, complaints.ToString());
        Assert.True(complete > 0.99 * tried, $"complete in {complete} of {tried} cases");
        Assert.True(compared > seeds, $"only {compared} onsets were compared");
    }

    [Fact]
    public void FindAll_WideStructures_AgreesWithTheSweep()
    {
        int seeds = Seeds.Count(60);
        int complete = 0;
        for (int seed = 1; seed <= seeds; seed++)
        {
            var path = WideCases.Path(seed, most: 20);
            var found = OnsetFinder.FindAll(path);
            if (found.Completeness.Flutter != Coverage.Complete)
            {
                continue;
            }

            complete++;
            var swept = GainSweep.Run(path);
            foreach (var onset in swept.Onsets)
            {
                Assert.True(
                    found.Onsets.Any(o => Math.Abs(o.Gain - onset.Gain) <= (1e-9 * path.Range.Width) + (10 * (o.GainUncertainty + onset.GainUncertainty))),
                    $"seed {seed}: the sweep found {onset}, the finder did not");
            }
        }

        Assert.True(complete > 0.9 * seeds, $"complete in {complete} of {seeds} cases");
    }
}
