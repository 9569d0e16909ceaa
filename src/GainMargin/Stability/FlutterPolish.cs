using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Newton's method for frequency and gain at once: the defect of the bordered system vanishes, two real equations in two
/// real unknowns.
/// </summary>
/// <remarks>W. Govaerts, Numerical Methods for Bifurcations of Dynamical Equilibria, SIAM 2000, ch. 4 (from memory).</remarks>
internal static class FlutterPolish
{
    private const int MostSteps = 20;

    public static FlutterCrossing? Run(SweepModel sweep, double gain, double omega, Complex[] right, Complex[] left, double least, double greatest)
    {
        var even = sweep.Model.Even;
        double slack = 0.1 * (greatest - least);
        double startOmega = omega;
        double previous = double.PositiveInfinity;
        for (int step = 0; step < MostSteps; step++)
        {
            double[] gains = sweep.GainsAt(gain);
            var closed = even.At(gains);
            var s = new Complex(0, omega);
            var system = BorderedSystem.Solve(closed.At(s), left, right);
            if (system is null)
            {
                return null;
            }

            (right, left) = (system.Right, system.Left);
            var defect = -BorderedSystem.Inner(left, closed.Times(s, right));
            var bySlope = -BorderedSystem.Inner(left, closed.SlopeTimes(s, right));
            var byGain = -BorderedSystem.Inner(left, even.SlopeAt(gains, sweep.SlopesAt(gain)).Times(s, right));
            var alongAxis = Complex.ImaginaryOne * bySlope;
            double determinant = (alongAxis.Real * byGain.Imaginary) - (alongAxis.Imaginary * byGain.Real);
            double dOmega = ((-defect.Real * byGain.Imaginary) + (defect.Imaginary * byGain.Real)) / determinant;
            double dGain = ((-alongAxis.Real * defect.Imaginary) + (alongAxis.Imaginary * defect.Real)) / determinant;
            var slope = -byGain / bySlope;
            double rounding = BorderedSystem.Rounding(even.ModuliAt(gains), omega, left, right) / Complex.Abs(bySlope) / Math.Abs(slope.Real);
            if (!double.IsFinite(dOmega) || !double.IsFinite(dGain) || !double.IsFinite(rounding))
            {
                return null;
            }

            gain += dGain;
            omega += dOmega;
            if (gain < least - slack || gain > greatest + slack || omega < 0.5 * startOmega || omega > 2 * startOmega)
            {
                return null;
            }

            double size = Math.Abs(dGain);
            if (size <= rounding || (size >= 0.5 * previous && size <= Tolerances.Stagnation * rounding))
            {
                double uncertainty = rounding + size + (Tolerances.Epsilon * Math.Abs(gain));
                return gain < least - uncertainty || gain > greatest + uncertainty
                    ? null
                    : new FlutterCrossing(gain, uncertainty, omega, slope, right, left, false);
            }

            previous = size;
        }

        return null;
    }
}
