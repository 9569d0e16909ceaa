namespace GainMargin.Tests.Oracles;

/// <summary>Roots of a real polynomial by the sign of their real part, each counted with its multiplicity.</summary>
internal readonly record struct HalfPlaneCount(int Unstable, int Axis, int Stable)
{
    /// <summary>
    /// Writes p(iw) = E(w) + i O(w). The Cauchy index of the lower-degree part over the other one is the excess of stable over
    /// unstable roots, up to sign; their gcd holds the axis roots as real w. Roots symmetric about the origin cancel in the index,
    /// so the singular cases of Routh's array need no special treatment
    /// (Gantmacher, The Theory of Matrices, vol. 2, ch. XV, sec. 2-3, from memory).
    /// </summary>
    public static HalfPlaneCount Of(ExactPolynomial polynomial)
    {
        if (polynomial.IsZero)
            throw new NotSupportedException("Every number is a root of the zero polynomial.");
        var degree = polynomial.Degree;
        var (real, imaginary) = (OnAxis(polynomial, 0), OnAxis(polynomial, 1));
        var chain = degree % 2 == 0
            ? ExactPolynomial.SignedRemainders(real, -imaginary)
            : ExactPolynomial.SignedRemainders(imaginary, real);
        var excess = ExactPolynomial.SignChangesAtInfinity(chain, -1) - ExactPolynomial.SignChangesAtInfinity(chain, +1);
        var axis = chain[^1].CountRootsWithMultiplicity();
        return new((degree - axis - excess) / 2, axis, (degree - axis + excess) / 2);
    }

    private static ExactPolynomial OnAxis(ExactPolynomial polynomial, int parity)
    {
        var coefficients = new Rational[polynomial.Degree + 1];
        for (var k = parity; k < coefficients.Length; k += 2)
            coefficients[k] = (k - parity) % 4 == 0 ? polynomial[k] : -polynomial[k];
        return ExactPolynomial.Create(coefficients);
    }
}
