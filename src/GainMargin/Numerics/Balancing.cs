using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Numerics;

/// <summary>Balancing of a real matrix by a diagonal similarity of powers of two, so that no rounding is added.</summary>
/// <remarks>B. N. Parlett, C. Reinsch, Balancing a matrix for calculation of eigenvalues and eigenvectors, Numer. Math. 13 (1969) 293–304.</remarks>
internal static class Balancing
{
    private const double Radix = 2;
    private const int MaximumPasses = 100;

    /// <summary>Returns <c>T⁻¹ A T</c> and the diagonal of <c>T</c>.</summary>
    public static (Matrix<double> Balanced, double[] Scale) Balance(Matrix<double> a)
    {
        int n = a.RowCount;
        double[] b = a.ToColumnMajorArray();
        double[] scale = new double[n];
        Array.Fill(scale, 1.0);
        for (int pass = 0, changed = 1; changed > 0 && pass < MaximumPasses; pass++)
        {
            changed = 0;
            for (int i = 0; i < n; i++)
            {
                double f = Factor(b, n, i);
                if (f == 1)
                {
                    continue;
                }

                changed++;
                scale[i] *= f;
                for (int j = 0; j < n; j++)
                {
                    if (j != i)
                    {
                        b[(i * n) + j] *= f;
                        b[(j * n) + i] /= f;
                    }
                }
            }
        }

        return (new DenseMatrix(n, n, b), scale);
    }

    private static double Factor(double[] b, int n, int i)
    {
        double column = 0;
        double row = 0;
        for (int j = 0; j < n; j++)
        {
            if (j != i)
            {
                column += Math.Abs(b[(i * n) + j]);
                row += Math.Abs(b[(j * n) + i]);
            }
        }

        if (column == 0 || row == 0 || !double.IsFinite(column + row))
        {
            return 1;
        }

        double f = 1;
        double sum = column + row;
        while (column < row / Radix)
        {
            column *= Radix * Radix;
            f *= Radix;
        }

        while (column >= row * Radix)
        {
            column /= Radix * Radix;
            f /= Radix;
        }

        return (column + row) / f < 0.95 * sum ? f : 1;
    }
}
