using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace GainMargin.Numerics;

/// <summary>Approximate roots in flat arrays, each for itself or, of conjugate pairs, the one above the real axis.</summary>
internal sealed class Approximations
{
    private readonly double _far;

    public Approximations(int capacity, bool arePairs)
    {
        int size = Lanes.Width * Lanes.Vectors(capacity);
        (Re, Im, LastStep, Uncertainty) = (new double[size], new double[size], new double[size], new double[size]);
        IsSettled = new bool[size];
        _far = arePairs ? Lanes.FarPair : Lanes.FarSingle;
        Array.Fill(Re, _far);
        ArePairs = arePairs;
    }

    public bool ArePairs { get; }

    public int Count { get; private set; }

    public double[] Re { get; }

    public double[] Im { get; }

    public double[] LastStep { get; }

    public double[] Uncertainty { get; }

    public bool[] IsSettled { get; }

    public ReadOnlySpan<Vector256<double>> ReVectors => Vectors(Re);

    public ReadOnlySpan<Vector256<double>> ImVectors => Vectors(Im);

    public void Add(double re, double im)
    {
        Put(Count, re, im, double.PositiveInfinity, false);
        Count++;
    }

    public void Put(int i, double re, double im, double step, bool isSettled)
        => (Re[i], Im[i], LastStep[i], IsSettled[i]) = (re, im, step, isSettled);

    /// <summary>Takes an entry out of sums over all, until it is put again.</summary>
    public void Hide(int i) => Re[i] = _far;

    /// <summary>The last entry takes the place of the removed one.</summary>
    public void Remove(int i)
    {
        Count--;
        Put(i, Re[Count], Im[Count], LastStep[Count], IsSettled[Count]);
        (Re[Count], Im[Count]) = (_far, 0);
    }

    private ReadOnlySpan<Vector256<double>> Vectors(double[] values)
        => MemoryMarshal.Cast<double, Vector256<double>>(values.AsSpan(0, Lanes.Width * Lanes.Vectors(Count)));
}
