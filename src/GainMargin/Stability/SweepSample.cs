using System.Numerics;

namespace GainMargin;

/// <summary>All roots at one value of a path with their derivatives, in normalised time.</summary>
internal sealed record SweepSample(double Gain, RootSet Roots, Complex[] Slopes)
{
    public Complex[] Values => Roots.Values;

    public double[] Uncertainty => Roots.Uncertainty;

    public int Growing => Enumerable.Range(0, Values.Length).Count(i => Roots.VerdictOf(i) == StabilityVerdict.Unstable);
}
