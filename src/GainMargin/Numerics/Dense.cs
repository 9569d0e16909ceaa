using System.Numerics;
using MathNet.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Numerics;

/// <summary>The other factorisations the library needs, each behind one call.</summary>
internal static class Dense
{
    public static Matrix<double> Copy(Matrix<double> matrix) => DenseMatrix.OfMatrix(matrix);

    /// <summary>The entries column by column; the matrix's own storage where it is dense, so not to be written to.</summary>
    public static double[] Columnwise(Matrix<double> matrix) => matrix.AsColumnMajorArray() ?? matrix.ToColumnMajorArray();

    /// <summary><c>A x</c>.</summary>
    public static Complex[] Times(Matrix<double> a, ReadOnlySpan<Complex> x)
    {
        int n = a.RowCount;
        double[] values = Columnwise(a);
        var y = new Complex[n];
        for (int j = 0; j < a.ColumnCount; j++)
        {
            var column = values.AsSpan(j * n, n);
            var (re, im) = (x[j].Real, x[j].Imaginary);
            for (int i = 0; i < n; i++)
            {
                y[i] = new Complex(y[i].Real + (column[i] * re), y[i].Imaginary + (column[i] * im));
            }
        }

        return y;
    }

    /// <summary><c>Aᵀ x</c>.</summary>
    public static Complex[] TransposeTimes(Matrix<double> a, ReadOnlySpan<Complex> x)
    {
        int n = a.RowCount;
        double[] values = Columnwise(a);
        var y = new Complex[a.ColumnCount];
        for (int j = 0; j < y.Length; j++)
        {
            var column = values.AsSpan(j * n, n);
            double re = 0;
            double im = 0;
            for (int i = 0; i < n; i++)
            {
                re += column[i] * x[i].Real;
                im += column[i] * x[i].Imaginary;
            }

            y[j] = new Complex(re, im);
        }

        return y;
    }

    public static Matrix<double> Zero(int rows, int columns) => DenseMatrix.Create(rows, columns, 0);

    public static Matrix<double> Identity(int n) => DenseMatrix.CreateIdentity(n);

    public static Matrix<double> Diagonal(IReadOnlyList<double> diagonal)
        => DenseMatrix.Create(diagonal.Count, diagonal.Count, (i, j) => i == j ? diagonal[i] : 0);

    /// <summary>Symmetric part, <c>(A + Aᵀ)/2</c>.</summary>
    public static Matrix<double> SymmetricPart(Matrix<double> a) => DenseMatrix.Create(a.RowCount, a.RowCount, (i, j) => (0.5 * a[i, j]) + (0.5 * a[j, i]));

    /// <summary>Skew part, <c>(A − Aᵀ)/2</c>; exactly zero for a matrix that is symmetric bit for bit.</summary>
    public static Matrix<double> SkewPart(Matrix<double> a) => DenseMatrix.Create(a.RowCount, a.RowCount, (i, j) => (0.5 * a[i, j]) - (0.5 * a[j, i]));

    /// <summary>The matrix over a power of two of its own size: iterations square entries, which must neither overflow nor vanish.</summary>
    private static (Matrix<double> Scaled, int Exponent) ToUnitSize(Matrix<double> a)
    {
        double norm = Norm(a);
        int exponent = norm > 0 && double.IsFinite(norm) ? Math.ILogB(norm) : 0;
        return (a.Map(x => Math.ScaleB(x, -exponent)), exponent);
    }

    private static T Converging<T>(string stage, Func<T> factorise)
    {
        try
        {
            return factorise();
        }
        catch (Exception failure) when (failure is NonConvergenceException or IndexOutOfRangeException)
        {
            // The managed iterations leave their arrays where entries overflow on the way.
            throw new NumericalFailureException(stage, $"The iteration for {stage} did not converge.", innerException: failure);
        }
    }

    /// <summary>Whether a matrix is symmetric bit for bit.</summary>
    public static bool IsSymmetric(Matrix<double> a)
    {
        int n = a.RowCount;
        double[] values = Columnwise(a);
        for (int j = 0; j < n; j++)
        {
            for (int i = 0; i < j; i++)
            {
                if (values[(j * n) + i] != values[(i * n) + j])
                {
                    return false;
                }
            }
        }

        return true;
    }

    /// <summary>Ascending eigenvalues and orthonormal eigenvectors of a symmetric matrix.</summary>
    public static (double[] Values, Matrix<double> Vectors) SymmetricEigen(Matrix<double> a)
    {
        if (Norm(a) == 0)
        {
            return (new double[a.RowCount], Identity(a.RowCount));
        }

        var (scaled, exponent) = ToUnitSize(a);
        var evd = Converging("symmetric eigenvalues", () => SymmetricPart(scaled).Evd(Symmetricity.Symmetric));
        double[] values = [.. evd.EigenValues.Select(v => Math.ScaleB(v.Real, exponent))];
        int[] order = [.. Enumerable.Range(0, values.Length).OrderBy(i => values[i])];
        return ([.. order.Select(i => values[i])], DenseMatrix.OfColumnVectors(order.Select(i => evd.EigenVectors.Column(i))));
    }

    /// <summary>
    /// Orthonormal bases of the right null space of <paramref name="a"/> and of its complement; singular values at or
    /// below <paramref name="tolerance"/> count as zero.
    /// </summary>
    public static (Matrix<double> Null, Matrix<double> Complement) NullSpace(Matrix<double> a, double tolerance)
    {
        int n = a.ColumnCount;
        if (Norm(a) <= tolerance)
        {
            return (Identity(n), Zero(n, 0));
        }

        var (scaled, exponent) = ToUnitSize(a);
        var svd = Converging("singular values", () => scaled.Svd());
        int rank = svd.S.Count(s => Math.ScaleB(s, exponent) > tolerance);
        var v = svd.VT.Transpose();
        return (Columns(v, rank, n), Columns(v, 0, rank));
    }

    /// <summary>Right and left singular vectors of the smallest singular value of a square matrix.</summary>
    public static (Complex[] Right, Complex[] Left) SmallestSingularVectors(Matrix<double> a)
    {
        int last = a.RowCount - 1;
        var svd = Converging("singular values", () => ToUnitSize(a).Scaled.Svd());
        return ([.. svd.VT.Row(last).Select(x => new Complex(x, 0))], [.. svd.U.Column(last).Select(x => new Complex(x, 0))]);
    }

    public static Matrix<double> Columns(Matrix<double> a, int from, int to)
    {
        var part = Zero(a.RowCount, to - from);
        for (int j = from; j < to; j++)
        {
            part.SetColumn(j - from, a.Column(j));
        }

        return part;
    }

    /// <summary>Solves <c>A X = B</c>, or returns <see langword="null"/> where the solution is not finite.</summary>
    public static Matrix<double>? TrySolve(Matrix<double> a, Matrix<double> b)
    {
        if (a.RowCount == 0)
        {
            return Copy(b);
        }

        var x = a.LU().Solve(b);
        return x.ForAll(double.IsFinite) ? x : null;
    }

    /// <summary>Solves a square complex system, or returns <see langword="null"/> where the solution is not finite.</summary>
    public static Complex[]? TrySolve(Matrix<Complex> a, Complex[] b)
    {
        var x = a.LU().Solve(MathNet.Numerics.LinearAlgebra.Vector<Complex>.Build.Dense(b));
        return x.ForAll(v => double.IsFinite(v.Real) && double.IsFinite(v.Imaginary)) ? x.ToArray() : null;
    }

    /// <summary>Lower Cholesky factor, or <see langword="null"/> if the matrix is not positive definite.</summary>
    public static Matrix<double>? TryCholesky(Matrix<double> a)
    {
        try
        {
            return a.Cholesky().Factor;
        }
        catch (ArgumentException)
        {
            return null;
        }
    }

    /// <summary><c>L⁻¹ B</c> for a lower triangular <c>L</c>.</summary>
    public static Matrix<double> LowerSolve(Matrix<double> lower, Matrix<double> b)
    {
        int n = lower.RowCount;
        double[] factor = Columnwise(lower);
        double[] x = b.ToColumnMajorArray();
        for (int column = 0; column < b.ColumnCount; column++)
        {
            var y = x.AsSpan(column * n, n);
            for (int j = 0; j < n; j++)
            {
                double pivot = y[j] / factor[(j * n) + j];
                y[j] = pivot;
                if (pivot == 0)
                {
                    continue;
                }

                for (int i = j + 1; i < n; i++)
                {
                    y[i] -= factor[(j * n) + i] * pivot;
                }
            }
        }

        return new DenseMatrix(n, b.ColumnCount, x);
    }

    /// <summary><c>L⁻ᵀ v</c> for a lower triangular <c>L</c>.</summary>
    public static Complex[] LowerTransposeSolve(Matrix<double> lower, ReadOnlySpan<Complex> v)
    {
        int n = lower.RowCount;
        var x = v.ToArray();
        for (int i = n - 1; i >= 0; i--)
        {
            var sum = x[i];
            for (int k = i + 1; k < n; k++)
            {
                sum -= lower[k, i] * x[k];
            }

            x[i] = sum / lower[i, i];
        }

        return x;
    }

    /// <summary>Frobenius norm, without overflow or underflow on the way.</summary>
    public static double Norm(Matrix<double> a)
    {
        double[] values = Columnwise(a);
        double largest = 0;
        foreach (double x in values)
        {
            largest = double.IsNaN(x) ? double.NaN : Math.Max(largest, Math.Abs(x));
        }

        return largest == 0 || !double.IsFinite(largest) ? largest : largest * Math.Sqrt(values.Sum(x => x / largest * (x / largest)));
    }

    /// <summary>Frobenius norm, without overflow or underflow on the way.</summary>
    public static double Norm(Matrix<Complex> a) => Norm2(a.AsColumnMajorArray() ?? a.ToColumnMajorArray());

    /// <summary>The vector at unit length; a zero vector stays as it is.</summary>
    public static Complex[] Unit(Complex[] v)
    {
        double length = Norm2(v);
        return length == 0 ? v : Array.ConvertAll(v, c => c / length);
    }

    public static double Norm2(ReadOnlySpan<Complex> v)
    {
        double largest = 0;
        foreach (var c in v)
        {
            largest = Math.Max(largest, Math.Max(Math.Abs(c.Real), Math.Abs(c.Imaginary)));
        }

        if (largest == 0 || !double.IsFinite(largest))
        {
            return largest;
        }

        double sum = 0;
        foreach (var c in v)
        {
            double re = c.Real / largest;
            double im = c.Imaginary / largest;
            sum += (re * re) + (im * im);
        }

        return largest * Math.Sqrt(sum);
    }
}
