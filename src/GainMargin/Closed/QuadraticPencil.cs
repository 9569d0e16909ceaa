using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>The matrices of <c>Q(s) = s²M + sD + K</c>, each <c>n×n</c>.</summary>
internal sealed record QuadraticPencil(Matrix<double> Mass, Matrix<double> Damping, Matrix<double> Stiffness)
{
    public int Order => Mass.RowCount;

    public bool IsFinite => Mass.ForAll(double.IsFinite) && Damping.ForAll(double.IsFinite) && Stiffness.ForAll(double.IsFinite);

    /// <summary><c>|M|</c>, <c>|D|</c>, <c>|K|</c>, entry by entry.</summary>
    public QuadraticPencil Moduli => new(Mass.PointwiseAbs(), Damping.PointwiseAbs(), Stiffness.PointwiseAbs());

    public Matrix<Complex> At(Complex s)
    {
        var square = s * s;
        return MathNet.Numerics.LinearAlgebra.Complex.DenseMatrix.Create(Order, Order, (i, j) => (square * Mass[i, j]) + (s * Damping[i, j]) + Stiffness[i, j]);
    }

    /// <summary><c>Q(s) v</c>.</summary>
    public Complex[] Times(Complex s, Complex[] v) => Combine(s * s, s, 1, v);

    /// <summary><c>Q′(s) v = (2sM + D) v</c>.</summary>
    public Complex[] SlopeTimes(Complex s, Complex[] v) => Combine(2 * s, 1, 0, v);

    /// <summary>The same roots: rows and columns multiplied by the powers of two that bring those of a given matrix to size one.</summary>
    public QuadraticPencil Equilibrated(Matrix<double> matrix)
    {
        var (rows, columns) = Balancing.Equilibrate(matrix);
        Matrix<double> Scaled(Matrix<double> a) => DenseMatrix.Create(Order, Order, (i, j) => Math.ScaleB(a[i, j], rows[i] + columns[j]));
        return new QuadraticPencil(Scaled(Mass), Scaled(Damping), Scaled(Stiffness));
    }

    private Complex[] Combine(Complex m, Complex d, Complex k, Complex[] v)
    {
        int n = Order;
        double[] mass = Dense.Columnwise(Mass);
        double[] damping = Dense.Columnwise(Damping);
        double[] stiffness = Dense.Columnwise(Stiffness);
        var product = new Complex[n];
        for (int j = 0, at = 0; j < n; j++)
        {
            var (mv, dv, kv) = (m * v[j], d * v[j], k * v[j]);
            for (int i = 0; i < n; i++, at++)
            {
                product[i] = new Complex(
                    product[i].Real + (mass[at] * mv.Real) + (damping[at] * dv.Real) + (stiffness[at] * kv.Real),
                    product[i].Imaginary + (mass[at] * mv.Imaginary) + (damping[at] * dv.Imaginary) + (stiffness[at] * kv.Imaginary));
            }
        }

        return product;
    }
}
