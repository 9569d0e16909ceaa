using System.Globalization;
using System.Text;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>
/// The verdicts of the sweep against spectra at many gains it did not choose, for structures of up to 20 degrees of
/// freedom of every kind. The spectrum splits rigid motion off anew at each gain and polishes, the sweep does not.
/// </summary>
public sealed class WideAgreementTests
{
    private const int Gains = 40;

    /// <summary>Sweep and search share the verdicts' code only in part.</summary>
    [Fact]
    public void FindAll_WideStructures_HasEveryOnsetOfTheSweep()
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
            var searched = found.Intervals.Where(i => i.Inside != StabilityVerdict.Undecided).ToArray();
            foreach (var onset in GainSweep.Run(path).Onsets.Where(o => searched.Any(i => o.Gain >= i.From && o.Gain <= i.To)))
            {
                Assert.True(
                    found.Onsets.Any(o => Math.Abs(o.Gain - onset.Gain) <= (1e-9 * path.Range.Width) + (10 * (o.GainUncertainty + onset.GainUncertainty))),
                    $"seed {seed}: the sweep found {onset}, the search did not");
            }
        }

        Assert.True(complete > 0.95 * seeds, $"complete in {complete} of {seeds} cases");
    }

    [Fact]
    public void VerdictAt_GainsNotSampled_AgreesWithTheSpectrumThere()
    {
        int seeds = Seeds.Count(60);
        int decided = 0;
        var complaints = new StringBuilder();
        for (int seed = 1; seed <= seeds; seed++)
        {
            var path = WideCases.Path(seed, most: 20);
            var boundary = GainSweep.Run(path);
            for (int k = 0; k < Gains; k++)
            {
                // Cubed, so that most gains are near the lower end, where loops begin to act.
                double gain = path.Range.From + (path.Range.Width * Math.Pow((k + 0.5) / Gains, 3));
                var verdict = boundary.VerdictAt(gain);
                var spectrum = ClosedLoopAnalysis.Spectrum(path.At(gain));
                if (verdict == StabilityVerdict.Undecided || spectrum.Verdict == StabilityVerdict.Undecided)
                {
                    continue;
                }

                decided++;
                int growing = boundary.Intervals.First(i => gain >= i.From && gain <= i.To).Count.Growing;
                if (verdict != spectrum.Verdict || growing != spectrum.Count.Growing)
                {
                    complaints.AppendLine(CultureInfo.InvariantCulture, $"seed {seed}, gain {gain:R}: {verdict}, {growing} growing; spectrum {spectrum}");
                }
            }
        }

        Assert.True(complaints.Length == 0, complaints.ToString());
        Assert.True(decided > 0.9 * Gains * seeds, $"only {decided} of {Gains * seeds} verdicts were decided");
    }

    [Fact]
    public void Run_EveryKindOfStructure_EvidenceHolds()
    {
        int seeds = Seeds.Count(60);
        for (int seed = 1; seed <= seeds; seed++)
        {
            var path = WideCases.Path(seed, most: 12);
            var boundary = GainSweep.Run(path);
            Assert.Equal(path.Range.From, boundary.Intervals[0].From);
            Assert.Equal(path.Range.To, boundary.Intervals[^1].To);
            foreach (var onset in boundary.Onsets)
            {
                Assert.True(onset.BackwardError < 1e-12, $"seed {seed}: backward error {onset.BackwardError}");
                Assert.True(onset.GainUncertainty < 1e-6 * path.Range.Width, $"seed {seed}: {onset}");
                if (onset.Energy is { } energy)
                {
                    double scale = Math.Abs(energy.Dissipative) + Math.Abs(energy.Circulatory) + Math.Abs(energy.SkewMass) + 1e-3;
                    Assert.True(Math.Abs(energy.Residual) < 1e-8 * scale, $"seed {seed}: energy residual {energy.Residual}");
                    Assert.True(
                        Math.Abs(energy.Structure + energy.Loops.Sum(l => l.Work) - energy.Residual) < 1e-8 * scale, $"seed {seed}: works do not add up");
                }
            }
        }
    }
}
