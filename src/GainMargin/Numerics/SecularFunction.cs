using System.Numerics;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace GainMargin.Numerics;

/// <summary>Values of a reduced secular function and of the polynomial <c>N = f·Π(s − pole)</c>, four terms at a time.</summary>
/// <remarks>
/// Denominators are evaluated as products, <c>(s − x₁)(s − x₂)</c> or <c>(s − x)² + y²</c>, so that the distance of a point to a
/// pole next to it does not cancel. The width is fixed, so that sums have the same order on every machine.
/// </remarks>
internal sealed class SecularFunction
{
    /// <summary>Where poles cancel in <c>N′/N</c> to less than this part, the nearest one is taken out of the sums.</summary>
    private const double LargestCancellation = 1e-4;

    private readonly SecularReduction _reduction;
    private readonly double _leading;
    private readonly double _leadingModulus;
    private readonly (double Linear, double Square) _excess;
    private readonly Quadratic[] _quadratics;
    private readonly QuadraticModuli[] _quadraticModuli;
    private readonly Simple[] _simples;
    private readonly SimpleModuli[] _simpleModuli;

    public SecularFunction(SecularReduction reduction)
    {
        _reduction = reduction;
        (_leading, _leadingModulus, _excess) = (reduction.Leading, reduction.LeadingModulus, reduction.Excess);
        _quadratics = new Quadratic[Lanes.Vectors(reduction.Quadratics.Count)];
        _quadraticModuli = new QuadraticModuli[_quadratics.Length];
        var terms = MemoryMarshal.Cast<Quadratic, double>(_quadratics.AsSpan());
        var moduli = MemoryMarshal.Cast<QuadraticModuli, double>(_quadraticModuli.AsSpan());
        for (int k = 0; k < Lanes.Width * _quadratics.Length; k++)
        {
            if (k < reduction.Quadratics.Count)
            {
                var t = reduction.Quadratics[k];
                Lanes.Put(terms, k, [t.X1, t.X2, t.Y, t.E, t.F]);
                Lanes.Put(moduli, k, [t.EModulus, t.FModulus, Math.Abs(t.D), Math.Abs(t.Kappa)]);
            }
            else
            {
                Lanes.Put(terms, k, [Lanes.FarPair, Lanes.FarPair, 0, 0, 0]);
            }
        }

        _simples = new Simple[Lanes.Vectors(reduction.Simples.Count)];
        _simpleModuli = new SimpleModuli[_simples.Length];
        terms = MemoryMarshal.Cast<Simple, double>(_simples.AsSpan());
        moduli = MemoryMarshal.Cast<SimpleModuli, double>(_simpleModuli.AsSpan());
        for (int k = 0; k < Lanes.Width * _simples.Length; k++)
        {
            if (k < reduction.Simples.Count)
            {
                var t = reduction.Simples[k];
                Lanes.Put(terms, k, [t.Pole, t.Residue]);
                Lanes.Put(moduli, k, [t.ResidueModulus, Math.Abs(t.Pole)]);
            }
            else
            {
                Lanes.Put(terms, k, [Lanes.FarSingle, 0]);
            }
        }
    }

    /// <summary><c>N′/N = f′/f + Σ1/(s − pole)</c> of the polynomial <c>N = f·Π(s − pole)</c>; infinite where <c>f</c> vanishes.</summary>
    public (double Re, double Im) LogarithmicDerivative(double re, double im)
    {
        var sr = Vector256.Create(re);
        var si = Vector256.Create(im);
        var si2 = si + si;
        Vector256<double> fr = default, fi = default, dr = default, di = default, pr = default, pi = default;
        foreach (ref readonly var t in _quadratics.AsSpan())
        {
            var a1 = sr - t.X1;
            var a2 = sr - t.X2;
            var sum = a1 + a2;
            var qr = (a1 * a2) - ((si - t.Y) * (si + t.Y));
            var qi = si * sum;
            var inverse = Vector256<double>.One / ((qr * qr) + (qi * qi));
            var ur = qr * inverse;
            var ui = qi * inverse;
            var lr = (sum * ur) + (si2 * ui);
            var li = (si2 * ur) - (sum * ui);
            var nr = (t.E * sr) + t.F;
            var ni = t.E * si;
            var tr = (nr * ur) + (ni * ui);
            var ti = (ni * ur) - (nr * ui);
            fr += tr;
            fi += ti;
            dr += (t.E * ur) - ((tr * lr) - (ti * li));
            di -= (t.E * ui) + ((tr * li) + (ti * lr));
            pr += lr;
            pi += li;
        }

        foreach (ref readonly var t in _simples.AsSpan())
        {
            var a = sr - t.Pole;
            var inverse = Vector256<double>.One / ((a * a) + (si * si));
            var ur = a * inverse;
            var ui = si * inverse;
            fr += t.Residue * ur;
            fi -= t.Residue * ui;
            dr -= t.Residue * ((ur * ur) - (ui * ui));
            di += t.Residue * ((ur * ui) + (ur * ui));
            pr += ur;
            pi -= ui;
        }

        double f0 = _leading + Vector256.Sum(fr);
        double f1 = Vector256.Sum(fi);
        double d0 = Vector256.Sum(dr);
        double d1 = Vector256.Sum(di);
        double square = (f0 * f0) + (f1 * f1);
        if (square == 0)
        {
            return (double.PositiveInfinity, 0);
        }

        double p0 = Vector256.Sum(pr);
        double p1 = Vector256.Sum(pi);
        double re1 = p0 + (((d0 * f0) + (d1 * f1)) / square);
        double im1 = p1 + (((d1 * f0) - (d0 * f1)) / square);
        return (re1 * re1) + (im1 * im1) > LargestCancellation * LargestCancellation * ((p0 * p0) + (p1 * p1))
            ? (re1, im1)
            : NextToPole(new Complex(re, im));
    }

    /// <summary>
    /// <c>N′/N</c> with the nearest term <c>n/q</c> taken out of <c>f = R + n/q</c>: <c>(q′R + qR′ + n′)/(qR + n)</c> and the sum over the
    /// other poles.
    /// </summary>
    private (double Re, double Im) NextToPole(Complex s)
    {
        Complex rest = _leading;
        var slope = Complex.Zero;
        var poles = Complex.Zero;
        Complex q = double.PositiveInfinity;
        Complex n = default, q1 = default, n1 = default;
        double nearest = double.PositiveInfinity;
        void Add(double distance, Complex denominator, Complex denominator1, Complex numerator, Complex numerator1)
        {
            if (distance < nearest)
            {
                (nearest, distance) = (distance, nearest);
                (q, denominator) = (denominator, q);
                (q1, denominator1) = (denominator1, q1);
                (n, numerator) = (numerator, n);
                (n1, numerator1) = (numerator1, n1);
            }

            if (distance < double.PositiveInfinity)
            {
                var value = numerator / denominator;
                var change = denominator1 / denominator;
                rest += value;
                slope += (numerator1 / denominator) - (value * change);
                poles += change;
            }
        }

        foreach (var t in _reduction.Quadratics)
        {
            var first = s - new Complex(t.X1, t.Y);
            var second = s - new Complex(t.X2, -t.Y);
            Add(Math.Min(Complex.Abs(first), Complex.Abs(second)), first * second, first + second, (t.E * s) + t.F, t.E);
        }

        foreach (var t in _reduction.Simples)
        {
            Add(Complex.Abs(s - t.Pole), s - t.Pole, 1, t.Residue, 0);
        }

        var sum = (((q1 * rest) + (q * slope) + n1) / ((q * rest) + n)) + poles;
        return (sum.Real, sum.Imaginary);
    }

    /// <summary>Newton's step of <c>N</c>, the error it leaves and what rounding hides at a point.</summary>
    public SecularPoint Examine(double re, double im)
    {
        double modulus = Math.Sqrt((re * re) + (im * im));
        var sr = Vector256.Create(re);
        var si = Vector256.Create(im);
        var size = Vector256.Create(modulus);
        Vector256<double> f0r = default, f0i = default, f1r = default, f1i = default, f2r = default, f2i = default;
        Vector256<double> p0r = default, p0i = default, p1r = default, p1i = default, rounding = default, spread = default;
        for (int i = 0; i < _quadratics.Length; i++)
        {
            ref readonly var t = ref _quadratics[i];
            ref readonly var m = ref _quadraticModuli[i];
            var a1 = sr - t.X1;
            var a2 = sr - t.X2;
            var sum = a1 + a2;
            var qr = (a1 * a2) - ((si - t.Y) * (si + t.Y));
            var qi = si * sum;
            var inverse = Vector256<double>.One / ((qr * qr) + (qi * qi));
            var ur = qr * inverse;
            var ui = -(qi * inverse);
            var lr = (sum * ur) - ((si + si) * ui);
            var li = (sum * ui) + ((si + si) * ur);
            var nr = (t.E * sr) + t.F;
            var ni = t.E * si;
            var tr = (nr * ur) - (ni * ui);
            var ti = (nr * ui) + (ni * ur);
            // T′ = e/q − T·l with l = q′/q, and l′ = 2/q − l².
            var cr = t.E * ur;
            var ci = t.E * ui;
            var dr = cr - ((tr * lr) - (ti * li));
            var di = ci - ((tr * li) + (ti * lr));
            var mr = (ur + ur) - ((lr * lr) - (li * li));
            var mi = (ui + ui) - ((lr * li) + (lr * li));
            f0r += tr;
            f0i += ti;
            f1r += dr;
            f1i += di;
            f2r -= ((cr + dr) * lr) - ((ci + di) * li) + ((tr * mr) - (ti * mi));
            f2i -= ((cr + dr) * li) + ((ci + di) * lr) + ((tr * mi) + (ti * mr));
            p0r += lr;
            p0i += li;
            p1r += mr;
            p1i += mi;
            var root = Vector256.Sqrt(inverse);
            var pole = ((((size + m.D) * size) + m.Kappa) * root);
            rounding += (((m.E * size) + m.F) * root) + (Vector256.Sqrt((tr * tr) + (ti * ti)) * pole);
            spread += pole;
        }

        for (int i = 0; i < _simples.Length; i++)
        {
            ref readonly var t = ref _simples[i];
            ref readonly var m = ref _simpleModuli[i];
            var a = sr - t.Pole;
            var inverse = Vector256<double>.One / ((a * a) + (si * si));
            var ur = a * inverse;
            var ui = -(si * inverse);
            var u2r = (ur * ur) - (ui * ui);
            var u2i = (ur * ui) + (ur * ui);
            f0r += t.Residue * ur;
            f0i += t.Residue * ui;
            f1r -= t.Residue * u2r;
            f1i -= t.Residue * u2i;
            f2r += (t.Residue + t.Residue) * ((u2r * ur) - (u2i * ui));
            f2i += (t.Residue + t.Residue) * ((u2r * ui) + (u2i * ur));
            p0r += ur;
            p0i += ui;
            p1r -= u2r;
            p1i -= u2i;
            var root = Vector256.Sqrt(inverse);
            var pole = (size + m.Pole) * root;
            rounding += (m.Residue * root) + (Vector256.Abs(t.Residue) * root * pole);
            spread += pole;
        }

        var f = new Complex(_leading + Vector256.Sum(f0r), Vector256.Sum(f0i));
        var f1 = new Complex(Vector256.Sum(f1r), Vector256.Sum(f1i));
        var f2 = new Complex(Vector256.Sum(f2r), Vector256.Sum(f2i));
        var p = new Complex(Vector256.Sum(p0r), Vector256.Sum(p0i));
        var p1 = new Complex(Vector256.Sum(p1r), Vector256.Sum(p1i));
        var n1 = f1 + (f * p);
        var n2 = f2 + (2 * f1 * p) + (f * ((p * p) + p1));
        double noise = (Tolerances.Entry * (_leadingModulus + Vector256.Sum(rounding) + (Complex.Abs(f) * Vector256.Sum(spread))))
            + (modulus * (_excess.Linear + (_excess.Square * modulus)));
        return new SecularPoint(-f / n1, Complex.Abs(f), noise, Complex.Abs(n1), Complex.Abs(n2), Tolerances.Entry / 2 * modulus);
    }

    private readonly record struct Quadratic(
        Vector256<double> X1, Vector256<double> X2, Vector256<double> Y, Vector256<double> E, Vector256<double> F);

    private readonly record struct QuadraticModuli(
        Vector256<double> E, Vector256<double> F, Vector256<double> D, Vector256<double> Kappa);

    private readonly record struct Simple(Vector256<double> Pole, Vector256<double> Residue);

    private readonly record struct SimpleModuli(Vector256<double> Residue, Vector256<double> Pole);
}
