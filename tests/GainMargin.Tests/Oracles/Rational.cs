using System.Globalization;
using System.Numerics;

namespace GainMargin.Tests.Oracles;

/// <summary>Exact rational number in lowest terms with a positive denominator.</summary>
internal readonly struct Rational : IEquatable<Rational>, IComparable<Rational>
{
    private const int FractionBits = 52;
    private const int ExponentBias = 1075;
    private const int QuotientBits = 62;

    private readonly BigInteger _denominator;

    public Rational(BigInteger numerator, BigInteger denominator)
    {
        if (denominator.IsZero)
            throw new DivideByZeroException();
        var divisor = BigInteger.GreatestCommonDivisor(numerator, denominator) * denominator.Sign;
        Numerator = numerator / divisor;
        _denominator = denominator / divisor;
    }

    public BigInteger Numerator { get; private init; }

    /// <summary>Positive, also for <c>default</c>, which is zero.</summary>
    public BigInteger Denominator => _denominator.IsZero ? BigInteger.One : _denominator;

    public int Sign => Numerator.Sign;

    public bool IsZero => Numerator.IsZero;

    public static implicit operator Rational(int value) => new(value, BigInteger.One);

    public static Rational operator +(Rational a, Rational b) =>
        new(a.Numerator * b.Denominator + b.Numerator * a.Denominator, a.Denominator * b.Denominator);

    public static Rational operator -(Rational a, Rational b) => a + -b;

    public static Rational operator -(Rational a) => a with { Numerator = -a.Numerator };

    public static Rational operator *(Rational a, Rational b) => new(a.Numerator * b.Numerator, a.Denominator * b.Denominator);

    public static Rational operator /(Rational a, Rational b) => new(a.Numerator * b.Denominator, a.Denominator * b.Numerator);

    public static bool operator ==(Rational a, Rational b) => a.Equals(b);

    public static bool operator !=(Rational a, Rational b) => !a.Equals(b);

    public static bool operator <(Rational a, Rational b) => a.CompareTo(b) < 0;

    public static bool operator >(Rational a, Rational b) => a.CompareTo(b) > 0;

    public static bool operator <=(Rational a, Rational b) => a.CompareTo(b) <= 0;

    public static bool operator >=(Rational a, Rational b) => a.CompareTo(b) >= 0;

    /// <summary>The exact value of a finite double.</summary>
    public static Rational FromDouble(double value)
    {
        if (!double.IsFinite(value))
            throw new ArgumentOutOfRangeException(nameof(value), value, "A finite number is required.");
        var bits = BitConverter.DoubleToInt64Bits(value);
        var exponent = (int)(bits >> FractionBits) & 0x7FF;
        var mantissa = bits & ((1L << FractionBits) - 1);
        if (exponent == 0)
            exponent = 1;
        else
            mantissa |= 1L << FractionBits;
        BigInteger signed = value < 0 ? -mantissa : mantissa;
        var shift = exponent - ExponentBias;
        return shift >= 0 ? new(signed << shift, BigInteger.One) : new(signed, BigInteger.One << -shift);
    }

    public static Rational Abs(Rational value) => value.Sign < 0 ? -value : value;

    public static Rational Max(Rational a, Rational b) => a >= b ? a : b;

    public static Rational Midpoint(Rational a, Rational b) =>
        new(a.Numerator * b.Denominator + b.Numerator * a.Denominator, 2 * a.Denominator * b.Denominator);

    /// <summary>Rounds to nearest, ties to even; a subnormal result may be one unit in the last place off.</summary>
    public double ToDouble()
    {
        if (IsZero)
            return 0.0;
        var numerator = BigInteger.Abs(Numerator);
        var shift = QuotientBits - (int)(numerator.GetBitLength() - Denominator.GetBitLength());
        var quotient = shift >= 0
            ? BigInteger.DivRem(numerator << shift, Denominator, out var remainder)
            : BigInteger.DivRem(numerator, Denominator << -shift, out remainder);
        var sticky = remainder.IsZero ? 0UL : 1UL;
        return Sign * Math.ScaleB((ulong)quotient | sticky, -shift);
    }

    public int CompareTo(Rational other) => (Numerator * other.Denominator).CompareTo(other.Numerator * Denominator);

    public bool Equals(Rational other) => Numerator == other.Numerator && Denominator == other.Denominator;

    public override bool Equals(object? obj) => obj is Rational other && Equals(other);

    public override int GetHashCode() => HashCode.Combine(Numerator, Denominator);

    public override string ToString() => string.Create(CultureInfo.InvariantCulture, $"{Numerator}/{Denominator}");
}
