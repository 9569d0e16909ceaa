using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A root improved on the evenly scaled matrices, with a componentwise bound that no choice of units changes.</summary>
internal sealed record PolishedRoot(Complex Value, double Uncertainty, Complex[] Right, Complex[] Left);

/// <summary>Newton's method on the bordered system for one root at fixed gains.</summary>
/// <remarks>Componentwise bounds: N. J. Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed., SIAM 2002, ch. 7 (from memory).</remarks>
internal static class RootPolish
{
    private const int MostSteps = 12;

    public static PolishedRoot? Run(QuadraticPencil closed, QuadraticPencil moduli, Complex start, Complex[] right, Complex[] left)
    {
        var s = start;
        double previous = double.PositiveInfinity;
        for (int step = 0; step < MostSteps; step++)
        {
            var system = BorderedSystem.Solve(closed.At(s), left, right);
            if (system is null)
            {
                return null;
            }

            var slope = -BorderedSystem.Inner(system.Left, closed.SlopeTimes(s, system.Right));
            var change = BorderedSystem.Inner(system.Left, closed.Times(s, system.Right)) / slope;
            double size = Complex.Abs(change);
            double rounding = BorderedSystem.Rounding(moduli, Complex.Abs(s), system.Left, system.Right) / Complex.Abs(slope);
            if (!double.IsFinite(size) || !double.IsFinite(rounding))
            {
                return null;
            }

            right = Dense.Unit(system.Right);
            left = Dense.Unit(system.Left);
            s += change;
            if (size <= rounding || (size >= 0.5 * previous && size <= Tolerances.Stagnation * rounding))
            {
                return new PolishedRoot(s, rounding + size, right, left);
            }

            previous = size;
        }

        return null;
    }
}
