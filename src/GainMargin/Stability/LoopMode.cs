namespace GainMargin;

/// <summary>A mode that damping does not couple to others, <c>f/(s² + d·s + κ)</c> from actuator to sensor, and how well it is known.</summary>
/// <param name="D"><c>d = 2ζω</c>.</param>
/// <param name="Kappa"><c>κ = ω²</c>.</param>
/// <param name="F"><c>f</c>, zero where the loop does not see the mode.</param>
/// <param name="DampingError">Rounding of <c>d</c>.</param>
/// <param name="StiffnessError">Rounding of <c>κ</c>.</param>
/// <param name="CouplingError">Rounding of <c>f</c>.</param>
/// <param name="IsSeen">Whether <c>f</c> can be told from zero.</param>
internal readonly record struct LoopMode(
    double D, double Kappa, double F, double DampingError, double StiffnessError, double CouplingError, bool IsSeen);
