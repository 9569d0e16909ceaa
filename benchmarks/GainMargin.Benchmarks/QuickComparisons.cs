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
    private sealed record Comparison(string Name, Type Benchmarks, string Candidate, string Reference, double Bar, string Sizes);

    private static readonly Comparison[] All =
    [
        new("adaptive sweep against a 1000-point sweep", typeof(SweepBenchmarks), nameof(SweepBenchmarks.AdaptiveSweep),
            nameof(SweepBenchmarks.ThousandPointSweep), 0.3, "40 dof, 80 states"),
    ];

    public static int Run()
    {
        var job = Job.Default.WithToolchain(InProcessEmitToolchain.Instance)
            .WithStrategy(RunStrategy.Monitoring).WithWarmupCount(1).WithIterationCount(2).WithInvocationCount(1).WithUnrollFactor(1);
        var config = ManualConfig.CreateEmpty().AddJob(job).AddLogger(NullLogger.Instance).AddColumnProvider(DefaultColumnProviders.Instance);
        bool missed = false;
        foreach (var comparison in All)
        {
            var summary = BenchmarkRunner.Run(comparison.Benchmarks, config);
            double ratio = Best(summary, comparison.Candidate) / Best(summary, comparison.Reference);
            missed |= !(ratio <= 2 * comparison.Bar);
            Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{comparison.Name}\t{ratio:G3}\t{comparison.Bar:G3}\t{comparison.Sizes}"));
        }

        return missed ? 1 : 0;
    }

    private static double Best(Summary summary, string method)
        => summary.Reports.Where(r => r.BenchmarkCase.Descriptor.WorkloadMethod.Name == method)
            .Select(r => r.ResultStatistics?.Min ?? double.NaN).DefaultIfEmpty(double.NaN).First();
}
