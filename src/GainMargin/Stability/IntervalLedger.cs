using System.Collections.Immutable;
using System.Numerics;

namespace GainMargin;

/// <summary>Lays onsets and open stretches along the range and judges each interval between them on its own.</summary>
internal sealed class IntervalLedger
{
    private const double BesideOnset = 0.05;
    private const int RefiningSteps = 6;

    private readonly SweepModel _sweep;
    private readonly ImmutableArray<SweepSample> _samples;
    private readonly List<OnsetDraft> _drafts;
    private readonly List<OpenStretch> _stretches;

    public IntervalLedger(SweepModel sweep, ImmutableArray<SweepSample> samples, List<OnsetDraft> drafts, List<OpenStretch> stretches)
    {
        _sweep = sweep;
        _samples = samples;
        _drafts = drafts;
        _stretches = stretches;
    }

    public ImmutableArray<StabilityOnset> Onsets { get; private set; } = [];

    public ImmutableArray<GainInterval> Intervals { get; private set; } = [];

    public void Run()
    {
        var range = _sweep.Path.Range;
        var cuts = Cuts();
        var judged = new List<(double From, double To, RootCount Count, StabilityVerdict Inside, bool Open)>();
        for (int i = 0; i + 1 < cuts.Count; i++)
        {
            double from = cuts[i].To;
            double to = cuts[i + 1].From;
            var (count, verdict, _) = _sweep.JudgeAt(0.5 * (from + to), ownMotion: false);
            judged.Add((from, to, count, verdict, false));
            if (cuts[i + 1].IsStretch)
            {
                judged.Add((cuts[i + 1].From, cuts[i + 1].To, default, StabilityVerdict.Undecided, true));
            }
        }

        Onsets = [.. _drafts.Select(d => Counted(d, judged))];
        var atFrom = _sweep.JudgeAt(range.From, ownMotion: true).Verdict;
        var atTo = _sweep.JudgeAt(range.To, ownMotion: true).Verdict;
        var intervals = ImmutableArray.CreateBuilder<GainInterval>(judged.Count);
        for (int i = 0; i < judged.Count; i++)
        {
            var piece = judged[i];
            var lower = i == 0 ? atFrom : AtCut(piece.From, judged[i - 1], piece);
            var upper = i == judged.Count - 1 ? atTo : AtCut(piece.To, piece, judged[i + 1]);
            intervals.Add(new GainInterval(
                piece.From, piece.To, lower, piece.Inside, upper, piece.Count,
                piece.Open ? null : LeastDamped(piece.From, piece.To, lower != piece.Inside, upper != piece.Inside)));
        }

        Intervals = intervals.ToImmutable();
    }

    private sealed record Cut(double From, double To, bool IsStretch);

    /// <summary>Points and stretches that end an interval, ascending and apart; the ends of the range are the first and last.</summary>
    private List<Cut> Cuts()
    {
        var range = _sweep.Path.Range;
        var cuts = new List<Cut> { new(range.From, range.From, false) };
        var inner = _drafts.Select(d => new Cut(d.Gain, d.Gain, false)).Concat(_stretches.Select(s => new Cut(s.From, s.To, true)));
        foreach (var cut in inner.OrderBy(c => c.From).ThenByDescending(c => c.To))
        {
            if (cut.From <= cuts[^1].To && cuts.Count > 1)
            {
                continue;
            }

            if (cuts.Count > 1 && !cut.IsStretch && !cuts[^1].IsStretch && AreTogether(cuts[^1].From, cut.From))
            {
                continue;
            }

            cuts.Add(cut);
        }

        cuts.Add(new Cut(range.To, range.To, false));
        return cuts;
    }

    private bool AreTogether(double a, double b)
    {
        var first = _drafts.First(d => d.Gain == a);
        return _drafts.First(d => d.Gain == b).IsTogetherWith(first);
    }

    private static StabilityOnset Counted(OnsetDraft draft, List<(double From, double To, RootCount Count, StabilityVerdict Inside, bool Open)> judged)
    {
        var below = judged.LastOrDefault(p => !p.Open && p.To <= draft.Gain + draft.Uncertainty, judged[0]).Count;
        var above = judged.FirstOrDefault(p => !p.Open && p.From >= draft.Gain - draft.Uncertainty, judged[^1]).Count;
        var direction = Math.Sign(above.Growing - below.Growing) switch
        {
            > 0 => CrossingDirection.Destabilising,
            < 0 => CrossingDirection.Restabilising,
            _ => CrossingDirection.Touching,
        };
        return new StabilityOnset(
            draft.Gain, draft.Uncertainty, draft.Kind, direction, draft.Frequency, draft.Slope, draft.BackwardError,
            draft.Right, draft.Left, below, above, draft.Energy);
    }

    /// <summary>
    /// At an onset the crossing root is on the axis: marginal, unless another root grows on both sides. At infinity and at
    /// the ends of an open stretch nothing is claimed.
    /// </summary>
    private StabilityVerdict AtCut(
        double gain,
        (double From, double To, RootCount Count, StabilityVerdict Inside, bool Open) left,
        (double From, double To, RootCount Count, StabilityVerdict Inside, bool Open) right)
    {
        if (left.Open || right.Open)
        {
            return _sweep.JudgeAt(gain, ownMotion: true).Verdict;
        }

        var here = _drafts.Where(d => Math.Abs(d.Gain - gain) <= d.Uncertainty).ToArray();
        if (here.Any(d => d.Kind == OnsetKind.ThroughInfinity) || left.Count.Undecided > 0 || right.Count.Undecided > 0)
        {
            return StabilityVerdict.Undecided;
        }

        return Math.Min(left.Count.Growing, right.Count.Growing) > 0 ? StabilityVerdict.Unstable : StabilityVerdict.Marginal;
    }

    /// <summary>Least damping, a little away from an end that has another verdict: damping vanishes there by itself.</summary>
    private ClosestApproach LeastDamped(double from, double to, bool insetFrom, bool insetTo)
    {
        double low = from + (insetFrom ? BesideOnset * (to - from) : 0);
        double high = to - (insetTo ? BesideOnset * (to - from) : 0);
        var approaches = _samples.Where(s => s.Gain > low && s.Gain < high).Select(s => Worst(s.Gain, s.Roots)).ToList();
        approaches.Insert(0, At(low));
        approaches.Add(At(high));
        int least = 0;
        for (int i = 1; i < approaches.Count; i++)
        {
            least = approaches[i].DampingRatio < approaches[least].DampingRatio ? i : least;
        }

        var best = approaches[least];
        if (least == 0 || least == approaches.Count - 1)
        {
            return best;
        }

        double left = approaches[least - 1].Gain;
        double right = approaches[least + 1].Gain;
        for (int step = 0; step < RefiningSteps; step++)
        {
            bool wideLeft = best.Gain - left > right - best.Gain;
            double at = best.Gain + (0.381966 * (wideLeft ? left - best.Gain : right - best.Gain));
            var trial = At(at);
            if (trial.DampingRatio < best.DampingRatio)
            {
                (left, right) = wideLeft ? (left, best.Gain) : (best.Gain, right);
                best = trial;
            }
            else
            {
                (left, right) = wideLeft ? (at, right) : (left, at);
            }
        }

        return best;
    }

    private ClosestApproach At(double gain) => Worst(gain, _sweep.RootsAt(gain));

    private ClosestApproach Worst(double gain, RootSet roots)
    {
        int worst = -1;
        double least = double.PositiveInfinity;
        for (int i = 0; i < roots.Values.Length; i++)
        {
            var s = roots.Values[i];
            double ratio = roots.VerdictOf(i) == StabilityVerdict.Undecided ? 0 : -s.Real / Complex.Abs(s);
            (worst, least) = ratio < least ? (i, ratio) : (worst, least);
        }

        return new ClosestApproach(gain, worst < 0 ? Complex.Zero : roots.Values[worst] * _sweep.Model.Rate, worst < 0 ? 0 : least);
    }
}
