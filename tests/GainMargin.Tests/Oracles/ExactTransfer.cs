using System.Numerics;

namespace GainMargin.Tests.Oracles;

/// <summary>
/// A real rational function of s, exact, and its two parts on the imaginary axis: L(iω) = R(z) + iω·I(z) with z = ω².
/// </summary>
internal sealed class ExactTransfer
{
    private const int Enough = 120;

    private readonly ExactPolynomial _numerator, _denominator;
    private readonly ExactPolynomial _evenTop, _oddTop, _even, _odd;

    private ExactTransfer(ExactPolynomial numerator, ExactPolynomial denominator)
    {
        (_numerator, _denominator) = (numerator, denominator);
        (_evenTop, _oddTop) = OnAxis(numerator);
        (_even, _odd) = OnAxis(denominator);
    }

    /// <summary>Numerator of the imaginary part, with further roots where the denominator has some on the axis.</summary>
    public ExactPolynomial ImaginaryTop => _oddTop * _even - _evenTop * _odd;

    public static ExactTransfer Constant(double value) => new(ExactPolynomial.FromDoubles(value), ExactPolynomial.One);

    /// <summary>p + v·s + a·s².</summary>
    public static ExactTransfer Ratios(double position, double rate, double acceleration) =>
        new(ExactPolynomial.FromDoubles(position, rate, acceleration), ExactPolynomial.One);

    /// <summary>(e·s + f)/(s² + d·s + κ).</summary>
    public static ExactTransfer Second(double e, double f, double d, double kappa) =>
        new(ExactPolynomial.FromDoubles(f, e), ExactPolynomial.FromDoubles(kappa, d, 1));

    /// <summary>r/(s − λ).</summary>
    public static ExactTransfer First(double residue, double pole) =>
        new(ExactPolynomial.FromDoubles(residue), ExactPolynomial.FromDoubles(-pole, 1));

    /// <summary>r/(s − λ) and its conjugate.</summary>
    public static ExactTransfer Pair(Complex residue, Complex pole)
    {
        var (x, y) = (Rational.FromDouble(pole.Real), Rational.FromDouble(pole.Imaginary));
        var (u, v) = (Rational.FromDouble(residue.Real), Rational.FromDouble(residue.Imaginary));
        return new(ExactPolynomial.Create(-2 * (u * x + v * y), 2 * u), ExactPolynomial.Create(x * x + y * y, -2 * x, 1));
    }

    public static ExactTransfer operator +(ExactTransfer a, ExactTransfer b) =>
        new(a._numerator * b._denominator + b._numerator * a._denominator, a._denominator * b._denominator);

    public static ExactTransfer operator *(ExactTransfer a, ExactTransfer b) => new(a._numerator * b._numerator, a._denominator * b._denominator);

    public Rational Real(Rational z) =>
        (_evenTop.Evaluate(z) * _even.Evaluate(z) + z * _oddTop.Evaluate(z) * _odd.Evaluate(z)) / Square(z);

    public Rational Imaginary(Rational z) =>
        (_oddTop.Evaluate(z) * _even.Evaluate(z) - _evenTop.Evaluate(z) * _odd.Evaluate(z)) / Square(z);

    /// <summary>Squares of the positive frequencies, no poles, at which the loop is real, in ascending order.</summary>
    public IReadOnlyList<ExactRoot> RealPoints()
    {
        var top = ImaginaryTop;
        if (top.IsZero)
            throw new InvalidOperationException("The loop is real at every frequency.");
        return [.. top.Roots().Where(r => r.Low.Sign >= 0 && r.High.Sign > 0 && !IsPole(r.Refine(Enough)))];
    }

    /// <summary>The real part at a real point, for roots that are not nearly poles.</summary>
    public double RealAt(ExactRoot root)
    {
        root.Refine(Enough);
        return Real(Rational.Midpoint(root.Low, root.High)).ToDouble();
    }

    private bool IsPole(ExactRoot root) => root.SignOf(_even) == 0 && root.SignOf(_odd) == 0;

    private Rational Square(Rational z)
    {
        var (even, odd) = (_even.Evaluate(z), _odd.Evaluate(z));
        return even * even + z * odd * odd;
    }

    private static (ExactPolynomial Even, ExactPolynomial Odd) OnAxis(ExactPolynomial p)
    {
        return (Part(0), Part(1));

        ExactPolynomial Part(int first) => ExactPolynomial.Create(
            [.. Enumerable.Range(0, p.Degree / 2 + 1).Select(m => (m % 2 == 0 ? 1 : -1) * p[2 * m + first])]);
    }
}
