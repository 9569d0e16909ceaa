using System.Globalization;
using BenchmarkDotNet.Columns;
using BenchmarkDotNet.Configs;
using BenchmarkDotNet.Engines;
using BenchmarkDotNet.Jobs;
using BenchmarkDotNet.Loggers;
using BenchmarkDotNet.Reports;
using BenchmarkDotNet.Running;
using BenchmarkDotNet.Toolchains.InProcess.Emit;

namespace GainMargin.Benchmarks;

/// <summary>
/// A short run for every day: one tab-separated line for each comparison, name, ratio, bar and sizes; smaller is better.
/// Fails where a ratio misses its bar by more than a factor of two.
/// </summary>
internal static class QuickComparisons
{
    private sealed record Comparison(string Name, Type Benchmarks, string Candidate, string Reference, double Bar, Func<string> Sizes);

    private static readonly Comparison[] All =
    [
        new("adaptive sweep against a 1000-point sweep", typeof(SweepBenchmarks), nameof(SweepBenchmarks.AdaptiveSweep),
            nameof(SweepBenchmarks.ThousandPointSweep), 0.3, () => "40 dof, 80 states"),
        Search("position and rate, zeta 1e-2", nameof(OnsetBenchmarks.PositionAndRateOnePerCent), () => OnsetBenchmarks.Evaluations(200, 1e-2, true)),
        Search("position, zeta 1e-4", nameof(OnsetBenchmarks.PositionOneInTenThousand), () => OnsetBenchmarks.Evaluations(200, 1e-4, false)),
        Search("position, zeta 1e-8", nameof(OnsetBenchmarks.PositionOneInAHundredMillion), () => OnsetBenchmarks.Evaluations(200, 1e-8, false)),
        new("search of 1000 modes against 200, position and rate, zeta 1e-2", typeof(OnsetBenchmarks), nameof(OnsetBenchmarks.ThousandModes),
            nameof(OnsetBenchmarks.PositionAndRateOnePerCent), 25, () => OnsetBenchmarks.Evaluations(1000, 1e-2, true)),
    ];

    public static int Run()
    {
        var job = Job.Default.WithToolchain(InProcessEmitToolchain.Instance)
            .WithStrategy(RunStrategy.Monitoring).WithWarmupCount(2).WithIterationCount(3).WithInvocationCount(1).WithUnrollFactor(1);
        var config = ManualConfig.CreateEmpty().AddJob(job).AddLogger(NullLogger.Instance).AddColumnProvider(DefaultColumnProviders.Instance);
        bool missed = false;
        foreach (var group in All.GroupBy(c => c.Benchmarks))
        {
            var summary = BenchmarkRunner.Run(group.Key, config);
            foreach (var comparison in group)
            {
                missed |= Reported(comparison.Name, Best(summary, comparison.Candidate) / Best(summary, comparison.Reference), comparison.Bar, comparison.Sizes());
            }
        }

        return missed | Decompositions() ? 1 : 0;
    }

    private static Comparison Search(string what, string candidate, Func<string> sizes)
        => new($"search of one loop against one decomposition of 400 states, {what}", typeof(OnsetBenchmarks), candidate,
            nameof(OnsetBenchmarks.EigenvaluesOf400States), 1.0 / 50, () => "200 modes, " + sizes());

    /// <summary>Decompositions that a search on coupled matrices takes against two, and one for each stable interval confirmed.</summary>
    private static bool Decompositions()
    {
        var boundary = OnsetFinder.FindAll(Laws.Coupled(100));
        return Reported(
            "decompositions of the state matrix against two and one for each stable interval", boundary.Completeness.Decompositions,
            2 + boundary.Completeness.Confirmed, $"100 dof, {boundary.Completeness}");
    }

    private static bool Reported(string name, double ratio, double bar, string sizes)
    {
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{name}\t{ratio:G3}\t{bar:G3}\t{sizes}"));
        return !(ratio <= 2 * bar);
    }

    private static double Best(Summary summary, string method)
        => summary.Reports.Where(r => r.BenchmarkCase.Descriptor.WorkloadMethod.Name == method)
            .Select(r => r.ResultStatistics?.Min ?? double.NaN).DefaultIfEmpty(double.NaN).First();
}
