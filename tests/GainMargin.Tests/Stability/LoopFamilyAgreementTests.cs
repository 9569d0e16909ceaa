using System.Globalization;
using GainMargin.Tests.Support;
using Xunit.Abstractions;

namespace GainMargin.Tests.Stability;

/// <summary>
/// A finder against counts of growing roots at gains that it did not choose, over structures and loops of every family.
/// A coverage that calls itself complete may miss nothing; a sampled one may miss excursions narrower than its widest step.
/// </summary>
public sealed class LoopFamilyAgreementTests(ITestOutputHelper output)
{
    /// <summary>Wide structures are swept long before they are given up; here they are given up sooner.</summary>
    private static readonly SweepOptions Modest = new() { MaximumDecompositions = 300, KeepLoci = false };

    /// <summary>A sweep takes its time: fewer cases.</summary>
    [Fact]
    public void Run_LoopsOfEveryFamily_AgreesWithDenseCounts() => Compare(path => GainSweep.Run(path, Modest), Seeds.Count(100));

    /// <summary>The search of one loop says complete for nearly all, and then it misses nothing.</summary>
    [Fact]
    public void FindAll_LoopsOfEveryFamily_MissesNothing()
    {
        var audits = Compare(path => OnsetFinder.FindAll(path, new OnsetOptions { Sweep = Modest }), Seeds.Count(1000));

        Assert.Equal(0, audits.Sum(a => a.Missed));
        Assert.True(audits.Count(a => a.IsComplete) > 0.92 * audits.Length, "too few searches were complete");
    }

    private BoundaryAudit[] Compare(Func<GainPath, StabilityBoundary> finder, int seeds)
    {
        var audits = new BoundaryAudit[seeds];
        var failures = new string?[seeds];
        Parallel.For(0, seeds, i =>
        {
            var (path, family) = LoopFamilies.Path(i + 1);
            try
            {
                audits[i] = BoundaryAudit.Of(i + 1, family, path, finder);
            }
            catch (NumericalFailureException failure)
            {
                failures[i] = $"seed {i + 1} ({family}): {failure.Message}";
            }
        });
        audits = [.. audits.Where(a => a is not null)];
        foreach (var group in audits.GroupBy(a => a.Family).OrderBy(g => g.Key, StringComparer.Ordinal))
        {
            output.WriteLine(Line(group.Key, [.. group]));
        }

        output.WriteLine(Line("all", audits));
        string complaints = string.Join('\n', audits.SelectMany(a => a.Complaints).Concat(failures.OfType<string>()));
        Assert.True(complaints.Length == 0, complaints);
        Assert.True(audits.Sum(a => a.OnsetsCompared) > seeds / 2, "too few onsets were compared");
        Assert.True(audits.Sum(a => a.OpenCounts) < 0.2 * audits.Sum(a => a.Probes), "too few counts were decided");
        Assert.True(audits.Sum(a => a.Missed) <= 5e-3 * audits.Sum(a => a.Probes), "too many counts were missed");
        return audits;
    }

    private static string Line(string family, BoundaryAudit[] audits) => string.Create(
        CultureInfo.InvariantCulture,
        $"{family,-28} {audits.Length,5} cases, {audits.Sum(a => a.OnsetsCompared),5} onsets compared, {audits.Sum(a => a.Probes),6} gains, " +
        $"{audits.Sum(a => a.OpenCounts),5} counts open, {audits.Sum(a => a.UndecidedProbes),5} verdicts undecided, " +
        $"{audits.Sum(a => a.Missed),3} missed, flutter complete in {100.0 * audits.Count(a => a.IsComplete) / audits.Length:F0} %");
}
