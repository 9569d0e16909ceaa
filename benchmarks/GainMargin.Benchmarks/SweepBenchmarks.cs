using BenchmarkDotNet.Attributes;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin.Benchmarks;

/// <summary>The adaptive sweep against what a user would do otherwise: eigenvalues at a thousand gains.</summary>
[MemoryDiagnoser]
public class SweepBenchmarks
{
    private const int Points = 1000;

    private GainPath _path = null!;

    [Params(40)]
    public int Order { get; set; }

    [GlobalSetup]
    public void Setup() => _path = Laws.ChainPath(Order);

    [Benchmark(Baseline = true)]
    public double ThousandPointSweep()
    {
        double largest = double.NegativeInfinity;
        for (int i = 0; i < Points; i++)
        {
            double gain = _path.Range.From + (_path.Range.Width * i / (Points - 1));
            largest = Math.Max(largest, Laws.PlainStateMatrix(_path, gain).Evd(Symmetricity.Asymmetric).EigenValues.Max(s => s.Real));
        }

        return largest;
    }

    [Benchmark]
    public int AdaptiveSweep() => GainSweep.Run(_path).Onsets.Length;
}
