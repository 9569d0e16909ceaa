using System.Globalization;
using System.Text;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>
/// The sweep against exact rational arithmetic, which shares no code with the library. Every onset it reports must be
/// exact to 1e-9 and every verdict right; an onset it does not report must belong to an excursion narrower than the
/// result says it can miss.
/// </summary>
public sealed class ExactAgreementTests
{
    private const double GainTolerance = 1e-9;
    private const double MissedShare = 1e-3;

    [Fact]
    public void Run_RandomLoopsUpToSixStates_AgreesWithExactArithmetic()
    {
        int seeds = Seeds.Count(1000);
        int compared = 0;
        int missed = 0;
        int solvable = 0;
        var complaints = new StringBuilder();
        foreach (var (seed, test, exact, expected) in ExactCase.Solvable(seeds))
        {
            solvable++;
            var boundary = GainSweep.Run(test.Path());
            compared += expected.Count;
            var unreported = expected.Where(e => !boundary.Onsets.Any(o => IsSame(test, o.Gain, e.Gain))).ToList();
            missed += unreported.Count;
            foreach (var excursion in unreported.Where(e => !IsNarrow(boundary, expected, e)))
            {
                complaints.AppendLine(CultureInfo.InvariantCulture, $"seed {seed}: missed {excursion.Kind} at {excursion.Gain:R}");
            }

            foreach (var invented in boundary.Onsets.Where(o => !expected.Any(e => IsSame(test, o.Gain, e.Gain))))
            {
                complaints.AppendLine(CultureInfo.InvariantCulture, $"seed {seed}: reported {invented}, which is not there");
            }

            CompareVerdicts(seed, boundary, exact, complaints);
        }

        Assert.True(complaints.Length == 0, complaints.ToString());
        Assert.True(compared > seeds / 2, $"only {compared} onsets were compared");
        Assert.True(missed <= MissedShare * compared, $"{missed} of {compared} onsets were missed");
        Assert.True(solvable > 0.9 * seeds, $"only {solvable} cases could be solved exactly");
    }

    /// <summary>Two branches change sides within one first step: a match that exchanges them hides both crossings.</summary>
    [Theory]
    [InlineData(20611)]
    [InlineData(35039)]
    [InlineData(51914)]
    [InlineData(54192)]
    [InlineData(57955)]
    public void Run_BranchesExchangedInOneStep_BothCrossingsFound(int seed)
    {
        var test = ExactCase.Random(seed);

        var expected = test.Exact().Onsets(test.Range.From, test.Range.To);

        Assert.Equal(expected.Select(e => e.Gain), GainSweep.Run(test.Path()).Onsets.Select(o => o.Gain), (a, b) => IsSame(test, b, a));
    }

    private static bool IsSame(ExactCase test, double found, double expected)
        => Math.Abs(found - expected) <= GainTolerance * Math.Max(Math.Abs(expected), 1e-3 * test.Range.Width);

    private static bool IsNarrow(StabilityBoundary boundary, IReadOnlyList<ExactOnset> expected, ExactOnset missed)
        => expected.Any(e => e != missed && Math.Abs(e.Gain - missed.Gain) <= boundary.Completeness.WidestStep
            && (e.UnstableBelow - e.UnstableAbove) == (missed.UnstableAbove - missed.UnstableBelow));

    private static void CompareVerdicts(int seed, StabilityBoundary boundary, ExactScreening exact, StringBuilder complaints)
    {
        foreach (var interval in boundary.Intervals)
        {
            int growing = exact.UnstableCount(Rational.FromDouble(0.5 * (interval.From + interval.To)));
            bool right = interval.Inside switch
            {
                StabilityVerdict.Stable or StabilityVerdict.Marginal => growing == 0,
                StabilityVerdict.Unstable => growing == interval.Count.Growing,

                // Beside a loss through infinity the other roots are so small against the lost one that a sliver may stay open.
                _ => interval.To - interval.From < 1e-9 * (boundary.To - boundary.From),
            };
            if (!right)
            {
                complaints.AppendLine(CultureInfo.InvariantCulture, $"seed {seed}: {interval}, but {growing} roots grow");
            }
        }
    }
}
