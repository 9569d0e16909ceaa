using BenchmarkDotNet.Attributes;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin.Benchmarks;

/// <summary>
/// The complete search of one loop on a modal table, without confirmation and without looking for extremes between the onsets,
/// against one eigenvalue decomposition of the state matrix of 200 modes.
/// </summary>
[MemoryDiagnoser]
public class OnsetBenchmarks
{
    private const int Repeats = 20;

    private static readonly OnsetOptions SearchOnly = new() { Confirm = false, Extremes = false };

    private Matrix<double> _states = null!;
    private GainPath _positionAndRate = null!;
    private GainPath _light = null!;
    private GainPath _veryLight = null!;
    private GainPath _thousand = null!;

    [GlobalSetup]
    public void Setup()
    {
        _positionAndRate = PositionAndRate(200);
        _light = Laws.Modes(200, 1e-4, new FeedbackRatios { Position = 1 });
        _veryLight = Laws.Modes(200, 1e-8, new FeedbackRatios { Position = 1 });
        _thousand = PositionAndRate(1000);
        _states = Laws.PlainStateMatrix(_positionAndRate, 0.1);
    }

    [Benchmark(Baseline = true)]
    public int EigenvaluesOf400States() => _states.Evd(Symmetricity.Asymmetric).EigenValues.Count;

    [Benchmark(OperationsPerInvoke = Repeats)]
    public int PositionAndRateOnePerCent() => Searched(_positionAndRate);

    [Benchmark(OperationsPerInvoke = Repeats)]
    public int PositionOneInTenThousand() => Searched(_light);

    [Benchmark(OperationsPerInvoke = Repeats)]
    public int PositionOneInAHundredMillion() => Searched(_veryLight);

    [Benchmark(OperationsPerInvoke = Repeats)]
    public int ThousandModes() => Searched(_thousand);

    /// <summary>What a search took, for the line of the comparison.</summary>
    public static string Evaluations(int modes, double zeta, bool rate)
    {
        var path = rate ? Laws.Modes(modes, zeta, new FeedbackRatios { Position = 1, Rate = 0.1 }) : Laws.Modes(modes, zeta, new FeedbackRatios { Position = 1 });
        var boundary = OnsetFinder.FindAll(path, SearchOnly);
        return $"{boundary.Completeness.Evaluations} evaluations, {boundary.Onsets.Length} onsets, {boundary.Completeness.Flutter}".ToLowerInvariant();
    }

    private static GainPath PositionAndRate(int modes) => Laws.Modes(modes, 1e-2, new FeedbackRatios { Position = 1, Rate = 0.1 });

    private static int Searched(GainPath path)
    {
        int onsets = 0;
        for (int k = 0; k < Repeats; k++)
        {
            onsets += OnsetFinder.FindAll(path, SearchOnly).Onsets.Length;
        }

        return onsets;
    }
}
