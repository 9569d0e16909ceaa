using System.Numerics;

namespace GainMargin.Tests.Oracles;

/// <content>
/// Real roots by Sturm's theorem (Gantmacher, The Theory of Matrices, vol. 2, ch. XV, sec. 2, from memory).
/// </content>
internal sealed partial class ExactPolynomial
{
    private IReadOnlyList<ExactPolynomial>? _sturmSequence;

    /// <summary>
    /// a, b (of no larger degree) and the negated remainders after them, each scaled by a positive factor; the last one is a gcd.
    /// Dividing by the factor known from the subresultants bounds the coefficients without computing contents
    /// (Knuth, TAOCP vol. 2, sec. 4.6.1, algorithm C, from memory; here with absolute values, which keep the signs).
    /// </summary>
    public static IReadOnlyList<ExactPolynomial> SignedRemainders(ExactPolynomial a, ExactPolynomial b)
    {
        var (previous, current) = (a.PrimitivePart(), b.PrimitivePart());
        var (lead, height) = (BigInteger.One, BigInteger.One);
        List<ExactPolynomial> chain = [previous];
        while (!current.IsZero)
        {
            chain.Add(current);
            var gap = previous.Degree - current.Degree;
            var divisor = -lead * BigInteger.Pow(height, gap);
            var remainder = PseudoDivide(previous._numerators, current._numerators).Remainder;
            (previous, current) = (current, new(Array.ConvertAll(remainder, c => c / divisor), BigInteger.One));
            lead = BigInteger.Abs(previous._numerators[^1]);
            if (gap > 0)
                height = BigInteger.Pow(lead, gap) / BigInteger.Pow(height, gap - 1);
        }
        return chain;
    }

    /// <summary>Signed remainders of the polynomial and its derivative.</summary>
    public IReadOnlyList<ExactPolynomial> SturmSequence() => _sturmSequence ??= SignedRemainders(this, Derivative());

    /// <summary>Product of the distinct irreducible factors, up to a positive constant.</summary>
    public ExactPolynomial SquareFreePart()
    {
        if (IsSquareFreeModuloPrime())
            return this;
        var repeated = SturmSequence()[^1].PrimitivePart();
        return repeated.Degree <= 0 ? this : ExactDivide(repeated.LeadingCoefficient.Sign * repeated).PrimitivePart();
    }

    /// <summary>Number of distinct real roots.</summary>
    public int CountRoots() => SignChangesAtInfinity(SturmSequence(), -1) - SignChangesAtInfinity(SturmSequence(), +1);

    /// <summary>Number of distinct real roots in (from, to].</summary>
    public int CountRootsHalfOpen(Rational from, Rational to)
    {
        if (from >= to)
            return 0;
        var chain = SquareFreePart().SturmSequence();
        return SignChangesAt(chain, from) - SignChangesAt(chain, to);
    }

    /// <summary>Number of distinct real roots in (from, to).</summary>
    public int CountRoots(Rational from, Rational to) => CountRootsHalfOpen(from, to) - (from < to && SignAt(to) == 0 ? 1 : 0);

    /// <summary>Number of real roots, each counted with its multiplicity.</summary>
    public int CountRootsWithMultiplicity() => Degree <= 0 ? 0 : CountRoots() + SturmSequence()[^1].CountRootsWithMultiplicity();

    /// <summary>All distinct real roots in ascending order.</summary>
    public IReadOnlyList<ExactRoot> Roots()
    {
        if (Degree <= 0)
            return [];
        // Cauchy's bound.
        var bound = 1 + AbsoluteCoefficients()._numerators.Max() / BigInteger.Abs(_numerators[^1]);
        var limit = new Rational(bound + 1, 1);
        return Roots(-limit, limit);
    }

    /// <summary>
    /// The distinct real roots in (from, to), in ascending order; no bracket has zero inside. Bisects until Descartes' rule leaves
    /// at most one root (Collins and Akritas 1976, from memory): far cheaper here than Sturm's sequence, whose coefficients are long.
    /// </summary>
    public IReadOnlyList<ExactRoot> Roots(Rational from, Rational to)
    {
        List<ExactRoot> roots = [];
        if (Degree <= 0 || from >= to)
            return roots;
        var squareFree = SquareFreePart();
        if (from.Sign < 0 && to.Sign > 0)
            Split(from, 0, to);
        else
            Isolate(from, to);
        return roots;

        void Isolate(Rational low, Rational high)
        {
            var bound = squareFree.DescartesBound(low, high);
            if (bound == 1 && squareFree.SignAt(low) * squareFree.SignAt(high) != 0)
                roots.Add(new(squareFree, low, high));
            else if (bound > 0)
                Split(low, Rational.Midpoint(low, high), high);
        }

        void Split(Rational low, Rational middle, Rational high)
        {
            Isolate(low, middle);
            if (squareFree.SignAt(middle) == 0)
                roots.Add(new(squareFree, middle, middle));
            Isolate(middle, high);
        }
    }

    /// <summary>Sign changes along a sequence of polynomials at a point, zeros left out.</summary>
    public static int SignChangesAt(IEnumerable<ExactPolynomial> sequence, Rational x) => SignChanges(sequence.Select(p => p.SignAt(x)));

    /// <summary>Sign changes at plus or minus infinity, after the sign of <paramref name="direction"/>.</summary>
    public static int SignChangesAtInfinity(IEnumerable<ExactPolynomial> sequence, int direction) =>
        SignChanges(sequence.Select(p => p.LeadingCoefficient.Sign * (direction < 0 && p.Degree % 2 != 0 ? -1 : 1)));

    /// <summary>Sign changes along a sequence of signs, zeros left out.</summary>
    public static int SignChanges(IEnumerable<int> signs)
    {
        var (changes, last) = (0, 0);
        foreach (var sign in signs.Where(s => s != 0))
        {
            if (sign == -last)
                changes++;
            last = sign;
        }
        return changes;
    }

    /// <summary>
    /// Sign changes of (1 + x)^n p((low + high x) / (1 + x)): at least the number of roots in (low, high), and of the same parity.
    /// </summary>
    private int DescartesBound(Rational low, Rational high)
    {
        var numerator = Integers(low.Numerator * high.Denominator, high.Numerator * low.Denominator);
        var denominator = Integers(low.Denominator * high.Denominator, low.Denominator * high.Denominator);
        var (value, scale) = (Zero, One);
        for (var i = Degree; i >= 0; i--)
        {
            value = value * numerator + Integers(_numerators[i]) * scale;
            scale *= denominator;
        }
        return SignChanges(value._numerators.Select(c => c.Sign));

        static ExactPolynomial Integers(params BigInteger[] coefficients) => new(coefficients, BigInteger.One);
    }

    /// <summary>True proves that no factor is repeated; false leaves it open.</summary>
    private bool IsSquareFreeModuloPrime()
    {
        const long prime = int.MaxValue;
        var (a, b) = (Residues(this), Residues(Derivative()));
        if (a.Length != Degree + 1)
            return false;
        while (b.Length > 0)
            (a, b) = (b, Remainder(a, b));
        return a.Length <= 1;

        static long[] Residues(ExactPolynomial p) => Trim(Array.ConvertAll(p._numerators, c => (long)(c % prime)));

        static long[] Trim(long[] p) => p[..(Array.FindLastIndex(p, c => c != 0) + 1)];

        static long[] Remainder(long[] a, long[] b)
        {
            for (var shift = a.Length - b.Length; shift >= 0; shift--)
            {
                var top = a[shift + b.Length - 1];
                for (var i = 0; i < shift + b.Length; i++)
                    a[i] = (a[i] * b[^1] - (i >= shift ? top * b[i - shift] % prime : 0)) % prime;
            }
            return Trim(a);
        }
    }
}
