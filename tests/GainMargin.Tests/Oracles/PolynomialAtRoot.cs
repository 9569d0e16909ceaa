namespace GainMargin.Tests.Oracles;

/// <summary>
/// Polynomial in z whose coefficients (ascending powers) are polynomials in the gain, taken at one real algebraic gain.
/// Leading coefficients that vanish there are dropped, so Euclid's algorithm runs exactly over that number field.
/// </summary>
internal sealed class PolynomialAtRoot
{
    private const double Agreement = 1e-14;

    private readonly ExactRoot _gain;
    private readonly ExactPolynomial[] _coefficients;

    public PolynomialAtRoot(ExactRoot gain, IEnumerable<ExactPolynomial> coefficients)
    {
        _gain = gain;
        _coefficients = [.. coefficients.Reverse().SkipWhile(c => gain.SignOf(c) == 0).Reverse()];
    }

    public int Degree => _coefficients.Length - 1;

    public bool IsZero => _coefficients.Length == 0;

    public static PolynomialAtRoot Gcd(PolynomialAtRoot a, PolynomialAtRoot b) => a.IsZero ? b : a.SignedRemainders(b)[^1];

    /// <summary>The distinct negative roots, in ascending order.</summary>
    public IReadOnlyList<double> NegativeRoots()
    {
        var simple = WithoutRepeatedRoots().WithoutZeroRoot();
        if (simple.Degree <= 0)
            return [];
        var chain = simple.SignedRemainders(simple.Derivative());
        var count = ExactPolynomial.SignChanges(chain.Select(p => p.SignAtMinusInfinity()))
            - ExactPolynomial.SignChanges(chain.Select(p => p.SignAtZero()));
        while (count > 0)
        {
            var (low, high) = (simple.NegativeRootsAt(_gain.Low), simple.NegativeRootsAt(_gain.High));
            if (low.Length == count && high.Length == count && low.Zip(high).All(z => Math.Abs(z.First - z.Second) <= -Agreement * z.First))
                return high;
            _gain.RefineFurther();
        }
        return [];
    }

    private PolynomialAtRoot WithoutRepeatedRoots()
    {
        if (Degree <= 0)
            return this;
        var repeated = SignedRemainders(Derivative())[^1];
        return repeated.Degree == 0 ? this : PseudoDivide(repeated).Quotient;
    }

    private PolynomialAtRoot WithoutZeroRoot() => new(_gain, _coefficients.SkipWhile(c => _gain.SignOf(c) == 0));

    private double[] NegativeRootsAt(Rational gain) =>
        [.. ExactPolynomial.Create(Array.ConvertAll(_coefficients, c => c.Evaluate(gain))).Roots()
            .Where(z => z.High <= 0 && z.Low < 0).Select(z => z.ToDouble())];

    private List<PolynomialAtRoot> SignedRemainders(PolynomialAtRoot next)
    {
        List<PolynomialAtRoot> chain = [this];
        while (!next.IsZero)
        {
            chain.Add(next);
            var remainder = chain[^2].PseudoDivide(next).Remainder;
            next = new(_gain, remainder._coefficients.Select(c => -c));
        }
        return chain;
    }

    /// <summary>Division after multiplying this polynomial by a factor that is positive at the gain.</summary>
    private (PolynomialAtRoot Quotient, PolynomialAtRoot Remainder) PseudoDivide(PolynomialAtRoot divisor)
    {
        var quotient = new ExactPolynomial[Math.Max(Degree - divisor.Degree + 1, 0)];
        Array.Fill(quotient, ExactPolynomial.Zero);
        var remainder = (ExactPolynomial[])_coefficients.Clone();
        Rational sign = _gain.SignOf(divisor._coefficients[^1]);
        var factor = sign * divisor._coefficients[^1];
        for (var shift = quotient.Length - 1; shift >= 0; shift--)
        {
            var top = sign * remainder[shift + divisor.Degree];
            for (var i = 0; i < quotient.Length; i++)
                quotient[i] *= factor;
            for (var i = 0; i < remainder.Length; i++)
                remainder[i] *= factor;
            for (var i = 0; i <= divisor.Degree; i++)
                remainder[shift + i] -= top * divisor._coefficients[i];
            quotient[shift] += top;
        }
        return (new(_gain, quotient), new(_gain, remainder));
    }

    private PolynomialAtRoot Derivative() => new(_gain, _coefficients.Skip(1).Select((c, i) => (Rational)(i + 1) * c));

    private int SignAtMinusInfinity() => _gain.SignOf(_coefficients[^1]) * (Degree % 2 == 0 ? 1 : -1);

    private int SignAtZero() => _gain.SignOf(_coefficients[0]);
}
