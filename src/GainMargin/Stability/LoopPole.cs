using System.Numerics;

namespace GainMargin;

/// <summary>A pole of the loop at the base value, in normalised time; one of each conjugate pair.</summary>
/// <param name="Value">The pole, with <c>Im ≥ 0</c>.</param>
/// <param name="Uncertainty">Its rounding.</param>
/// <param name="IsOnAxis">Whether it lies on the imaginary axis exactly.</param>
/// <param name="Coupling"><c>f</c> of an undamped mode's term <c>f/(s² + κ)</c>.</param>
internal readonly record struct LoopPole(Complex Value, double Uncertainty, bool IsOnAxis, double Coupling = 0)
{
    /// <summary>Roots that it stands for.</summary>
    public int Roots => Value.Imaginary > 0 ? 2 : 1;

    public StabilityVerdict Verdict
        => IsOnAxis ? StabilityVerdict.Marginal
        : Value.Real > Uncertainty ? StabilityVerdict.Unstable
        : Value.Real < -Uncertainty ? StabilityVerdict.Stable
        : StabilityVerdict.Undecided;
}
