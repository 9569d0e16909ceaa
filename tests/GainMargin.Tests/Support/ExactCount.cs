using GainMargin.Tests.Oracles;

namespace GainMargin.Tests.Support;

/// <summary>Roots of a closed loop by exact arithmetic on its matrices as they stand in memory.</summary>
internal static class ExactCount
{
    /// <summary><c>det(s²M + sD + K)</c>.</summary>
    public static ExactPolynomial Characteristic(ClosedLoop closed)
    {
        int n = closed.Structure.Dofs.Count;
        var pencil = new ExactPolynomial[n, n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                pencil[i, j] = ExactPolynomial.FromDoubles(closed.Stiffness[i, j], closed.Damping[i, j], closed.Mass[i, j]);
            }
        }

        return ExactPolynomial.Determinant(pencil);
    }

    public static HalfPlaneCount Of(ClosedLoop closed) => HalfPlaneCount.Of(Characteristic(closed));

    /// <summary>The verdict that holds without any rounding.</summary>
    public static StabilityVerdict Verdict(HalfPlaneCount count)
        => count.Unstable > 0 ? StabilityVerdict.Unstable
        : count.Axis > 0 ? StabilityVerdict.Marginal
        : StabilityVerdict.Stable;
}
