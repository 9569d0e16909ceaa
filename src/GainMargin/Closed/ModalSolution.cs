using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// All roots of a closed loop at one set of gains, in normalised coordinates, rigid motion split off: the state matrix of
/// the elastic coordinates <c>c</c> and the drift rates <c>u</c> is <c>[0 I 0; −K_cc −D_cc −D_cu; −K_uc −D_uc −D_uu]</c>.
/// </summary>
internal sealed class ModalSolution
{
    private readonly LoopedPencil _model;
    private readonly Complex[][] _driven;
    private readonly Complex[][] _displacement;
    private readonly Complex[][] _velocity;
    private readonly Complex[][] _acceleration;

    private ModalSolution(
        LoopedPencil model, EigenSystem system, Complex[][] right, Complex[][] left,
        Complex[][] driven, Complex[][] displacement, Complex[][] velocity, Complex[][] acceleration)
    {
        _model = model;
        Values = system.Values;
        Uncertainty = system.Uncertainty;
        Right = right;
        Left = left;
        _driven = driven;
        _displacement = displacement;
        _velocity = velocity;
        _acceleration = acceleration;
    }

    /// <summary>Roots other than the zero roots of rigid motion.</summary>
    public Complex[] Values { get; }

    /// <summary>First-order rounding bound of each root.</summary>
    public double[] Uncertainty { get; }

    /// <summary>Right null vectors of <c>Q(s)</c>, unit length.</summary>
    public Complex[][] Right { get; }

    /// <summary>Left null vectors of <c>Q(s)</c>, unit length.</summary>
    public Complex[][] Left { get; }

    public static ModalSolution Solve(LoopedPencil model, ReadOnlySpan<double> gains, RigidMotion rigid)
    {
        var closed = model.At(gains);
        if (!closed.IsFinite)
        {
            throw new NumericalFailureException("closed-loop matrices", "A closed-loop matrix is not finite at this gain.");
        }

        int n = model.Order;
        var inverseMass = ModelHasMassFeedback(model) ? Dense.TrySolve(closed.Mass, Dense.Identity(n)) : null;
        if (inverseMass is null && ModelHasMassFeedback(model))
        {
            throw new NumericalFailureException("closed-loop mass", "The closed-loop mass matrix is singular at this gain.");
        }

        var k = inverseMass is null ? closed.Stiffness : inverseMass * closed.Stiffness;
        var d = inverseMass is null ? closed.Damping : inverseMass * closed.Damping;
        var system = RealEigen.Solve(StateMatrix(k, d, rigid));
        int count = system.Values.Length;
        var right = new Complex[count][];
        var left = new Complex[count][];
        var driven = new Complex[count][];
        var displacement = new Complex[count][];
        var velocity = new Complex[count][];
        var acceleration = new Complex[count][];
        for (int i = 0; i < count; i++)
        {
            int nc = rigid.Elastic.ColumnCount;
            var x = system.Right[i];
            var q = Times(rigid.Elastic, x.AsSpan(0, nc));
            var rate = Sum(Times(rigid.Elastic, x.AsSpan(nc, nc)), Times(rigid.Drifting, x.AsSpan(2 * nc)));
            var second = Negated(Sum(Times(k, q), Times(d, rate)));
            right[i] = NullVector(system.Values[i], q, Times(rigid.Drifting, x.AsSpan(2 * nc)), second, rigid);
            var y = system.Left[i];
            var w = Sum(Times(rigid.Elastic, y.AsSpan(nc, nc)), Times(rigid.Drifting, y.AsSpan(2 * nc)));
            w = inverseMass is null ? w : TransposeTimes(inverseMass, w);
            driven[i] = Array.ConvertAll(TransposeTimes(model.Drive, w), Complex.Conjugate);
            displacement[i] = TransposeTimes(model.Sense, q);
            velocity[i] = TransposeTimes(model.Sense, rate);
            acceleration[i] = TransposeTimes(model.Sense, second);
            left[i] = Unit(w);
        }

        return new ModalSolution(model, system, right, left, driven, displacement, velocity, acceleration);
    }

    /// <summary>
    /// Derivative of every root where the gains change at given slopes,
    /// <c>s′ = −wᴴ(s²M′ + sD′ + K′)v</c> with <c>w</c>, <c>v</c> scaled to <c>wᴴQ_s v = 1</c>.
    /// </summary>
    public Complex[] Slopes(ReadOnlySpan<double> gains, ReadOnlySpan<double> slopes)
    {
        var c = _model.CouplingSlopeAt(gains, slopes);
        var result = new Complex[Values.Length];
        for (int i = 0; i < result.Length; i++)
        {
            var sum = Complex.Zero;
            for (int p = 0; p < _model.LoopCount; p++)
            {
                var force = Complex.Zero;
                for (int q = 0; q < _model.LoopCount; q++)
                {
                    force += (c.Stiffness[p, q] * _displacement[i][q]) + (c.Damping[p, q] * _velocity[i][q]) + (c.Mass[p, q] * _acceleration[i][q]);
                }

                sum -= _driven[i][p] * force;
            }

            result[i] = sum;
        }

        return result;
    }

    private static bool ModelHasMassFeedback(LoopedPencil model)
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
        var free = Times(rigid.Free, TransposeTimes(rigid.Free, acceleration));
        var shape = new Complex[elastic.Length];
        for (int i = 0; i < shape.Length; i++)
        {
            shape[i] = (s * s * elastic[i]) + (s * drift[i]) + free[i];
        }

        return Dense.Norm2(shape) > 0 ? Unit(shape) : Dense.Norm2(drift) > 0 ? Unit(drift) : Unit(elastic);
    }

    private static Complex[] Unit(Complex[] v)
    {
        double length = Dense.Norm2(v);
        return length == 0 ? v : Array.ConvertAll(v, c => c / length);
    }

    private static Complex[] Sum(Complex[] a, Complex[] b) => [.. a.Zip(b, (x, y) => x + y)];

    private static Complex[] Negated(Complex[] a) => Array.ConvertAll(a, x => -x);

    private static Complex[] Times(Matrix<double> a, ReadOnlySpan<Complex> x)
    {
        var y = new Complex[a.RowCount];
        for (int j = 0; j < a.ColumnCount; j++)
        {
            for (int i = 0; i < y.Length; i++)
            {
                y[i] += a[i, j] * x[j];
            }
        }

        return y;
    }

    private static Complex[] TransposeTimes(Matrix<double> a, ReadOnlySpan<Complex> x)
    {
        var y = new Complex[a.ColumnCount];
        for (int j = 0; j < y.Length; j++)
        {
            var sum = Complex.Zero;
            for (int i = 0; i < a.RowCount; i++)
            {
                sum += a[i, j] * x[i];
            }

            y[j] = sum;
        }

        return y;
    }
}
