using BenchmarkDotNet.Running;
using GainMargin.Benchmarks;

if (args is ["quick"])
{
    return QuickComparisons.Run();
}

BenchmarkSwitcher.FromAssembly(typeof(QuickComparisons).Assembly).Run(args);
return 0;
