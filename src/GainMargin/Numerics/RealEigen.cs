using System.Numerics;
using MathNet.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Numerics;

/// <summary>The only caller of the eigenvalue decomposition for non-symmetric matrices.</summary>
/// <remarks>
/// The managed decomposition does not balance, gives no left vectors, and can end without convergence on sparse or zero
/// matrices. So: balance first, take left vectors from the inverse of the right ones, and on failure repeat after a
/// seeded orthogonal similarity. An exactly defective matrix is moved by its own rounding, which makes its condition
/// numbers finite and the bounds honest (about √ε for a double root).
/// </remarks>
internal static class RealEigen
{
    private const int Seed = 20261201;
    private const double SmallestNorm = 1e-100;
    private const double GreatestNorm = 1e100;

    public static EigenSystem Solve(Matrix<double> a)
    {
        int n = a.RowCount;
        double norm = Dense.Norm(a);
        if (!double.IsFinite(norm))
        {
            throw new NumericalFailureException("eigenvalues", "The matrix has entries that are not finite, or overflows.");
        }

        if (norm == 0)
        {
            return OfZero(n);
        }

        if (norm is < SmallestNorm or > GreatestNorm)
        {
            // The iteration squares entries: take sizes near the ends of the range out of it.
            int exponent = Math.ILogB(norm);
            var middle = Solve(a.Map(x => Math.ScaleB(x, -exponent)));
            return middle with
            {
                Values = Array.ConvertAll(middle.Values, v => new Complex(Math.ScaleB(v.Real, exponent), Math.ScaleB(v.Imaginary, exponent))),
                Uncertainty = Array.ConvertAll(middle.Uncertainty, u => Math.ScaleB(u, exponent)),
            };
        }

        var (balanced, scale) = Balancing.Balance(a);
        double balancedNorm = Dense.Norm(balanced);
        double backward = Tolerances.Backward(n, balancedNorm);
        EigenSystem? last = null;
        Exception? cause = null;
        for (int attempt = 0; attempt < 3; attempt++)
        {
            try
            {
                var (values, packed) = attempt switch
                {
                    0 => Packed(balanced),
                    1 => PackedAfterSimilarity(balanced, 0),
                    _ => PackedAfterSimilarity(balanced, Tolerances.Epsilon * balancedNorm),
                };
                last = Unpack(values, packed, scale, backward, out double worst);
                if (worst < Tolerances.LargestCondition)
                {
                    return last;
                }
            }
            catch (NonConvergenceException failure)
            {
                cause = failure;
            }
        }

        return last ?? throw new NumericalFailureException(
            "eigenvalues", Guard.Invariant($"The eigenvalue iteration did not converge for a matrix of order {n}."), innerException: cause);
    }

    private static EigenSystem OfZero(int n)
    {
        var unit = Enumerable.Range(0, n).Select(i => Enumerable.Range(0, n).Select(j => i == j ? Complex.One : Complex.Zero).ToArray()).ToArray();
        return new EigenSystem(new Complex[n], unit, unit, new double[n]);
    }

    private static (Complex[] Values, Matrix<double> Vectors) Packed(Matrix<double> a)
    {
        var evd = a.Evd(Symmetricity.Asymmetric);
        return (evd.EigenValues.ToArray(), evd.EigenVectors);
    }

    private static (Complex[] Values, Matrix<double> Vectors) PackedAfterSimilarity(Matrix<double> a, double perturbation)
    {
        int n = a.RowCount;
        var random = new Random(Seed);
        var q = DenseMatrix.Create(n, n, (_, _) => random.NextDouble() - 0.5).QR().Q;
        var moved = perturbation == 0 ? a : a + DenseMatrix.Create(n, n, (_, _) => perturbation * (random.NextDouble() - 0.5));
        var (values, vectors) = Packed(q.TransposeThisAndMultiply(moved) * q);
        return (values, q * vectors);
    }

    private static EigenSystem Unpack(Complex[] values, Matrix<double> packed, double[] scale, double backward, out double worst)
    {
        int n = values.Length;
        double[] columns = packed.ToColumnMajorArray();
        for (int j = 0; j < n; j++)
        {
            int width = values[j].Imaginary != 0 ? 2 : 1;
            Scale(columns.AsSpan(j * n, width * n));
            j += width - 1;
        }

        double[] inverse = Dense.Columnwise(new DenseMatrix(n, n, columns).Inverse());
        var right = new Complex[n][];
        var left = new Complex[n][];
        double[] uncertainty = new double[n];
        worst = 0;
        for (int j = 0; j < n; j++)
        {
            bool pair = values[j].Imaginary != 0;
            right[j] = new Complex[n];
            left[j] = new Complex[n];
            double leftSquared = 0;
            for (int i = 0; i < n; i++)
            {
                double im = pair ? columns[((j + 1) * n) + i] : 0;
                int row = i * n;
                var w = pair ? new Complex(inverse[row + j] / 2, inverse[row + j + 1] / 2) : new Complex(inverse[row + j], 0);
                leftSquared += (w.Real * w.Real) + (w.Imaginary * w.Imaginary);
                right[j][i] = new Complex(columns[(j * n) + i], im) * scale[i];
                left[j][i] = w / scale[i];
            }

            double condition = Math.Sqrt(leftSquared);
            condition = double.IsNaN(condition) ? double.PositiveInfinity : condition;
            worst = Math.Max(worst, condition);
            uncertainty[j] = backward * Math.Max(1, condition);
            Normalise(right[j], left[j]);
            if (!pair)
            {
                continue;
            }

            if (values[j].Imaginary < 0)
            {
                values[j] = Complex.Conjugate(values[j]);
            }

            values[j + 1] = Complex.Conjugate(values[j]);
            right[j + 1] = Array.ConvertAll(right[j], Complex.Conjugate);
            left[j + 1] = Array.ConvertAll(left[j], Complex.Conjugate);
            uncertainty[j + 1] = uncertainty[j];
            j++;
        }

        return new EigenSystem(values, right, left, uncertainty);
    }

    private static void Scale(Span<double> vector)
    {
        double sum = 0;
        foreach (double x in vector)
        {
            sum += x * x;
        }

        double length = Math.Sqrt(sum);
        for (int i = 0; i < vector.Length; i++)
        {
            vector[i] /= length;
        }
    }

    private static void Normalise(Complex[] right, Complex[] left)
    {
        double largest = 0;
        foreach (var v in right)
        {
            largest = Math.Max(largest, Math.Max(Math.Abs(v.Real), Math.Abs(v.Imaginary)));
        }

        if (largest == 0 || !double.IsFinite(largest))
        {
            return;
        }

        double sum = 0;
        foreach (var v in right)
        {
            double re = v.Real / largest;
            double im = v.Imaginary / largest;
            sum += (re * re) + (im * im);
        }

        double length = largest * Math.Sqrt(sum);
        for (int i = 0; i < right.Length; i++)
        {
            right[i] /= length;
            left[i] *= length;
        }
    }
}
