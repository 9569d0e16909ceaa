using System.Numerics;
using System.Runtime.Intrinsics;

namespace GainMargin.Numerics;

/// <summary>
/// All roots of <c>f(s) = 1 + δ·L(s) = 0</c> at once: of <c>N = f·Π(s − pole)</c> each approximation moves by
/// <c>−1/(N′/N − Σ1/(z − zⱼ))</c>, with the sum over all others.
/// </summary>
/// <remarks>
/// L. W. Ehrlich, A modified Newton method for polynomials, Comm. ACM 10 (1967) 107–108; O. Aberth, Iteration methods for finding all
/// zeros of a polynomial simultaneously, Math. Comp. 27 (1973) 339–344. A conjugate pair is iterated by its member above the
/// real axis. One that would cross the axis becomes two single points, which are free to go anywhere; when all points have
/// settled, single ones that face each other across the axis become a pair, and the others real.
/// </remarks>
internal sealed class SecularRoots
{
    private const int MaximumRounds = 8;
    private const int MoreSweepsThanRoots = 120;

    /// <summary>A step of this part of the distance to the next approximation leaves no more than one step of Newton's removes.</summary>
    private const double Settling = 1e-3;

    /// <summary>Approximations this many times closer than Newton's step are one: they would part by a factor of three a sweep.</summary>
    private const double Crowding = 1e3;

    /// <summary>Steps are turned in every sixth sweep, so that points leave an axis of symmetry that holds no root for them.</summary>
    private const int SweepsPerTurn = 6;

    /// <summary>Sweeps before it is asked whether steps that do not shrink are rounding.</summary>
    private const int FirstSweeps = 3;

    /// <summary>Part of the modulus by which an approximation is moved off a place that says nothing, as a pole or another one.</summary>
    private const double OffPole = 1e-3;

    /// <summary>Largest part of its frequency by which a term by itself is believed to move its root.</summary>
    private const double LargestShift = 0.1;

    private readonly SecularReduction _reduction;
    private readonly SecularFunction _function;
    private readonly Approximations _pairs;
    private readonly Approximations _singles;

    private SecularRoots(SecularReduction reduction)
    {
        _reduction = reduction;
        _function = new SecularFunction(reduction);
        _pairs = new Approximations((reduction.Order / 2) + 1, arePairs: true);
        _singles = new Approximations(reduction.Order + 1, arePairs: false);
    }

    /// <summary>
    /// The roots at gain <paramref name="delta"/>; <paramref name="start"/> holds the roots at a gain near by. Returns
    /// <see langword="null"/> where data are not finite, the iteration does not converge, or the roots do not add up.
    /// </summary>
    internal static SecularSolution? Find(SecularTerms terms, double delta, Complex[]? start = null)
    {
        var reduction = SecularReduction.Of(terms, delta);
        if (reduction is null || !reduction.IsOrderKnown)
        {
            return null;
        }

        if (start is not null)
        {
            var near = new SecularRoots(reduction);
            if (near.TryStartAt(start) && near.TrySolve())
            {
                return near.Collect();
            }
        }

        var cold = new SecularRoots(reduction);
        cold.StartAtPoles();
        return cold.TrySolve() ? cold.Collect() : null;
    }

    private bool TryStartAt(Complex[] start)
    {
        if (start.Length != _reduction.Order + _reduction.Fixed.Count)
        {
            return false;
        }

        var fixedRoots = new Dictionary<Complex, int>();
        foreach (var root in _reduction.Fixed)
        {
            fixedRoots[root.Value] = fixedRoots.GetValueOrDefault(root.Value) + 1;
        }

        foreach (var root in start)
        {
            var z = Scaled(root, -_reduction.Exponent);
            int count = fixedRoots.GetValueOrDefault(z);
            bool isLast = (2 * _pairs.Count) + _singles.Count == _reduction.Order;
            if (count > 0)
            {
                fixedRoots[z] = count - 1;
            }
            else if (z.Imaginary > 0 && !isLast)
            {
                _pairs.Add(z.Real, z.Imaginary);
            }
            else if (z.Imaginary == 0 && !isLast)
            {
                _singles.Add(z.Real, 0);
            }
        }

        return (2 * _pairs.Count) + _singles.Count == _reduction.Order;
    }

    /// <summary>Each term by itself with <c>f∞</c>, or its pole where others have more to say.</summary>
    private void StartAtPoles()
    {
        double leading = _reduction.Leading;
        foreach (var t in _reduction.Quadratics)
        {
            double residue = Complex.Abs(new Complex((t.E * t.X1) + t.F, t.E * t.Y));
            if (residue > LargestShift * Math.Abs(2 * leading) * t.Y * t.Y && t.Y > OffPole * Math.Abs(t.X1))
            {
                _pairs.Add(t.X1 + (OffPole * t.Y), t.Y);
                continue;
            }

            double rate = Size(t.D, Math.Sqrt(Math.Abs(t.Kappa))) * LargestShift;
            double centre = -(t.D + Math.Clamp(t.E / leading, -rate, rate)) / 2;
            double square = t.Kappa + Math.Clamp(t.F / leading, -rate * rate, rate * rate) - (centre * centre);
            double distance = Math.Sqrt(Math.Abs(square));
            if (square > 0)
            {
                _pairs.Add(centre, distance);
            }
            else
            {
                _singles.Add(centre + distance, 0);
                _singles.Add(centre - distance, 0);
            }
        }

        foreach (var t in _reduction.Simples)
        {
            double shift = t.Residue / leading;
            bool isOwn = Math.Abs(shift) <= LargestShift * Math.Abs(t.Pole);
            _singles.Add(t.Pole - (isOwn ? shift : t.Pole == 0 ? Math.Clamp(shift, -1, 1) : OffPole * t.Pole), 0);
        }
    }

    private bool TrySolve()
    {
        for (int round = 0; round < MaximumRounds; round++)
        {
            if (!TrySettle())
            {
                return false;
            }

            Symmetrise();
            bool allowsTwins = round >= MaximumRounds / 2;
            if (ArePolished(_singles, allowsTwins) & ArePolished(_pairs, allowsTwins))
            {
                return AddsUp();
            }
        }

        return false;
    }

    private bool TrySettle()
    {
        for (int sweep = 0; sweep < _reduction.Order + MoreSweepsThanRoots; sweep++)
        {
            bool isSettled = true;
            for (int i = 0; i < _pairs.Count; i++)
            {
                if (_pairs.IsSettled[i])
                {
                    continue;
                }

                isSettled = false;
                double height = _pairs.Im[i];
                if (!TryMove(_pairs, i, sweep))
                {
                    return false;
                }

                if (!(_pairs.Im[i] > 0))
                {
                    Part(i, height);
                    i--;
                }
            }

            for (int i = 0; i < _singles.Count; i++)
            {
                if (_singles.IsSettled[i])
                {
                    continue;
                }

                isSettled = false;
                if (!TryMove(_singles, i, sweep))
                {
                    return false;
                }
            }

            if (isSettled)
            {
                return true;
            }
        }

        return false;
    }

    /// <summary>The pair that has stepped over the axis from <paramref name="height"/> becomes two points next to the axis.</summary>
    private void Part(int i, double height)
    {
        double centre = _pairs.Re[i];
        double half = Math.Max(height, -_pairs.Im[i]);
        _pairs.Remove(i);
        _singles.Add(centre + half, 0.1 * half);
        _singles.Add(centre - half, -0.1 * half);
    }

    private bool TryMove(Approximations group, int i, int sweep)
    {
        double x = group.Re[i];
        double y = group.Im[i];
        var (lr, li) = _function.LogarithmicDerivative(x, y);
        if (double.IsPositiveInfinity(lr))
        {
            group.Put(i, x, y, 0, true);
            return true;
        }

        group.Hide(i);
        var (ar, ai, closeness) = Others(x, y);
        if (group.ArePairs)
        {
            ai -= 1 / (2 * y);
            closeness += 1 / (4 * y * y);
        }

        if (!double.IsFinite(lr + li))
        {
            return false;
        }

        bool isCrowded = !((ar * ar) + (ai * ai) < Crowding * Crowding * ((lr * lr) + (li * li)));
        double br = isCrowded ? 2 * lr : lr - ar;
        double bi = isCrowded ? 2 * li : li - ai;
        double square = (br * br) + (bi * bi);
        double dx = -br / square;
        double dy = bi / square;
        double step = Math.Sqrt(1 / square);
        if (!double.IsFinite(step) || (isCrowded && step <= Tolerances.Entry * Size(x, y)))
        {
            // Nowhere to go, or two on one root: a step in no particular direction.
            step = OffPole * Size(x, y);
            (dx, dy) = Turned(step, 0);
        }

        if (!isCrowded && step * step * closeness <= Settling * Settling)
        {
            group.Put(i, x + dx, y + dy, step, true);
        }
        else if (!isCrowded && IsRounding(x, y, step, group.LastStep[i], sweep))
        {
            group.Put(i, x, y, step, true);
        }
        else if (sweep % SweepsPerTurn == SweepsPerTurn - 1)
        {
            (dx, dy) = Turned(dx, dy);
            group.Put(i, x + dx, y + dy, step, false);
        }
        else
        {
            group.Put(i, x + dx, y + dy, step, false);
        }

        return true;
    }

    private bool IsRounding(double x, double y, double step, double last, int sweep)
    {
        bool isSlow = sweep >= FirstSweeps && step > 0.1 * last;
        bool isDue = step < Settling * Size(x, y) || sweep % SweepsPerTurn == FirstSweeps;
        return isSlow && isDue && _function.Examine(x, y).IsRoot;
    }

    /// <summary><c>Σ1/(s − zⱼ)</c> and <c>Σ1/|s − zⱼ|²</c>.</summary>
    private (double Re, double Im, double Closeness) Others(double re, double im)
    {
        var sr = Vector256.Create(re);
        var si = Vector256.Create(im);
        Vector256<double> sumRe = default, sumIm = default, closeness = default;
        var xs = _pairs.ReVectors;
        var ys = _pairs.ImVectors;
        for (int i = 0; i < xs.Length; i++)
        {
            var a = sr - xs[i];
            var a2 = a + a;
            var square = a * a;
            var qr = square - ((si - ys[i]) * (si + ys[i]));
            var qi = a2 * si;
            var inverse = Vector256<double>.One / ((qr * qr) + (qi * qi));
            var ur = qr * inverse;
            var ui = qi * inverse;
            sumRe += (a2 * ur) + ((si + si) * ui);
            sumIm += ((si + si) * ur) - (a2 * ui);
            square += (si * si) + (ys[i] * ys[i]);
            closeness += (square + square) * inverse;
        }

        xs = _singles.ReVectors;
        ys = _singles.ImVectors;
        for (int i = 0; i < xs.Length; i++)
        {
            var a = sr - xs[i];
            var b = si - ys[i];
            var inverse = Vector256<double>.One / ((a * a) + (b * b));
            sumRe += a * inverse;
            sumIm -= b * inverse;
            closeness += inverse;
        }

        return (Vector256.Sum(sumRe), Vector256.Sum(sumIm), Vector256.Sum(closeness));
    }

    /// <summary>Points that are nearer to each other's mirror image than to the axis become pairs.</summary>
    private void Symmetrise()
    {
        for (int i = 0; i < _singles.Count; i++)
        {
            double re = _singles.Re[i];
            double im = _singles.Im[i];
            int partner = -1;
            double least = im * im;
            for (int j = i + 1; j < _singles.Count; j++)
            {
                double dx = re - _singles.Re[j];
                double dy = im + _singles.Im[j];
                double distance = (dx * dx) + (dy * dy);
                if (distance < least && im * _singles.Im[j] < 0)
                {
                    (least, partner) = (distance, j);
                }
            }

            if (partner < 0)
            {
                continue;
            }

            _pairs.Add((re + _singles.Re[partner]) / 2, Math.Abs(im - _singles.Im[partner]) / 2);
            _singles.Remove(partner);
            _singles.Remove(i);
            i--;
        }
    }

    private bool ArePolished(Approximations group, bool allowsTwins)
    {
        bool all = true;
        for (int i = group.Count - 1; i >= 0; i--)
        {
            group.IsSettled[i] = TryPolish(group, i, allowsTwins);
            if (!group.IsSettled[i])
            {
                all = false;
                PartTwins(group, i);
            }
        }

        return all;
    }

    /// <summary>A last step of Newton's, and the uncertainty; <see langword="false"/> where an error above rounding remains.</summary>
    private bool TryPolish(Approximations group, int i, bool allowsTwins)
    {
        double x = group.Re[i];
        double y = group.ArePairs ? group.Im[i] : 0;
        var point = _function.Examine(x, y);
        if (!double.IsFinite(point.Uncertainty))
        {
            x += Tolerances.Epsilon * Size(x, y);
            point = _function.Examine(x, y);
        }

        double uncertainty = point.Uncertainty;
        if (!(point.IsRoot || point.Remainder <= uncertainty / 8) || (!allowsTwins && IsTwin(group, i, point)))
        {
            return false;
        }

        if (point.IsSimple)
        {
            x += point.Step.Real;
            y += group.ArePairs ? point.Step.Imaginary : 0;
        }

        if (!group.ArePairs || y > 0)
        {
            (group.Re[i], group.Im[i]) = (x, y);
        }

        group.Uncertainty[i] = uncertainty;
        return true;
    }

    /// <summary>Whether another approximation lies where rounding cannot tell it from this one, although the root is simple.</summary>
    private bool IsTwin(Approximations group, int i, SecularPoint point)
    {
        double x = group.Re[i];
        double y = group.Im[i];
        group.Hide(i);
        double closeness = Others(x, y).Closeness + (group.ArePairs ? 1 / (4 * y * y) : 0);
        group.Re[i] = x;
        double near = 4 * point.Uncertainty;
        return point.IsSimple && !(closeness * near * near < 1);
    }

    private void PartTwins(Approximations group, int i)
    {
        double x = group.Re[i];
        double y = group.Im[i];
        var point = _function.Examine(x, y);
        if (!IsTwin(group, i, point))
        {
            return;
        }

        double part = Math.Min(OffPole * Size(x, y), point.Separation);
        if (group.ArePairs && 2 * y < 4 * point.Uncertainty)
        {
            group.Im[i] = -part;
            Part(i, part);
        }
        else
        {
            var (dx, dy) = Turned(part, 0);
            group.Put(i, x + dx, y + dy, double.PositiveInfinity, false);
        }
    }

    private static (double Re, double Im) Turned(double re, double im) => ((0.8 * re) - (0.6 * im), (0.6 * re) + (0.8 * im));

    private static double Size(double x, double y) => x == 0 && y == 0 ? 1 : Math.Abs(x) + Math.Abs(y);

    private bool AddsUp()
    {
        double sum = 0;
        double allowed = _reduction.TraceError;
        for (int i = 0; i < _pairs.Count; i++)
        {
            sum += 2 * _pairs.Re[i];
            allowed += 2 * (_pairs.Uncertainty[i] + (Tolerances.Entry * Math.Abs(_pairs.Re[i])));
        }

        for (int i = 0; i < _singles.Count; i++)
        {
            sum += _singles.Re[i];
            allowed += _singles.Uncertainty[i] + (Tolerances.Entry * Math.Abs(_singles.Re[i]));
        }

        return Math.Abs(sum - _reduction.Trace) <= allowed;
    }

    private SecularSolution Collect()
    {
        var roots = new List<Complex>(_reduction.Order + _reduction.Fixed.Count);
        var uncertainty = new List<double>(roots.Capacity);
        void Add(Complex root, double bound)
        {
            roots.Add(Scaled(root, _reduction.Exponent));
            uncertainty.Add(Math.ScaleB(bound, _reduction.Exponent));
        }

        for (int i = 0; i < _pairs.Count; i++)
        {
            Add(new Complex(_pairs.Re[i], _pairs.Im[i]), _pairs.Uncertainty[i]);
            Add(new Complex(_pairs.Re[i], -_pairs.Im[i]), _pairs.Uncertainty[i]);
        }

        foreach (var root in _reduction.Fixed.Where(r => r.Value.Imaginary != 0))
        {
            Add(root.Value, root.Uncertainty);
        }

        for (int i = 0; i < _singles.Count; i++)
        {
            Add(_singles.Re[i], _singles.Uncertainty[i]);
        }

        foreach (var root in _reduction.Fixed.Where(r => r.Value.Imaginary == 0))
        {
            Add(root.Value.Real, root.Uncertainty);
        }

        return new SecularSolution([.. roots], [.. uncertainty]);
    }

    private static Complex Scaled(Complex z, int exponent) => new(Math.ScaleB(z.Real, exponent), Math.ScaleB(z.Imaginary, exponent));
}
