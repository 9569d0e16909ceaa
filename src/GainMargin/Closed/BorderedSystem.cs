using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Complex;

namespace GainMargin;

/// <summary>
/// Null vectors of a nearly singular matrix by bordering: <c>[Q b; cᴴ 0][v; μ] = [0; 1]</c> and its adjoint, with
/// <c>bᴴw = 1</c>. The defect <c>μ = −wᴴQv</c> vanishes exactly where <c>Q</c> is singular, and <c>∂μ = −wᴴ(∂Q)v</c>; the
/// product is taken anew from <c>Q</c>, so that the rounding of the factorisation does not enter it.
/// </summary>
/// <remarks>W. Govaerts, Numerical Methods for Bifurcations of Dynamical Equilibria, SIAM 2000, ch. 3 (from memory).</remarks>
internal sealed record BorderedSystem(Complex[] Right, Complex[] Left)
{
    public static BorderedSystem? Solve(Matrix<Complex> q, Complex[] left, Complex[] right)
    {
        int n = q.RowCount;
        double size = Dense.Norm(q);
        size = size > 0 && double.IsFinite(size) ? size : 1;
        var direct = DenseMatrix.Create(n + 1, n + 1, (i, j) => Entry(q, size, left, right, i, j));
        var end = new Complex[n + 1];
        end[n] = 1;
        var v = Dense.TrySolve(direct, end);
        var w = v is null ? null : Dense.TrySolve(direct.ConjugateTranspose(), end);
        return v is null || w is null ? null : new BorderedSystem(v[..n], w[..n]);
    }

    /// <summary><c>wᴴ x</c>.</summary>
    public static Complex Inner(Complex[] w, Complex[] x)
    {
        var sum = Complex.Zero;
        for (int i = 0; i < w.Length; i++)
        {
            sum += Complex.Conjugate(w[i]) * x[i];
        }

        return sum;
    }

    /// <summary>Rounding of <c>wᴴQ(s)v</c>: <c>c·ε·|w|ᵀ(|s|²|M| + |s||D| + |K|)|v|</c> over the moduli of all terms.</summary>
    public static double Rounding(QuadraticPencil moduli, double s, Complex[] w, Complex[] v)
    {
        double sum = 0;
        for (int i = 0; i < w.Length; i++)
        {
            double row = 0;
            for (int j = 0; j < v.Length; j++)
            {
                row += ((s * s * moduli.Mass[i, j]) + (s * moduli.Damping[i, j]) + moduli.Stiffness[i, j]) * Complex.Abs(v[j]);
            }

            sum += Complex.Abs(w[i]) * row;
        }

        return Tolerances.Entry * sum;
    }

    // The border is scaled to the size of the matrix, so that the bordered matrix is as well conditioned as it can be.
    private static Complex Entry(Matrix<Complex> q, double size, Complex[] left, Complex[] right, int i, int j)
    {
        int n = q.RowCount;
        return (i < n, j < n) switch
        {
            (true, true) => q[i, j],
            (true, false) => size * left[i],
            (false, true) => Complex.Conjugate(right[j]),
            _ => Complex.Zero,
        };
    }
}
