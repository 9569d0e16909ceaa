namespace GainMargin.Numerics;

/// <summary>
/// A real transfer function on the imaginary axis over a cell of <c>z = ω²</c>: <c>H(iω) = R(z) + iω·I(z)</c>. Products of such
/// functions are pairs again, so a loop is a product of pairs whatever it is made of.
/// </summary>
/// <param name="Real"><c>R(z)</c>.</param>
/// <param name="Imaginary"><c>I(z)</c>.</param>
internal readonly record struct RealPair(Bounded Real, Bounded Imaginary)
{
    public static RealPair operator +(RealPair a, RealPair b) => new(a.Real + b.Real, a.Imaginary + b.Imaginary);

    /// <summary><c>(R₁R₂ − z·I₁I₂, R₁I₂ + I₁R₂)</c>.</summary>
    public static RealPair Product(RealPair a, RealPair b, Bounded z)
        => new((a.Real * b.Real) - (z * (a.Imaginary * b.Imaginary)), (a.Real * b.Imaginary) + (a.Imaginary * b.Real));

    /// <summary>Both parts times one real function.</summary>
    public RealPair Times(Bounded factor) => new(factor * Real, factor * Imaginary);
}

/// <summary>One factor of a loop as a real pair: the ratios of a law, and whatever else is bounded in this way.</summary>
internal interface IPairFactor
{
    /// <summary>The factor over the cell of radius <paramref name="radius"/> about <paramref name="z"/>.</summary>
    RealPair Over(double z, double radius);

    /// <summary>
    /// Taylor coefficients of both parts about <paramref name="z"/>, as many as the spans hold, and bounds of what each leaves out
    /// over the radius.
    /// </summary>
    (double Real, double Imaginary) Expand(double z, double radius, Span<double> real, Span<double> imaginary);

    /// <summary>Bound of the modulus for every frequency whose square is at least <paramref name="z"/>.</summary>
    double GreatestBeyond(double z);
}
