using System.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Numerics;

/// <summary>
/// Computed eigenvalues with discs that hold the exact ones, multiple or not: with computed vectors <c>V</c>, <c>W</c>,
/// <c>V⁻¹AV = Λ + E</c> where <c>E = (I − F)⁻¹WᴴR</c>, <c>R = AV − VΛ</c>, <c>F = I − WᴴV</c>, and Gershgorin's theorem bounds the
/// eigenvalues of that. Radii are infinite where the vectors are too nearly dependent to tell.
/// </summary>
/// <param name="Values">Centres.</param>
/// <param name="Radii">A connected group of these discs holds as many eigenvalues as it has discs.</param>
/// <param name="Alone">
/// Radii of smaller discs, disjoint from all others, that hold one eigenvalue each: <c>Eᵢᵢ + (rᵢ − Eᵢᵢ)/α</c>, where the coordinate is
/// scaled by as large an <c>α</c> as the neighbours <c>rₖ + αEₖᵢ</c> allow. Infinite where there is none.
/// </param>
/// <remarks>J. H. Wilkinson, Rigorous error bounds for computed eigensystems, Comput. J. 4 (1961) 230–241 (from memory).</remarks>
internal sealed record EigenDiscs(Complex[] Values, double[] Radii, double[] Alone)
{
    private const int Seed = 20261202;
    private const double LargestDefect = 0.5;

    /// <param name="a">The matrix.</param>
    /// <param name="doubt">
    /// Bounds <c>|Wᴴ δA V|</c> where the matrix itself is known but for <c>δA</c>, from the vectors and from <c>|V|</c>.
    /// </param>
    /// <remarks>
    /// Vectors of a multiple eigenvalue may come out nearly parallel. Those of a matrix moved by its rounding do not, and no
    /// bound asks where vectors come from.
    /// </remarks>
    public static EigenDiscs Of(Matrix<double> a, Func<EigenSystem, Matrix<double>, Matrix<double>> doubt)
    {
        var plain = About(RealEigen.Solve(a), a, doubt);
        double norm = Dense.Norm(a);
        if (plain.Radii.Max() <= Tolerances.WideDisc * norm)
        {
            return plain;
        }

        int n = a.RowCount;
        var random = new Random(Seed);
        double size = Tolerances.Backward(n, norm);
        var moved = About(RealEigen.Solve(a + DenseMatrix.Create(n, n, (_, _) => size * (random.NextDouble() - 0.5))), a, doubt);
        return moved.Radii.Max() < plain.Radii.Max() ? moved : plain;
    }

    /// <summary>For each disc the first one of its connected group.</summary>
    public int[] Groups()
    {
        int n = Values.Length;
        int[] group = new int[n];
        Array.Fill(group, -1);
        var waiting = new Stack<int>();
        for (int start = 0; start < n; start++)
        {
            if (group[start] < 0)
            {
                group[start] = start;
                waiting.Push(start);
            }

            while (waiting.TryPop(out int i))
            {
                for (int j = 0; j < n; j++)
                {
                    if (group[j] < 0 && !(Complex.Abs(Values[i] - Values[j]) > Radii[i] + Radii[j]))
                    {
                        group[j] = start;
                        waiting.Push(j);
                    }
                }
            }
        }

        return group;
    }

    private static EigenDiscs About(EigenSystem system, Matrix<double> a, Func<EigenSystem, Matrix<double>, Matrix<double>> doubt)
    {
        int n = a.RowCount;
        double rounding = Tolerances.Backward(n, 1);
        var right = DenseMatrix.Create(n, n, (i, j) => Complex.Abs(system.Right[j][i]));
        var left = DenseMatrix.Create(n, n, (i, j) => Complex.Abs(system.Left[i][j]));
        var residual = Dense.Zero(n, n);
        for (int j = 0; j < n; j++)
        {
            var (value, v) = (system.Values[j], system.Right[j]);
            double size = rounding * Complex.Abs(value);
            residual.SetColumn(j, [.. Dense.Times(a, v).Select((x, i) => Complex.Abs(x - (value * v[i])) + (size * right[i, j]))]);
        }

        residual += rounding * (a.PointwiseAbs() * right);
        var first = (left * residual) + doubt(system, right);

        // (I − |F|)⁻¹X ≤ X + Y/(1 − q) where Y = |F|X and |F|Y ≤ qY.
        var defect = Defect(system, rounding * (left * right));
        var second = defect * first;
        double ratio = (defect * second).Map2((x, y) => x == 0 ? 0 : x / y, second).Enumerate().Aggregate(0.0, Math.Max);
        return ratio < LargestDefect
            ? Of(system.Values, first + (second / (1 - ratio)))
            : new EigenDiscs(system.Values, Infinite(n), Infinite(n));
    }

    private static EigenDiscs Of(Complex[] values, Matrix<double> change)
    {
        int n = values.Length;
        double[] radii = change.RowSums().ToArray();
        double[] alone = new double[n];
        for (int i = 0; i < n; i++)
        {
            double room = double.PositiveInfinity;
            double scale = double.PositiveInfinity;
            foreach (int k in Enumerable.Range(0, n).Where(k => k != i))
            {
                double half = (Complex.Abs(values[i] - values[k]) - radii[k]) / 2;
                room = Math.Min(room, half);
                scale = half > 0 ? Math.Min(scale, half / change[k, i]) : 0;
            }

            double radius = change[i, i] + ((radii[i] - change[i, i]) / scale);
            alone[i] = radius < room ? radius : double.PositiveInfinity;
        }

        return new EigenDiscs(values, radii, alone);
    }

    private static double[] Infinite(int n) => [.. Enumerable.Repeat(double.PositiveInfinity, n)];

    /// <summary><c>|F|</c>.</summary>
    private static DenseMatrix Defect(EigenSystem system, Matrix<double> rounding)
        => DenseMatrix.Create(rounding.RowCount, rounding.RowCount, (i, j) =>
        {
            var inner = i == j ? -Complex.One : Complex.Zero;
            var (w, v) = (system.Left[i], system.Right[j]);
            for (int k = 0; k < w.Length; k++)
            {
                inner += Complex.Conjugate(w[k]) * v[k];
            }

            return Complex.Abs(inner) + rounding[i, j];
        });
}
