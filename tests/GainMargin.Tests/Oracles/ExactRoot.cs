using System.Numerics;

namespace GainMargin.Tests.Oracles;

/// <summary>
/// One real root of a square-free polynomial, held by a rational bracket that isolates it: either a single exact point,
/// or an open interval with opposite signs at its ends. The bracket shrinks as more digits are asked for.
/// </summary>
internal sealed class ExactRoot
{
    private readonly ExactPolynomial _polynomial;
    private readonly int _signAtHigh;
    private int _bits;

    public ExactRoot(ExactPolynomial squareFree, Rational low, Rational high)
    {
        (_polynomial, Low, High) = (squareFree, low, high);
        _signAtHigh = squareFree.SignAt(high);
    }

    public Rational Low { get; private set; }

    public Rational High { get; private set; }

    public bool IsExact => Low == High;

    /// <summary>Bisects until the bracket is at most 2^-bits times the larger magnitude of its ends.</summary>
    public ExactRoot Refine(int bits)
    {
        _bits = Math.Max(_bits, bits);
        var tolerance = new Rational(1, BigInteger.One << bits);
        while (High - Low > tolerance * Magnitude)
            Bisect();
        return this;
    }

    /// <summary>Shrinks the bracket to a relative width well below the last one.</summary>
    public void RefineFurther() => Refine(Math.Max(64, 2 * _bits));

    public double ToDouble() => Rational.Midpoint(Refine(64).Low, High).ToDouble();

    /// <summary>Exact sign of another polynomial at this root.</summary>
    public int SignOf(ExactPolynomial polynomial)
    {
        if (IsExact || polynomial.Degree <= 0)
            return polynomial.SignAt(Low);
        var sign = polynomial.SignOn(Low, High);
        if (sign != 0 || IsRootOf(polynomial))
            return sign;
        while (sign == 0)
        {
            RefineFurther();
            sign = polynomial.SignOn(Low, High);
        }
        return sign;
    }

    private Rational Magnitude => Rational.Max(Rational.Abs(Low), Rational.Abs(High));

    private bool IsRootOf(ExactPolynomial polynomial)
    {
        var common = ExactPolynomial.Gcd(_polynomial, polynomial);
        return common.SignAt(Low) * common.SignAt(High) < 0;
    }

    private void Bisect()
    {
        var middle = Rational.Midpoint(Low, High);
        var sign = _polynomial.SignAt(middle);
        if (sign == 0)
            (Low, High) = (middle, middle);
        else if (sign == _signAtHigh)
            High = middle;
        else
            Low = middle;
    }
}
