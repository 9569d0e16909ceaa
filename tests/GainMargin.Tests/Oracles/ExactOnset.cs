namespace GainMargin.Tests.Oracles;

/// <summary>How roots reach the stability boundary; more than one way can coincide at one gain.</summary>
[Flags]
internal enum ExactOnsetKind
{
    None = 0,

    /// <summary>A root at s = 0.</summary>
    Divergence = 1,

    /// <summary>A pair of roots at s = +/- i omega, omega positive.</summary>
    Flutter = 2,

    /// <summary>The leading coefficient vanishes and a root passes through infinity.</summary>
    ThroughInfinity = 4,
}

/// <summary>A gain at which roots lie on the stability boundary, with the unstable root counts just below and just above it.</summary>
/// <param name="Gain">The gain, rounded to double.</param>
/// <param name="Low">Exact lower end of a bracket of the gain.</param>
/// <param name="High">Exact upper end of that bracket, equal to <paramref name="Low"/> if the gain is known exactly.</param>
/// <param name="Kind">How the boundary is reached.</param>
/// <param name="Frequencies">The distinct positive frequencies of the axis roots, ascending; empty without flutter.</param>
/// <param name="UnstableBelow">Unstable roots between the previous candidate gain and this one.</param>
/// <param name="UnstableAbove">Unstable roots between this gain and the next candidate gain.</param>
internal sealed record ExactOnset(
    double Gain,
    Rational Low,
    Rational High,
    ExactOnsetKind Kind,
    IReadOnlyList<double> Frequencies,
    int UnstableBelow,
    int UnstableAbove)
{
    /// <summary>The lowest flutter frequency; NaN without flutter.</summary>
    public double Omega => Frequencies.Count > 0 ? Frequencies[0] : double.NaN;
}
