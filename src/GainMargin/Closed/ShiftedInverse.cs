using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>
/// <c>Q(σ)⁻¹Q′(σ)</c> and <c>Q(σ)⁻¹M</c> in coordinates in which the rows and columns of <c>Q(σ)</c> are of size one, with a bound
/// <c>E</c> of what is wrong with them: <c>X̂ − X = −Q⁻¹(B − QX̂)</c>.
/// </summary>
/// <remarks>N. J. Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed., SIAM 2002, ch. 7 (from memory).</remarks>
internal sealed class ShiftedInverse
{
    private const double LargestDefect = 0.25;

    private readonly Matrix<double> _inverse;
    private readonly Matrix<double> _solution;
    private readonly Matrix<double> _error;

    private ShiftedInverse(double shift, double condition, Matrix<double> inverse, Matrix<double> solution, Matrix<double> error)
    {
        int n = inverse.RowCount;
        Shift = shift;
        Condition = condition;
        _inverse = inverse;
        double slope = Dense.Norm(Dense.Columns(solution, 0, n));
        double mass = Dense.Norm(Dense.Columns(solution, n, 2 * n));
        Exponent = slope > 0 || mass > 0
            ? Math.Max(slope > 0 ? Math.ILogB(slope) : int.MinValue, mass > 0 ? Math.ILogB(mass) / 2 : int.MinValue)
            : 0;
        _solution = Scaled(solution);
        _error = Scaled(error);
    }

    public double Shift { get; }

    /// <summary><c>‖Q‖‖Q⁻¹‖</c>.</summary>
    public double Condition { get; }

    /// <summary><c>log₂ τ</c>, with which no block is larger than about one.</summary>
    public int Exponent { get; }

    /// <summary>Returns <see langword="null"/> where <c>Q(σ)</c> is singular to working precision.</summary>
    public static ShiftedInverse? At(QuadraticPencil closed, double shift)
    {
        var even = closed.Equilibrated(Sum(closed.Moduli, shift));
        int n = even.Order;
        var moduli = Sum(even.Moduli, shift);
        var matrix = Sum(even, shift);
        var identity = Dense.Identity(n);
        var right = Slope(even, shift).Append(even.Mass);
        if (!even.IsFinite || Dense.TrySolve(matrix, right.Append(identity)) is not { } all)
        {
            return null;
        }

        double rounding = Tolerances.Backward(n, 1) + Tolerances.Entry;
        var solution = Dense.Columns(all, 0, 2 * n);
        var inverse = Dense.Columns(all, 2 * n, 3 * n);
        double defect = Residual(identity, identity, inverse).RowSums().Maximum();
        if (!(defect < LargestDefect))
        {
            return null;
        }

        // Q⁻¹ is the computed inverse times (I − G)⁻¹, with a defect G in which rows sum to less than this.
        var residual = Residual(right, Slope(even.Moduli, shift).Append(even.Moduli.Mass), solution);
        double[] worst = [.. residual.EnumerateColumns().Select(c => c.Maximum() * defect / (1 - defect))];
        var error = DenseMatrix.Create(n, 2 * n, (i, j) => residual[i, j] + worst[j]);
        return new ShiftedInverse(shift, Dense.Norm(matrix) * Dense.Norm(inverse), inverse, solution, error);

        Matrix<double> Residual(Matrix<double> b, Matrix<double> terms, Matrix<double> x)
            => (b - (matrix * x)).PointwiseAbs() + (rounding * (terms + (moduli * x.PointwiseAbs())));
    }

    /// <summary><c>[−Q⁻¹Q′/τ  −Q⁻¹M/τ²; I 0]</c>.</summary>
    public Matrix<double> Companion()
    {
        int n = _inverse.RowCount;
        var companion = Dense.Zero(2 * n, 2 * n);
        companion.SetSubMatrix(0, 0, -_solution);
        companion.SetSubMatrix(n, 0, Dense.Identity(n));
        return companion;
    }

    /// <summary>
    /// <c>|Wᴴ T⁻¹ δC T V| ≤ |W₁ᴴT₁⁻¹Q⁻¹| E T|V|</c> for the error <c>δC</c> of the companion matrix, in coordinates scaled by <c>T</c>.
    /// </summary>
    public Matrix<double> Doubt(EigenSystem system, Matrix<double> right, double[] scale)
    {
        int n = _inverse.RowCount;
        var force = Dense.Zero(2 * n, n);
        var moduli = _inverse.PointwiseAbs();
        for (int i = 0; i < 2 * n; i++)
        {
            Complex[] w = [.. system.Left[i].Take(n).Select((x, k) => x / scale[k])];
            var size = moduli.LeftMultiply(DenseVector.Create(n, k => Complex.Abs(w[k]))) * Tolerances.Backward(n, 1);
            force.SetRow(i, [.. Dense.TransposeTimes(_inverse, w).Select((x, k) => Complex.Abs(x) + size[k])]);
        }

        return force * (_error * DenseMatrix.Create(2 * n, 2 * n, (i, j) => scale[i] * right[i, j]));
    }

    private static Matrix<double> Sum(QuadraticPencil p, double shift) => (shift * shift * p.Mass) + (shift * p.Damping) + p.Stiffness;

    private static Matrix<double> Slope(QuadraticPencil p, double shift) => (2 * shift * p.Mass) + p.Damping;

    private Matrix<double> Scaled(Matrix<double> blocks)
    {
        int n = blocks.RowCount;
        return DenseMatrix.Create(n, 2 * n, (i, j) => Math.ScaleB(blocks[i, j], j < n ? -Exponent : -2 * Exponent));
    }
}
