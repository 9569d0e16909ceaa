using System.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Complex;

namespace GainMargin;

/// <summary>The matrices of <c>Q(s) = s²M + sD + K</c>, each <c>n×n</c>.</summary>
internal sealed record QuadraticPencil(Matrix<double> Mass, Matrix<double> Damping, Matrix<double> Stiffness)
{
    public int Order => Mass.RowCount;

    public bool IsFinite => Mass.ForAll(double.IsFinite) && Damping.ForAll(double.IsFinite) && Stiffness.ForAll(double.IsFinite);

    public Matrix<Complex> At(Complex s)
    {
        var square = s * s;
        return DenseMatrix.Create(Order, Order, (i, j) => (square * Mass[i, j]) + (s * Damping[i, j]) + Stiffness[i, j]);
    }

    /// <summary><c>Q(s) v</c>.</summary>
    public Complex[] Times(Complex s, Complex[] v) => Combine(s * s, s, 1, v);

    /// <summary><c>Q′(s) v = (2sM + D) v</c>.</summary>
    public Complex[] SlopeTimes(Complex s, Complex[] v) => Combine(2 * s, 1, 0, v);

    private Complex[] Combine(Complex m, Complex d, Complex k, Complex[] v)
    {
        var product = new Complex[Order];
        for (int i = 0; i < Order; i++)
        {
            var sum = Complex.Zero;
            for (int j = 0; j < Order; j++)
            {
                sum += ((m * Mass[i, j]) + (d * Damping[i, j]) + (k * Stiffness[i, j])) * v[j];
            }

            product[i] = sum;
        }

        return product;
    }
}
