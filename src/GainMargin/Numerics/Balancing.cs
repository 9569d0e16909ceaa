using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Numerics;

/// <summary>Scaling of a real matrix by powers of two, so that no rounding is added.</summary>
/// <remarks>B. N. Parlett, C. Reinsch, Balancing a matrix for calculation of eigenvalues and eigenvectors, Numer. Math. 13 (1969) 293–304.</remarks>
internal static class Balancing
{
    private const double Radix = 2;
    private const int MaximumPasses = 100;

    /// <summary>
    /// Exponents <c>r</c>, <c>c</c> for which every row and every column of <c>2^rᵢ aᵢⱼ 2^cⱼ</c> has its largest modulus near one; a row
    /// or column of zeros is left alone.
    /// </summary>
    /// <remarks>D. Ruiz, A scaling algorithm to equilibrate both rows and columns norms in matrices, RAL-TR-2001-034 (from memory).</remarks>
    public static (int[] Rows, int[] Columns) Equilibrate(Matrix<double> a)
    {
        int[] rows = new int[a.RowCount];
        int[] columns = new int[a.ColumnCount];
        double[] rowLargest = new double[a.RowCount];
        double[] columnLargest = new double[a.ColumnCount];
        for (int pass = 0, changed = 1; changed > 0 && pass < MaximumPasses; pass++)
        {
            Array.Clear(rowLargest);
            Array.Clear(columnLargest);
            for (int j = 0; j < columns.Length; j++)
            {
                for (int i = 0; i < rows.Length; i++)
                {
                    double x = Math.ScaleB(Math.Abs(a[i, j]), rows[i] + columns[j]);
                    rowLargest[i] = Math.Max(rowLargest[i], x);
                    columnLargest[j] = Math.Max(columnLargest[j], x);
                }
            }

            changed = TakeHalf(rows, rowLargest) + TakeHalf(columns, columnLargest);
        }

        return (rows, columns);
    }

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

    private static int TakeHalf(int[] exponents, double[] largest)
    {
        int changed = 0;
        for (int i = 0; i < exponents.Length; i++)
        {
            int half = largest[i] > 0 && double.IsFinite(largest[i]) ? Math.ILogB(largest[i]) / 2 : 0;
            exponents[i] -= half;
            changed += half != 0 ? 1 : 0;
        }

        return changed;
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
