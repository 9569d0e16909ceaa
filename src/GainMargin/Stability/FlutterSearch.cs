using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A stretch of the range that the narrowest step or the budget left open.</summary>
internal readonly record struct OpenStretch(double From, double To);

/// <summary>An accepted step with the identity of each root across it.</summary>
internal sealed record SweepStep(SweepSample Left, SweepSample Right, int[] Match);

/// <summary>
/// Adaptive search of one piece of the range in which no root passes through zero or infinity. A step is accepted when
/// each branch either stays clear of the axis, by its cubic Hermite range widened by twice its departure from a parabola,
/// or crosses it once, with slopes of one sign and a small departure; otherwise it is split.
/// </summary>
internal sealed class FlutterSearch
{
    private const double SmallDeparture = 0.2;
    private const double SharpTouch = 1e-4;

    private readonly SweepModel _sweep;
    private readonly SweepOptions _options;
    private readonly Action<double> _settled;
    private readonly HashSet<double> _touched = [];
    private double _pieceFrom;
    private double _pieceTo;

    public FlutterSearch(SweepModel sweep, SweepOptions options, Action<double> settled)
    {
        _sweep = sweep;
        _options = options;
        _settled = settled;
    }

    public List<FlutterCrossing> Crossings { get; } = [];

    public List<OpenStretch> Open { get; } = [];

    public List<SweepStep> Steps { get; } = [];

    private bool BudgetSpent { get; set; }

    public void Run(double from, double to)
    {
        (_pieceFrom, _pieceTo) = (from, to);
        var left = _sweep.SampleAt(from);
        double[] grid = SweepGrid.Between(from, to, _sweep.Path.Range.Width, _options.MaximumStep);
        for (int i = 1; i < grid.Length; i++)
        {
            BudgetSpent |= _sweep.Decompositions >= _options.MaximumDecompositions;
            if (BudgetSpent)
            {
                Open.Add(new OpenStretch(left.Gain, to));
                return;
            }

            bool last = i == grid.Length - 1;
            var right = last ? _sweep.SampleAt(to) : SampleOffAxis(grid[i], SweepGrid.Aside * (grid[i] - grid[i - 1]));
            Resolve(left, right);
            left = right;
            _settled(left.Gain);
        }
    }

    private void Resolve(SweepSample first, SweepSample last)
    {
        var pending = new Stack<(SweepSample Left, SweepSample Right)>();
        pending.Push((first, last));
        while (pending.Count > 0)
        {
            var (left, right) = pending.Pop();
            int[] match = BranchMatch.Between(left, right);
            var found = new List<FlutterCrossing>();
            double? split = Assess(left, right, match, found);
            if (split is null)
            {
                Crossings.AddRange(found);
                Steps.Add(new SweepStep(left, right, match));
                continue;
            }

            double width = right.Gain - left.Gain;
            BudgetSpent |= _sweep.Decompositions >= _options.MaximumDecompositions;
            double at = left.Gain + (split.Value * width);
            if (BudgetSpent || width <= _options.MinimumStep * _sweep.Path.Range.Width || at <= left.Gain || at >= right.Gain)
            {
                Open.Add(new OpenStretch(left.Gain, right.Gain));
                Steps.Add(new SweepStep(left, right, match));
                continue;
            }

            var middle = split == 0.5 ? SampleOffAxis(at, 0.1 * width) : AtExtremum(left, right, at);
            pending.Push((middle, right));
            pending.Push((left, middle));
        }
    }

    /// <summary>A sample at which no pair lies on the axis within rounding by accident: moved aside where one does.</summary>
    private SweepSample SampleOffAxis(double at, double aside)
    {
        var sample = _sweep.SampleAt(at);
        if (!CrossesAt(sample, aside))
        {
            return sample;
        }

        var moved = _sweep.SampleAt(at + (0.618 * aside));
        return CrossesAt(moved, aside) ? sample : moved;
    }

    /// <summary>
    /// A sample at a predicted extremum. A pair found on the axis there, with both ends of the step on one side, touches it
    /// and turns back; any other pair on the axis is an accident, and the sample is moved aside.
    /// </summary>
    private SweepSample AtExtremum(SweepSample left, SweepSample right, double at)
    {
        var sample = _sweep.SampleAt(at);
        double width = right.Gain - left.Gain;
        int[] fromLeft = BranchMatch.Between(left, sample);
        int[] toRight = BranchMatch.Between(sample, right);
        var touches = new List<FlutterCrossing>();
        for (int k = 0; k < sample.Values.Length; k++)
        {
            int before = Array.IndexOf(fromLeft, k);
            int after = toRight[k];
            if (sample.Values[k].Imaginary <= 0 || !OnAxis(sample, k) || (OnAxis(left, before) && OnAxis(right, after)))
            {
                continue;
            }

            double turn = Math.Min(Math.Abs(left.Values[before].Real), Math.Abs(right.Values[after].Real));
            bool turns = left.Values[before].Real * right.Values[after].Real > 0 && !OnAxis(left, before) && !OnAxis(right, after);
            if (!turns || Math.Abs(sample.Slopes[k].Real) * width > SmallDeparture * turn || sample.Uncertainty[k] > SharpTouch * turn)
            {
                return SampleOffAxis(at, 0.1 * width);
            }

            touches.Add(Touch(sample, k, turn / width / width));
        }

        Crossings.AddRange(touches);
        _touched.Add(touches.Count > 0 ? sample.Gain : double.NaN);
        return sample;
    }

    private FlutterCrossing Touch(SweepSample sample, int k, double curvature)
        => new(
            sample.Gain, Math.Sqrt(sample.Uncertainty[k] / curvature), sample.Values[k].Imaginary, sample.Slopes[k],
            _sweep.Model.HatToEven(sample.Roots.Solution.Right[k]), _sweep.Model.HatToEven(sample.Roots.Solution.Left[k]), true);

    private static bool CrossesAt(SweepSample sample, double width)
        => Enumerable.Range(0, sample.Values.Length).Any(i => sample.Values[i].Imaginary > 0 && OnAxis(sample, i) && !IsFlat(sample, i, width));

    private static bool OnAxis(SweepSample sample, int i) => Math.Abs(sample.Values[i].Real) <= sample.Uncertainty[i];

    private static bool IsFlat(SweepSample sample, int i, double width)
        => Math.Abs(sample.Slopes[i].Real) * width <= 8 * sample.Uncertainty[i];

    /// <summary>
    /// <see langword="null"/> if every branch of the step is settled, its crossings added to <paramref name="found"/>;
    /// otherwise where to split, as a fraction of the step.
    /// </summary>
    private double? Assess(SweepSample left, SweepSample right, int[] match, List<FlutterCrossing> found)
    {
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
                if (Math.Sign(a.Real) != Math.Sign(b.Real) && !OnAxis(left, i) && !OnAxis(right, j))
                {
                    return 0.5;
                }

                continue;
            }

            if (a.Imaginary > 0 && b.Imaginary > 0)
            {
                if (OnAxis(left, i) && OnAxis(right, j) && IsFlat(left, i, width) && IsFlat(right, j, width))
                {
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
            if (Locate(left, right, i, j, curve) is not { } onset)
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
        if (!OnAxis(sample, i))
        {
            return BranchEnd.Off;
        }

        bool endsPiece = sample.Gain == _pieceFrom || sample.Gain == _pieceTo;
        return _touched.Contains(sample.Gain) || (endsPiece && !IsFlat(sample, i, width)) ? BranchEnd.Leaves : BranchEnd.On;
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
        return a * b > 0 && Math.Min(Math.Abs(a), Math.Abs(b)) > reach;
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
        if (Math.Sign(first) != Math.Sign(side) || Math.Sign(second) != Math.Sign(side) || OnAxis(pair, pairIndex) || OnAxis(other, p) || OnAxis(other, q))
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

    /// <summary>Brackets the crossing by the branch's own sign and polishes it; <see langword="null"/> if the branch is lost.</summary>
    private FlutterCrossing? Locate(SweepSample left, SweepSample right, int i, int j, CubicHermite curve)
    {
        for (int attempt = 0; attempt < 8; attempt++)
        {
            double t = Root(curve);
            double at = left.Gain + (t * curve.Width);
            if (!(at > left.Gain && at < right.Gain))
            {
                return null;
            }

            var middle = _sweep.SampleAt(at);
            int k = BranchMatch.Between(left, middle)[i];
            if (middle.Values[k].Imaginary <= 0 || BranchMatch.Between(middle, right)[k] != j)
            {
                return null;
            }

            var onset = FlutterPolish.Run(
                _sweep, at, middle.Values[k].Imaginary,
                _sweep.Model.HatToEven(middle.Roots.Solution.Right[k]), _sweep.Model.HatToEven(middle.Roots.Solution.Left[k]), left.Gain, right.Gain);
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
