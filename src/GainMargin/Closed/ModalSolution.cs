using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// All roots of a closed loop at one set of gains, in normalised coordinates, rigid motion split off: the state matrix of
/// the elastic coordinates <c>c</c> and the drift rates <c>u</c> is <c>[0 I 0; −K_cc −D_cc −D_cu; −K_uc −D_uc −D_uu]</c>.
/// Rigid motion known from its left side is split off the transposed matrices, which have the same roots.
/// </summary>
internal sealed class ModalSolution
{
    /// <summary>Stage of the failure at a gain where a root is at infinity.</summary>
    public const string SingularMass = "closed-loop mass";

    private readonly LoopedPencil _model;
    private readonly QuadraticPencil _closed;
    private readonly RigidMotion _rigid;
    private readonly Matrix<double> _k;
    private readonly Matrix<double> _d;
    private readonly Matrix<double>? _inverseMass;

    private ModalSolution(
        LoopedPencil model, QuadraticPencil closed, RigidMotion rigid, Matrix<double> k, Matrix<double> d, Matrix<double>? inverseMass,
        EigenSystem system, Complex[][] right, Complex[][] left)
    {
        _model = model;
        _closed = closed;
        _rigid = rigid;
        _k = k;
        _d = d;
        _inverseMass = inverseMass;
        Values = system.Values;
        Uncertainty = system.Uncertainty;
        Right = right;
        Left = left;
    }

    /// <summary>Roots other than the zero roots of rigid motion.</summary>
    public Complex[] Values { get; }

    /// <summary>First-order rounding bound of each root.</summary>
    public double[] Uncertainty { get; }

    /// <summary>Right null vectors of <c>Q(s)</c>, unit length.</summary>
    public Complex[][] Right { get; }

    /// <summary>Left null vectors of <c>Q(s)</c>, unit length.</summary>
    public Complex[][] Left { get; }

    public static ModalSolution Solve(LoopedPencil model, QuadraticPencil closed, RigidMotion rigid)
    {
        if (!closed.IsFinite)
        {
            throw new NumericalFailureException("closed-loop matrices", "A closed-loop matrix is not finite at this gain.");
        }

        int n = model.Order;
        bool massFeedback = HasMassFeedback(model);
        var inverseMass = massFeedback ? Dense.TrySolve(Side(closed.Mass), Dense.Identity(n)) : null;
        if (massFeedback && inverseMass is null)
        {
            throw new NumericalFailureException(SingularMass, "The closed-loop mass matrix is singular at this gain.");
        }

        var k = inverseMass is null ? Side(closed.Stiffness) : inverseMass * Side(closed.Stiffness);
        var d = inverseMass is null ? Side(closed.Damping) : inverseMass * Side(closed.Damping);
        var system = RealEigen.Solve(StateMatrix(k, d, rigid));
        double lost = inverseMass is null ? 1 : Math.Max(1, Dense.Norm(closed.Mass) * Dense.Norm(inverseMass) / n);
        system = system with { Uncertainty = [.. system.Uncertainty.Select(u => lost * u)] };
        int count = system.Values.Length;
        int nc = rigid.Elastic.ColumnCount;
        var right = new Complex[count][];
        var left = new Complex[count][];
        for (int i = 0; i < count; i++)
        {
            if (system.Values[i].Imaginary < 0)
            {
                (right[i], left[i]) = (Conjugate(right[i - 1]), Conjugate(left[i - 1]));
                continue;
            }

            var x = system.Right[i];
            var q = Dense.Times(rigid.Elastic, x.AsSpan(0, nc));
            var drift = Dense.Times(rigid.Drifting, x.AsSpan(2 * nc));
            var rate = Sum(Dense.Times(rigid.Elastic, x.AsSpan(nc, nc)), drift);
            var v = NullVector(system.Values[i], q, drift, Negated(Sum(Dense.Times(k, q), Dense.Times(d, rate))), rigid);
            var y = system.Left[i];
            var w = Sum(Dense.Times(rigid.Elastic, y.AsSpan(nc, nc)), Dense.Times(rigid.Drifting, y.AsSpan(2 * nc)));
            w = Dense.Unit(inverseMass is null ? w : Dense.TransposeTimes(inverseMass, w));
            (right[i], left[i]) = rigid.OnLeft ? (Conjugate(w), Conjugate(v)) : (v, w);
        }

        return new ModalSolution(model, closed, rigid, k, d, inverseMass, system, right, left);

        Matrix<double> Side(Matrix<double> a) => rigid.OnLeft ? a.Transpose() : a;
    }

    /// <summary><c>wᴴQ_s v</c> of one root.</summary>
    public Complex Slope(int i) => BorderedSystem.Inner(Left[i], _closed.SlopeTimes(Values[i], Right[i]));

    /// <summary>
    /// Derivative of every root where the gains change at given slopes,
    /// <c>s′ = −wᴴ(s²M′ + sD′ + K′)v / wᴴ(2sM + D)v</c>.
    /// </summary>
    public Complex[] Slopes(ReadOnlySpan<double> gains, ReadOnlySpan<double> slopes)
    {
        var c = _model.CouplingSlopeAt(gains, slopes);
        var result = new Complex[Values.Length];
        for (int i = 0; i < result.Length; i++)
        {
            if (Values[i].Imaginary < 0)
            {
                result[i] = Complex.Conjugate(result[i - 1]);
                continue;
            }

            var s = Values[i];
            var driven = Dense.TransposeTimes(_model.Drive, Left[i]);
            var sensed = Dense.TransposeTimes(_model.Sense, Right[i]);
            var sum = Complex.Zero;
            for (int p = 0; p < _model.LoopCount; p++)
            {
                var force = Complex.Zero;
                for (int q = 0; q < _model.LoopCount; q++)
                {
                    force += (c.Stiffness[p, q] + (s * (c.Damping[p, q] + (s * c.Mass[p, q])))) * sensed[q];
                }

                sum -= Complex.Conjugate(driven[p]) * force;
            }

            result[i] = sum / Slope(i);
        }

        return result;
    }

    /// <summary>
    /// Residues of the receptance from actuator to sensor of one loop, <c>(sᵀv)(wᴴb)/wᴴ(2sM + D)v</c>, and the size that the
    /// rounding of each is measured against.
    /// </summary>
    public (Complex Value, double Size)[] Residues(int loop)
    {
        var residues = new (Complex, double)[Values.Length];
        double patterns = _model.Sense.Column(loop).L2Norm() * _model.Drive.Column(loop).L2Norm();
        for (int i = 0; i < residues.Length; i++)
        {
            var slope = Slope(i);
            var sensed = Dense.TransposeTimes(_model.Sense, Right[i])[loop];
            var driven = Complex.Conjugate(Dense.TransposeTimes(_model.Drive, Left[i])[loop]);
            residues[i] = (sensed * driven / slope, patterns / Complex.Abs(slope));
        }

        return residues;
    }

    /// <summary>
    /// The receptance of one loop near zero, <c>A/s + B/s²</c>, through the rigid motion that was split off: with the elastic state
    /// <c>X = (s − A)⁻¹B</c> the sensor sees <c>(C₁ + C₂/s + C₃/s²)X + B₀/s²</c>.
    /// </summary>
    public (double Simple, double Double) ZeroCoefficients(int loop)
    {
        if (_rigid.ZeroRoots == 0)
        {
            return (0, 0);
        }

        var (drive, sense) = _rigid.OnLeft
            ? (_model.Sense.Column(loop), _model.Drive.Column(loop))
            : (_model.Drive.Column(loop), _model.Sense.Column(loop));
        var force = _inverseMass is null ? drive : _inverseMass * drive;
        var (c, r, f) = (_rigid.Elastic, _rigid.Drifting, _rigid.Free);
        var none = Dense.Zero(1, c.ColumnCount);
        var sensed = sense.ToRowMatrix();
        var input = Dense.Zero(c.ColumnCount, 1).Stack(c.TransposeThisAndMultiply(force).ToColumnMatrix());
        var drift = none.Append(none);
        if (r.ColumnCount > 0)
        {
            input = input.Stack(r.TransposeThisAndMultiply(force).ToColumnMatrix());
            drift = drift.Append(sensed * r);
        }

        var free = sensed * f;
        var onFree = free * f.Transpose();
        var acceleration = -(onFree * _k * c).Append(onFree * _d * c);
        acceleration = r.ColumnCount > 0 ? acceleration.Append(-(onFree * _d * r)) : acceleration;
        var once = Dense.TrySolve(StateMatrix(_k, _d, _rigid), input);
        var twice = once is null ? null : Dense.TrySolve(StateMatrix(_k, _d, _rigid), once);
        if (once is null || twice is null)
        {
            throw new NumericalFailureException("rigid motion", "Zero roots remain after rigid motion was split off.");
        }

        double direct = (onFree * force)[0];
        double simple = -(drift * once)[0, 0] - (acceleration * twice)[0, 0];
        double @double = direct - (acceleration * once)[0, 0];
        double rounding = Tolerances.NullSpace(_closed.Order, sense.L2Norm());
        double simpleSize = rounding * (Dense.Norm(input) + Dense.Norm(once) + Dense.Norm(twice));
        double doubleSize = rounding * (force.L2Norm() + Dense.Norm(once));
        return (Math.Abs(simple) <= simpleSize ? 0 : simple, Math.Abs(@double) <= doubleSize ? 0 : @double);
    }

    private static bool HasMassFeedback(LoopedPencil model)
    {
        foreach (var ratio in model.Ratios)
        {
            if (ratio.Acceleration != 0)
            {
                return true;
            }
        }

        return false;
    }

    private static Matrix<double> StateMatrix(Matrix<double> k, Matrix<double> d, RigidMotion rigid)
    {
        var c = rigid.Elastic;
        var r = rigid.Drifting;
        int nc = c.ColumnCount;
        int nr = r.ColumnCount;
        var a = Dense.Zero((2 * nc) + nr, (2 * nc) + nr);
        if (nc > 0)
        {
            a.SetSubMatrix(0, nc, Dense.Identity(nc));
            a.SetSubMatrix(nc, 0, -(c.TransposeThisAndMultiply(k) * c));
            a.SetSubMatrix(nc, nc, -(c.TransposeThisAndMultiply(d) * c));
        }

        if (nr > 0)
        {
            a.SetSubMatrix(2 * nc, 2 * nc, -(r.TransposeThisAndMultiply(d) * r));
        }

        if (nc > 0 && nr > 0)
        {
            a.SetSubMatrix(nc, 2 * nc, -(c.TransposeThisAndMultiply(d) * r));
            a.SetSubMatrix(2 * nc, 0, -(r.TransposeThisAndMultiply(k) * c));
            a.SetSubMatrix(2 * nc, nc, -(r.TransposeThisAndMultiply(d) * c));
        }

        return a;
    }

    /// <summary>
    /// The displacement shape, from elastic displacement <c>Cc</c>, drift rate <c>Ru = s·a</c> and, for free motion, the
    /// acceleration <c>s²·a</c>; at <c>s = 0</c> the part that is unbounded against the others.
    /// </summary>
    private static Complex[] NullVector(Complex s, Complex[] elastic, Complex[] drift, Complex[] acceleration, RigidMotion rigid)
    {
        var free = Dense.Times(rigid.Free, Dense.TransposeTimes(rigid.Free, acceleration));
        var shape = new Complex[elastic.Length];
        for (int i = 0; i < shape.Length; i++)
        {
            shape[i] = (s * s * elastic[i]) + (s * drift[i]) + free[i];
        }

        return Dense.Norm2(shape) > 0 ? Dense.Unit(shape) : Dense.Norm2(drift) > 0 ? Dense.Unit(drift) : Dense.Unit(elastic);
    }

    private static Complex[] Conjugate(Complex[] v) => Array.ConvertAll(v, Complex.Conjugate);

    private static Complex[] Sum(Complex[] a, Complex[] b) => [.. a.Zip(b, (x, y) => x + y)];

    private static Complex[] Negated(Complex[] a) => Array.ConvertAll(a, x => -x);
}
