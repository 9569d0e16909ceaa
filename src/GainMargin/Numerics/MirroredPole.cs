using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>A term <c>ρ/(z − μ)</c> of a loop that is even in <c>s</c>, with <c>z = −s²</c>; one of each conjugate pair.</summary>
/// <param name="Place"><c>μ</c>, with <c>Im μ ≥ 0</c>.</param>
/// <param name="Residue"><c>ρ</c>, real where <c>μ</c> is.</param>
/// <param name="Uncertainty">Rounding of <c>μ</c>.</param>
internal readonly record struct MirroredPole(Complex Place, Complex Residue, double Uncertainty)
{
    /// <summary>How often the real part counts.</summary>
    public double Weight => Place.Imaginary == 0 ? 1 : 2;
}
