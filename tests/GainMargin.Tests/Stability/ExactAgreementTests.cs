using System.Text;
using GainMargin.Tests.Oracles;

namespace GainMargin.Tests.Stability;

/// <summary>The sweep against exact rational arithmetic, which shares no code with the library.</summary>
public sealed class ExactAgreementTests
{
    private const double GainTolerance = 1e-9;

    [Fact]
    public void Run_RandomLoopsUpToSixStates_AgreesWithExactArithmetic()
    {
        var report = new StringBuilder();
        int onsets = 0;
        int last = int.Parse(Environment.GetEnvironmentVariable("GM_SEEDS") ?? "400");
        for (int seed = 1; seed <= last; seed++)
        {
            var test = ExactCase.Random(seed);
            var exact = test.Exact();
            IReadOnlyList<ExactOnset> expected;
            try
            {
                expected = exact.Onsets(test.Range.From, test.Range.To);
            }
            catch (NotSupportedException)
            {
                continue;
            }

            StabilityBoundary boundary;
            try { boundary = GainSweep.Run(test.Path()); }
            catch (Exception e) when (e is NumericalFailureException or ArgumentException) { report.AppendLine($"seed {seed}: {e.GetType().Name} {e.Message}"); continue; }
            onsets += expected.Count;
            foreach (var wanted in expected)
            {
                bool found = boundary.Onsets.Any(o => Math.Abs(o.Gain - wanted.Gain) <= GainTolerance * Math.Max(Math.Abs(wanted.Gain), 1e-3 * test.Range.Width));
                if (!found)
                {
                    report.AppendLine($"seed {seed}: missed {wanted.Kind} at {wanted.Gain:R} ({wanted.UnstableBelow}->{wanted.UnstableAbove}); found {string.Join(", ", boundary.Onsets.Select(o => o.ToString()))}; {string.Join(" | ", boundary.Cautions.Where(c => c.Kind == CautionKind.OpenStretch))}");
                }
            }

            foreach (var found in boundary.Onsets)
            {
                if (!expected.Any(w => Math.Abs(found.Gain - w.Gain) <= GainTolerance * Math.Max(Math.Abs(w.Gain), 1e-3 * test.Range.Width)))
                {
                    report.AppendLine($"seed {seed}: invented {found}");
                }
            }

            foreach (var interval in boundary.Intervals)
            {
                int count = exact.UnstableCount(Rational.FromDouble(0.5 * (interval.From + interval.To)));
                bool ok = interval.Inside switch
                {
                    StabilityVerdict.Stable or StabilityVerdict.Marginal => count == 0,
                    StabilityVerdict.Unstable => count > 0 && interval.Count.Growing == count,
                    _ => false,
                };
                if (!ok)
                {
                    report.AppendLine($"seed {seed}: {interval} but {count} growing; counted {interval.Count}; n={test.Order} {test.Ratios}");
                }
            }
        }

        Assert.True(report.Length == 0, report.ToString());
        Assert.True(onsets > last / 4, $"only {onsets} onsets were compared");
    }
}
