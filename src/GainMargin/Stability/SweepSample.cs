using System.Numerics;

namespace GainMargin;

/// <summary>All roots at one value of a path with their derivatives, in normalised time.</summary>
internal sealed record SweepSample(double Gain, RootSet Roots, Complex[] Slopes)
{
    public Complex[] Values => Roots.Values;

    public double[] Uncertainty => Roots.Uncertainty;

    /// <summary>Whether a root lies on the imaginary axis within rounding.</summary>
    public bool IsOnAxis(int i) => Math.Abs(Values[i].Real) <= Uncertainty[i];

    /// <summary>Whether the slope moves a root by no more than rounding over a width.</summary>
    public bool IsFlat(int i, double width) => Math.Abs(Slopes[i].Real) * width <= 8 * Uncertainty[i];
}
