using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Locates the one crossing of a branch whose real part changes sign over a step.</summary>
internal static class CrossingLocator
{
    /// <summary>Brackets the crossing by the branch's own sign and polishes it; <see langword="null"/> if the branch is lost.</summary>
    public static FlutterCrossing? Run(SweepModel sweep, SweepSample left, SweepSample right, int i, int j, CubicHermite curve)
    {
        for (int attempt = 0; attempt < 8; attempt++)
        {
            double t = Root(curve);
            double at = left.Gain + (t * curve.Width);
            if (!(at > left.Gain && at < right.Gain))
            {
                return null;
            }

            var middle = sweep.SampleAt(at);
            int k = BranchMatch.Between(left, middle)[i];
            if (middle.Values[k].Imaginary <= 0 || BranchMatch.Between(middle, right)[k] != j)
            {
                return null;
            }

            var onset = FlutterPolish.Run(
                sweep, at, middle.Values[k].Imaginary,
                sweep.Model.HatToEven(middle.Roots.Solution.Right[k]), sweep.Model.HatToEven(middle.Roots.Solution.Left[k]), left.Gain, right.Gain);
            if (onset is not null && Math.Sign(onset.Slope.Real) == Math.Sign(curve.To - curve.From) && IsSameBranch(onset, middle, k, curve.Width))
            {
                return onset;
            }

            if (Math.Sign(middle.Values[k].Real) == Math.Sign(curve.From))
            {
                (left, i) = (middle, k);
            }
            else
            {
                (right, j) = (middle, k);
            }

            curve = new CubicHermite(
                left.Values[i].Real, left.Slopes[i].Real, right.Values[j].Real, right.Slopes[j].Real, right.Gain - left.Gain);
        }

        return null;
    }

    /// <summary>The polished root must be nearer to the branch's prediction than to any other root's.</summary>
    private static bool IsSameBranch(FlutterCrossing onset, SweepSample from, int k, double width)
    {
        double step = Math.Clamp(onset.Gain - from.Gain, -width, width);
        var target = new Complex(0, onset.Omega);
        double own = Complex.Abs(from.Values[k] + (step * from.Slopes[k]) - target);
        for (int i = 0; i < from.Values.Length; i++)
        {
            if (i != k && from.Values[i].Imaginary > 0 && Complex.Abs(from.Values[i] + (step * from.Slopes[i]) - target) < own - from.Uncertainty[k])
            {
                return false;
            }
        }

        return true;
    }

    private static double Root(CubicHermite curve)
    {
        double low = 0;
        double high = 1;
        int sign = Math.Sign(curve.From);
        for (int step = 0; step < 60; step++)
        {
            double middle = 0.5 * (low + high);
            if (Math.Sign(curve.At(middle)) == sign)
            {
                low = middle;
            }
            else
            {
                high = middle;
            }
        }

        return Math.Clamp(0.5 * (low + high), 1e-6, 1 - 1e-6);
    }
}
