using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Decides whether a step of a piece from <paramref name="from"/> to <paramref name="to"/> is settled. A branch is settled
/// when it stays clear of the axis, by its cubic Hermite range widened by twice its departure from a parabola, or crosses it
/// once, with slopes of one sign and a small departure.
/// </summary>
internal sealed class StepAssessment(SweepModel sweep, double from, double to)
{
    /// <summary>A departure below this fraction of the rise is small.</summary>
    public const double SmallDeparture = 0.2;

    private readonly HashSet<double> _touched = [];

    /// <summary>Whether a branch of the last step lies on the axis within rounding from end to end.</summary>
    public bool LiesOnAxis { get; private set; }

    /// <summary>Notes a sample at which a branch touches the axis and turns back.</summary>
    public void Touches(SweepSample sample) => _touched.Add(sample.Gain);

    /// <summary>
    /// <see langword="null"/> if every branch of the step is settled, its crossings added to <paramref name="found"/>;
    /// otherwise where to split, as a fraction of the step.
    /// </summary>
    public double? Split(SweepSample left, SweepSample right, int[] match, List<FlutterCrossing> found)
    {
        LiesOnAxis = false;
        double width = right.Gain - left.Gain;
        var crossing = new List<(int From, int To, CubicHermite Curve)>();
        for (int i = 0; i < match.Length; i++)
        {
            int j = match[i];
            var a = left.Values[i];
            var b = right.Values[j];
            if (a.Imaginary < 0 && b.Imaginary <= 0 && (b.Imaginary < 0 || left.Values[i - 1].Imaginary > 0))
            {
                continue;
            }

            if (StaysFar(left, i, right, j, width))
            {
                continue;
            }

            if (a.Imaginary == 0 && b.Imaginary == 0)
            {
                // Within a piece no real root passes zero: a change of sign has gone through a complex pair.
                if (Math.Sign(a.Real) != Math.Sign(b.Real) && !left.IsOnAxis(i) && !right.IsOnAxis(j))
                {
                    return 0.5;
                }

                LiesOnAxis |= left.IsOnAxis(i) && right.IsOnAxis(j);
                continue;
            }

            if (a.Imaginary > 0 && b.Imaginary > 0)
            {
                if (left.IsOnAxis(i) && right.IsOnAxis(j) && left.IsFlat(i, width) && right.IsFlat(j, width))
                {
                    LiesOnAxis = true;
                    continue;
                }

                if (BranchMatch.IsAmbiguous(left, right, match, i))
                {
                    return 0.5;
                }

                var curve = new CubicHermite(a.Real, left.Slopes[i].Real, b.Real, right.Slopes[j].Real, width);
                switch (Judge(curve, EndOf(left, i, width), EndOf(right, j, width), Math.Max(left.Uncertainty[i], right.Uncertainty[j])))
                {
                    case BranchFate.Clear:
                        continue;
                    case BranchFate.Crosses:
                        crossing.Add((i, j, curve));
                        continue;
                    default:
                        return SplitAt(curve);
                }
            }

            if (!PairStaysClear(left, right, match, i, width))
            {
                return 0.5;
            }
        }

        foreach (var (i, j, curve) in crossing)
        {
            if (CrossingLocator.Run(sweep, left, right, i, j, curve) is not { } onset)
            {
                return 0.5;
            }

            found.Add(onset);
        }

        return null;
    }

    private enum BranchFate
    {
        Open,
        Clear,
        Crosses,
    }

    private enum BranchEnd
    {
        /// <summary>Off the axis.</summary>
        Off,

        /// <summary>On the axis and known to leave it there: at the end of a piece with a slope, or where it touches.</summary>
        Leaves,

        /// <summary>On the axis within rounding; nothing is known.</summary>
        On,
    }

    private BranchEnd EndOf(SweepSample sample, int i, double width)
    {
        if (!sample.IsOnAxis(i))
        {
            return BranchEnd.Off;
        }

        bool endsPiece = sample.Gain == from || sample.Gain == to;
        return _touched.Contains(sample.Gain) || (endsPiece && !sample.IsFlat(i, width)) ? BranchEnd.Leaves : BranchEnd.On;
    }

    private static BranchFate Judge(CubicHermite curve, BranchEnd left, BranchEnd right, double uncertainty)
    {
        if (left == BranchEnd.On || right == BranchEnd.On)
        {
            return BranchFate.Open;
        }

        double slack = (2 * curve.Departure) + uncertainty;
        var (least, greatest) = curve.Range();
        bool bothOff = left == BranchEnd.Off && right == BranchEnd.Off;
        if (bothOff && (least - slack > 0 || greatest + slack < 0))
        {
            return BranchFate.Clear;
        }

        double rise = curve.To - curve.From;
        double flat = -0.01 * rise * rise / curve.Width;
        bool steady = curve.SlopeFrom * rise >= flat && curve.SlopeTo * rise >= flat && curve.Departure < SmallDeparture * Math.Abs(rise);
        if (!steady || (left == BranchEnd.Leaves && right == BranchEnd.Leaves))
        {
            return BranchFate.Open;
        }

        return !bothOff ? BranchFate.Clear
            : Math.Sign(curve.From) != Math.Sign(curve.To) ? BranchFate.Crosses
            : BranchFate.Open;
    }

    private static double SplitAt(CubicHermite curve)
    {
        foreach (double t in curve.Extrema())
        {
            if (t is > 0.02 and < 0.98 && t != 0.5)
            {
                return t;
            }
        }

        return 0.5;
    }

    /// <summary>Both ends on one side, and neither slope long enough to reach the axis within twice the step.</summary>
    private static bool StaysFar(SweepSample left, int i, SweepSample right, int j, double width)
    {
        double a = left.Values[i].Real;
        double b = right.Values[j].Real;
        double reach = 2 * width * Math.Max(Math.Abs(left.Slopes[i].Real), Math.Abs(right.Slopes[j].Real));
        return !left.IsOnAxis(i) && !right.IsOnAxis(j) && a * b > 0 && Math.Min(Math.Abs(a), Math.Abs(b)) > reach;
    }

    /// <summary>Two real roots on one side and a pair on the other side of a step: their mean is smooth through the meeting.</summary>
    private static bool PairStaysClear(SweepSample left, SweepSample right, int[] match, int i, double width)
    {
        var (pair, pairIndex, other, partners) = left.Values[i].Imaginary != 0
            ? (left, left.Values[i].Imaginary > 0 ? i : i - 1, right, PartnersAhead(left, right, match, i))
            : (right, right.Values[match[i]].Imaginary > 0 ? match[i] : match[i] - 1, left, PartnersBehind(left, right, match, i));
        if (partners is not var (p, q) || other.Values[p].Imaginary != 0 || other.Values[q].Imaginary != 0)
        {
            return false;
        }

        double side = pair.Values[pairIndex].Real;
        double first = other.Values[p].Real;
        double second = other.Values[q].Real;
        if (Math.Sign(first) != Math.Sign(side) || Math.Sign(second) != Math.Sign(side) || pair.IsOnAxis(pairIndex) || other.IsOnAxis(p) || other.IsOnAxis(q))
        {
            return false;
        }

        double mean = 0.5 * (first + second);
        double meanSlope = 0.5 * (other.Slopes[p].Real + other.Slopes[q].Real);
        var curve = ReferenceEquals(pair, left)
            ? new CubicHermite(side, pair.Slopes[pairIndex].Real, mean, meanSlope, width)
            : new CubicHermite(mean, meanSlope, side, pair.Slopes[pairIndex].Real, width);
        double uncertainty = Math.Max(pair.Uncertainty[pairIndex], Math.Max(other.Uncertainty[p], other.Uncertainty[q]));
        return Judge(curve, BranchEnd.Off, BranchEnd.Off, uncertainty) == BranchFate.Clear;
    }

    private static (int First, int Second)? PartnersAhead(SweepSample left, SweepSample right, int[] match, int i)
    {
        int upper = left.Values[i].Imaginary > 0 ? i : i - 1;
        return right.Values[match[upper]].Imaginary == 0 && right.Values[match[upper + 1]].Imaginary == 0 ? (match[upper], match[upper + 1]) : null;
    }

    private static (int First, int Second)? PartnersBehind(SweepSample left, SweepSample right, int[] match, int i)
    {
        int upper = right.Values[match[i]].Imaginary > 0 ? match[i] : match[i] - 1;
        int first = Array.IndexOf(match, upper);
        int second = Array.IndexOf(match, upper + 1);
        return left.Values[first].Imaginary == 0 && left.Values[second].Imaginary == 0 ? (first, second) : null;
    }
}
