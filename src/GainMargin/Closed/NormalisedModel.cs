using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>
/// A closed loop in coordinates that do not depend on the user's units. <see cref="Hat"/>: mass-normalised by the Cholesky
/// factor of the mass matrix, <c>M̂ = I</c>, and time-scaled; eigenvalues are computed there. <see cref="Even"/>: scaled by
/// powers of two only, so without rounding; roots are polished and errors bounded there.
/// </summary>
internal sealed class NormalisedModel
{
    private readonly double[] _scale;
    private readonly double[] _evenScale;
    private readonly Matrix<double> _factor;

    public NormalisedModel(LoopedPencil pencil)
    {
        int n = pencil.Order;
        var mass = pencil.Open.Mass;
        _scale = [.. Enumerable.Range(0, n).Select(i => 1 / Math.Sqrt(mass[i, i]))];
        _evenScale = Array.ConvertAll(_scale, PowerOfTwo);
        _factor = Dense.TryCholesky(Congruence(mass, _scale))
            ?? throw new NumericalFailureException("mass normalisation", "The Cholesky factorisation of the mass matrix broke down.");
        var plain = pencil.Transformed(Normalised, b => Dense.LowerSolve(_factor, Scaled(b, _scale)), 1);
        double stiffness = Math.Sqrt(Dense.Norm(plain.Open.Stiffness));
        double damping = Dense.Norm(plain.Open.Damping);
        Rate = PowerOfTwo(stiffness > 0 ? stiffness : damping > 0 ? damping : 1);
        Hat = plain.Transformed(m => m, b => b, Rate);
        if (!Hat.Open.IsFinite)
        {
            throw new NumericalFailureException("mass normalisation", "Stiffness or damping over mass leaves the range of a double: choose other units.");
        }

        Even = pencil.Transformed(m => Congruence(m, _evenScale), b => Scaled(b, _evenScale), Rate);
    }

    public LoopedPencil Hat { get; }

    public LoopedPencil Even { get; }

    /// <summary>Unit of rate <c>ω₀</c>: physical root = <c>ω₀</c> × normalised root.</summary>
    public double Rate { get; }

    /// <summary>From normalised to evenly scaled coordinates.</summary>
    public Complex[] HatToEven(ReadOnlySpan<Complex> hat)
    {
        var x = Dense.LowerTransposeSolve(_factor, hat);
        for (int i = 0; i < x.Length; i++)
        {
            x[i] *= _scale[i] / _evenScale[i];
        }

        return x;
    }

    /// <summary>From evenly scaled to physical coordinates.</summary>
    public Complex[] EvenToPhysical(ReadOnlySpan<Complex> even)
    {
        var q = even.ToArray();
        for (int i = 0; i < q.Length; i++)
        {
            q[i] *= _evenScale[i];
        }

        return q;
    }

    public Matrix<double> HatToEven(Matrix<double> hat)
    {
        var even = Dense.Zero(hat.RowCount, hat.ColumnCount);
        for (int j = 0; j < hat.ColumnCount; j++)
        {
            even.SetColumn(j, [.. HatToEven([.. hat.Column(j).Select(v => new Complex(v, 0))]).Select(v => v.Real)]);
        }

        return even;
    }

    private static double PowerOfTwo(double value) => Math.ScaleB(1, Math.ILogB(value));

    private static Matrix<double> Congruence(Matrix<double> a, double[] scale)
        => DenseMatrix.Create(a.RowCount, a.ColumnCount, (i, j) => scale[i] * a[i, j] * scale[j]);

    private static Matrix<double> Scaled(Matrix<double> a, double[] scale)
        => DenseMatrix.Create(a.RowCount, a.ColumnCount, (i, j) => scale[i] * a[i, j]);

    private Matrix<double> Normalised(Matrix<double> a)
    {
        var half = Dense.LowerSolve(_factor, Congruence(a, _scale));
        return Dense.LowerSolve(_factor, half.Transpose()).Transpose();
    }
}
