using System.Numerics;

namespace GainMargin.Tests.Oracles;

/// <summary>
/// Univariate polynomial with rational coefficients, kept as integers (ascending powers) over one positive common denominator.
/// Remainders use integer pseudo-division with positive factors, so signs survive (Knuth, TAOCP vol. 2, sec. 4.6.1, from memory).
/// </summary>
internal sealed partial class ExactPolynomial
{
    private readonly BigInteger[] _numerators;
    private readonly BigInteger _denominator;

    private ExactPolynomial(BigInteger[] numerators, BigInteger denominator)
    {
        var length = numerators.Length;
        while (length > 0 && numerators[length - 1].IsZero)
            length--;
        _numerators = length == numerators.Length ? numerators : numerators[..length];
        _denominator = length == 0 ? BigInteger.One : denominator;
        if (_denominator.IsOne)
            return;
        var common = CommonDivisor(_numerators, _denominator);
        _numerators = Array.ConvertAll(_numerators, c => c / common);
        _denominator /= common;
    }

    public static ExactPolynomial Zero { get; } = new([], BigInteger.One);

    public static ExactPolynomial One { get; } = Create(1);

    /// <summary>Minus one for the zero polynomial.</summary>
    public int Degree => _numerators.Length - 1;

    public bool IsZero => _numerators.Length == 0;

    public Rational LeadingCoefficient => this[Degree];

    /// <summary>Coefficient of the given power; zero beyond the degree.</summary>
    public Rational this[int power] => power >= 0 && power <= Degree ? new Rational(_numerators[power], _denominator) : 0;

    /// <summary>Coefficients in ascending powers.</summary>
    public static ExactPolynomial Create(params ReadOnlySpan<Rational> coefficients)
    {
        var denominator = BigInteger.One;
        foreach (var c in coefficients)
            denominator *= c.Denominator / BigInteger.GreatestCommonDivisor(denominator, c.Denominator);
        var numerators = new BigInteger[coefficients.Length];
        for (var i = 0; i < numerators.Length; i++)
            numerators[i] = coefficients[i].Numerator * (denominator / coefficients[i].Denominator);
        return new(numerators, denominator);
    }

    /// <summary>Exact values of the doubles, in ascending powers.</summary>
    public static ExactPolynomial FromDoubles(params double[] coefficients) =>
        Create(Array.ConvertAll(coefficients, Rational.FromDouble));

    public static ExactPolynomial operator +(ExactPolynomial a, ExactPolynomial b)
    {
        var sum = new BigInteger[Math.Max(a._numerators.Length, b._numerators.Length)];
        for (var i = 0; i < sum.Length; i++)
        {
            sum[i] = (i <= a.Degree ? a._numerators[i] * b._denominator : BigInteger.Zero)
                + (i <= b.Degree ? b._numerators[i] * a._denominator : BigInteger.Zero);
        }
        return new(sum, a._denominator * b._denominator);
    }

    public static ExactPolynomial operator -(ExactPolynomial a, ExactPolynomial b) => a + -b;

    public static ExactPolynomial operator -(ExactPolynomial a) =>
        new(Array.ConvertAll(a._numerators, BigInteger.Negate), a._denominator);

    public static ExactPolynomial operator *(ExactPolynomial a, ExactPolynomial b)
    {
        if (a.IsZero || b.IsZero)
            return Zero;
        var product = new BigInteger[a.Degree + b.Degree + 1];
        for (var i = 0; i <= a.Degree; i++)
        {
            for (var j = 0; j <= b.Degree; j++)
                product[i + j] += a._numerators[i] * b._numerators[j];
        }
        return new(product, a._denominator * b._denominator);
    }

    public static ExactPolynomial operator *(Rational a, ExactPolynomial b) => Create(a) * b;

    public static ExactPolynomial operator %(ExactPolynomial a, ExactPolynomial b) => a.DivRem(b).Remainder;

    public ExactPolynomial Derivative() =>
        IsZero ? Zero : new([.. _numerators.Skip(1).Select((c, i) => c * (i + 1))], _denominator);

    public Rational Evaluate(Rational x) =>
        new(ScaledValue(x), _denominator * BigInteger.Pow(x.Denominator, Math.Max(Degree, 0)));

    /// <summary>Sign of the value at a rational point.</summary>
    public int SignAt(Rational x) => ScaledValue(x).Sign;

    /// <summary>The sign of all values on [low, high] if interval arithmetic can tell that they share one, otherwise zero.</summary>
    public int SignOn(Rational low, Rational high)
    {
        var (a, b, unit) = (low.Numerator * high.Denominator, high.Numerator * low.Denominator, low.Denominator * high.Denominator);
        var (least, greatest, scale) = (BigInteger.Zero, BigInteger.Zero, BigInteger.One);
        for (var i = Degree; i >= 0; i--)
        {
            BigInteger[] ends = [least * a, least * b, greatest * a, greatest * b];
            (least, greatest) = (ends.Min() + _numerators[i] * scale, ends.Max() + _numerators[i] * scale);
            scale *= unit;
        }
        return least.Sign == greatest.Sign ? least.Sign : 0;
    }

    /// <summary>Polynomial whose coefficients are the absolute values of these.</summary>
    public ExactPolynomial AbsoluteCoefficients() => new(Array.ConvertAll(_numerators, BigInteger.Abs), _denominator);

    /// <summary>Euclidean division over the rationals.</summary>
    public (ExactPolynomial Quotient, ExactPolynomial Remainder) DivRem(ExactPolynomial divisor)
    {
        var (quotient, remainder, scale) = PseudoDivide(_numerators, divisor._numerators);
        var denominator = scale * _denominator;
        return (new ExactPolynomial(quotient, denominator) * Create(new Rational(divisor._denominator, 1)), new(remainder, denominator));
    }

    /// <summary>Quotient of a division known to leave no remainder.</summary>
    public ExactPolynomial ExactDivide(ExactPolynomial divisor)
    {
        var (quotient, remainder) = DivRem(divisor);
        return remainder.IsZero ? quotient : throw new ArithmeticException("The division leaves a remainder.");
    }

    /// <summary>Positive multiple with coprime integer coefficients.</summary>
    public ExactPolynomial PrimitivePart()
    {
        var content = CommonDivisor(_numerators, BigInteger.Zero);
        return IsZero || (content.IsOne && _denominator.IsOne)
            ? this
            : new(Array.ConvertAll(_numerators, c => c / content), BigInteger.One);
    }

    /// <summary>Greatest common divisor: primitive, with a positive leading coefficient.</summary>
    public static ExactPolynomial Gcd(ExactPolynomial a, ExactPolynomial b)
    {
        var last = (a.Degree >= b.Degree ? SignedRemainders(a, b) : SignedRemainders(b, a))[^1].PrimitivePart();
        return last.LeadingCoefficient.Sign < 0 ? -last : last;
    }

    /// <summary>Determinant by Laplace expansion along the rows, sharing the minors of every set of columns.</summary>
    public static ExactPolynomial Determinant(ExactPolynomial[,] matrix)
    {
        var n = matrix.GetLength(0);
        var minors = new ExactPolynomial[1 << n];
        minors[0] = One;
        for (var columns = 1; columns < minors.Length; columns++)
        {
            var row = BitOperations.PopCount((uint)columns) - 1;
            var sum = Zero;
            for (var j = 0; j < n; j++)
            {
                if ((columns >> j & 1) == 0 || matrix[row, j].IsZero)
                    continue;
                var term = matrix[row, j] * minors[columns & ~(1 << j)];
                var columnsAfter = BitOperations.PopCount((uint)columns >> (j + 1));
                sum = columnsAfter % 2 == 0 ? sum + term : sum - term;
            }
            minors[columns] = sum;
        }
        return minors[^1];
    }

    private BigInteger ScaledValue(Rational x)
    {
        var (value, scale) = (BigInteger.Zero, BigInteger.One);
        for (var i = Degree; i >= 0; i--)
        {
            value = value * x.Numerator + _numerators[i] * scale;
            scale *= x.Denominator;
        }
        return value;
    }

    /// <summary>scale * a = quotient * b + remainder, scale being |leading coefficient of b|^(degree a - degree b + 1).</summary>
    private static (BigInteger[] Quotient, BigInteger[] Remainder, BigInteger Scale) PseudoDivide(BigInteger[] a, BigInteger[] b)
    {
        if (b.Length == 0)
            throw new DivideByZeroException();
        var quotient = new BigInteger[Math.Max(a.Length - b.Length + 1, 0)];
        var remainder = (BigInteger[])a.Clone();
        var factor = BigInteger.Abs(b[^1]);
        var scale = BigInteger.One;
        for (var shift = a.Length - b.Length; shift >= 0; shift--)
        {
            var top = remainder[shift + b.Length - 1] * b[^1].Sign;
            for (var i = 0; i < quotient.Length; i++)
                quotient[i] *= factor;
            for (var i = 0; i < shift + b.Length; i++)
                remainder[i] *= factor;
            for (var i = 0; i < b.Length; i++)
                remainder[shift + i] -= top * b[i];
            quotient[shift] += top;
            scale *= factor;
        }
        return (quotient, remainder, scale);
    }

    private static BigInteger CommonDivisor(BigInteger[] values, BigInteger start)
    {
        var divisor = start;
        foreach (var value in values)
        {
            divisor = BigInteger.GreatestCommonDivisor(divisor, value);
            if (divisor.IsOne)
                break;
        }
        return divisor;
    }
}
