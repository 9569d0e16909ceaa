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
    private readonly double[] _rest;
    private readonly Matrix<double> _factor;
    private readonly bool _factorIsDiagonal;

    public NormalisedModel(LoopedPencil pencil)
    {
        int n = pencil.Order;
        var mass = pencil.Open.Mass;
        _scale = [.. Enumerable.Range(0, n).Select(i => 1 / Math.Sqrt(mass[i, i]))];
        _evenScale = Array.ConvertAll(_scale, PowerOfTwo);
        _factor = Dense.TryCholesky(Congruence(mass, _scale))
            ?? throw new NumericalFailureException("mass normalisation", "The Cholesky factorisation of the mass matrix broke down.");
        _factorIsDiagonal = Enumerable.Range(0, n).All(i => Enumerable.Range(0, i).All(j => _factor[i, j] == 0));
        _rest = [.. _scale.Select((s, i) => s / _evenScale[i])];
        var plain = pencil.Transformed(a => Normalised(a, _scale), b => Dense.LowerSolve(_factor, Scaled(b, _scale)), 1);
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

    /// <summary>
    /// The closed matrices in normalised coordinates, normalised after the loops were added: what cancels between structure
    /// and loops cancels here too, and what is symmetric bit for bit stays so.
    /// </summary>
    public QuadraticPencil ClosedHat(ReadOnlySpan<double> gains)
    {
        var even = Even.At(gains);
        return new QuadraticPencil(
            ReferenceEquals(even.Mass, Even.Open.Mass) ? Hat.Open.Mass : Normalised(even.Mass, _rest), Normalised(even.Damping, _rest), Normalised(even.Stiffness, _rest));
    }

    /// <summary>
    /// What normalisation itself adds to the error of a root with null vectors <paramref name="w"/> and <paramref name="v"/> in
    /// normalised coordinates, <c>c·ε·n·(|s|²‖M‖+|s|‖D‖+‖K‖)‖v‖‖w‖/|wᴴQ′v|</c> with norms in even coordinates: nothing for a
    /// diagonal mass, much for inertia that is nearly dependent.
    /// </summary>
    public double NormalisationError(Complex s, Complex[] w, Complex[] v, Complex slope, QuadraticPencil even)
    {
        if (_factorIsDiagonal)
        {
            return 0;
        }

        double size = Complex.Abs(s);
        double norm = (size * size * Dense.Norm(even.Mass)) + (size * Dense.Norm(even.Damping)) + Dense.Norm(even.Stiffness);
        return Tolerances.Backward(v.Length, norm) * Dense.Norm2(HatToEven(v)) * Dense.Norm2(HatToEven(w)) / Complex.Abs(slope);
    }

    /// <summary>
    /// Whether a basis in normalised coordinates is annihilated by given rows in even coordinates, row by row within the
    /// rounding of the row's own entries: a soft spring beside stiff ones is no rigid motion.
    /// </summary>
    public bool IsAnnihilated(Matrix<double> rows, Matrix<double> moduli, Matrix<double> hatBasis)
    {
        var basis = HatToEven(hatBasis);
        var residual = rows * basis;
        for (int j = 0; j < basis.ColumnCount; j++)
        {
            double size = Tolerances.NullSpace(rows.ColumnCount, basis.Column(j).AbsoluteMaximum());
            for (int i = 0; i < rows.RowCount; i++)
            {
                if (!(Math.Abs(residual[i, j]) <= size * moduli.Row(i).Sum()))
                {
                    return false;
                }
            }
        }

        return true;
    }

    /// <summary>From normalised to evenly scaled coordinates.</summary>
    public Complex[] HatToEven(ReadOnlySpan<Complex> hat)
    {
        var x = Dense.LowerTransposeSolve(_factor, hat);
        for (int i = 0; i < x.Length; i++)
        {
            x[i] *= _rest[i];
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

    private Matrix<double> Normalised(Matrix<double> a, double[] scale)
    {
        var scaled = Congruence(a, scale);
        if (_factorIsDiagonal)
        {
            return DenseMatrix.Create(a.RowCount, a.RowCount, (i, j) => scaled[i, j] / _factor[i, i] / _factor[j, j]);
        }

        var half = Dense.LowerSolve(_factor, scaled);
        var normalised = Dense.LowerSolve(_factor, half.Transpose()).Transpose();
        return Dense.IsSymmetric(a) ? Dense.SymmetricPart(normalised) : normalised;
    }
}
