namespace GainMargin.Numerics;

/// <summary>A frequency at which a loop is real.</summary>
/// <param name="Anchor">Index of the term whose centre the offset is measured from, or −1 for zero.</param>
/// <param name="Offset">Distance from that centre in <c>z</c>.</param>
/// <param name="Square"><c>z = ω²</c>.</param>
/// <param name="SquareUncertainty">Rounding of <c>z</c>.</param>
/// <param name="Real">The loop's value.</param>
/// <param name="RealUncertainty">Its rounding.</param>
/// <param name="RealSlope"><c>R′(z)</c> of the loop.</param>
/// <param name="ImaginarySlope"><c>I′(z)</c> of the loop: where it is positive a pair crosses into growth as the gain rises.</param>
internal readonly record struct AxisRoot(
    int Anchor, double Offset, double Square, double SquareUncertainty, double Real, double RealUncertainty, double RealSlope, double ImaginarySlope);

/// <summary>A band of <c>z = ω²</c> in which rounding leaves open whether the loop is real, with the values its real part takes.</summary>
internal readonly record struct UnresolvedBand(double From, double To, double RealLow, double RealHigh)
{
    /// <summary>A band about the cell; beside a pole the bounds are no numbers, and any value is possible.</summary>
    public static UnresolvedBand Of(double from, double to, double realLow, double realHigh)
        => new(
            from, to, double.IsNaN(realLow) ? double.NegativeInfinity : realLow, double.IsNaN(realHigh) ? double.PositiveInfinity : realHigh);
}
