using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Which root at the left end of a step is which at the right end: the assignment of least total distance between the two
/// predictions half a step from each end. Where both ends have as many pairs, pairs and real roots are assigned apart.
/// </summary>
internal static class BranchMatch
{
    public static int[] Between(SweepSample left, SweepSample right)
    {
        double half = 0.5 * (right.Gain - left.Gain);
        int n = left.Values.Length;
        int[] match = new int[n];
        int[] leftUpper = Where(left, s => s.Imaginary > 0);
        int[] rightUpper = Where(right, s => s.Imaginary > 0);
        if (leftUpper.Length != rightUpper.Length)
        {
            int[] all = [.. Enumerable.Range(0, n)];
            Assign(match, left, right, half, all, all);
            return match;
        }

        Assign(match, left, right, half, leftUpper, rightUpper);
        foreach (int i in leftUpper)
        {
            match[i + 1] = match[i] + 1;
        }

        Assign(match, left, right, half, Where(left, s => s.Imaginary == 0), Where(right, s => s.Imaginary == 0));
        return match;
    }

    /// <summary>
    /// Whether root <paramref name="i"/> could nearly as well be another root of the other side of the axis: then two
    /// branches that change sides in one step would look as if neither did.
    /// </summary>
    public static bool IsAmbiguous(SweepSample left, SweepSample right, int[] match, int i)
    {
        double half = 0.5 * (right.Gain - left.Gain);
        var ahead = Ahead(left, i, half);
        var chosen = right.Values[match[i]];
        double own = Complex.Abs(ahead - Ahead(right, match[i], -half));
        for (int k = 0; k < right.Values.Length; k++)
        {
            if (k != match[i] && right.Values[k].Imaginary > 0 && right.Values[k].Real * chosen.Real < 0
                && Complex.Abs(ahead - Ahead(right, k, -half)) < 2 * own)
            {
                return true;
            }
        }

        return false;
    }

    private static int[] Where(SweepSample sample, Func<Complex, bool> holds)
        => [.. Enumerable.Range(0, sample.Values.Length).Where(i => holds(sample.Values[i]))];

    private static void Assign(int[] match, SweepSample left, SweepSample right, double half, int[] from, int[] to)
    {
        var ahead = Array.ConvertAll(from, i => Ahead(left, i, half));
        var behind = Array.ConvertAll(to, j => Ahead(right, j, -half));
        double[,] cost = new double[from.Length, to.Length];
        for (int i = 0; i < from.Length; i++)
        {
            for (int j = 0; j < to.Length; j++)
            {
                // The predictions decide; the plain distance only breaks ties where a slope is unbounded.
                cost[i, j] = Complex.Abs(ahead[i] - behind[j]) + (0.1 * Complex.Abs(left.Values[from[i]] - right.Values[to[j]]));
            }
        }

        int[] assigned = Assignment.Solve(cost);
        for (int i = 0; i < from.Length; i++)
        {
            match[from[i]] = to[assigned[i]];
        }
    }

    private static Complex Ahead(SweepSample sample, int i, double step)
    {
        var moved = sample.Values[i] + (step * sample.Slopes[i]);
        return Complex.IsFinite(moved) ? moved : sample.Values[i];
    }
}
