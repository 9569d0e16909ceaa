using System.Collections.Immutable;
using System.Numerics;

namespace GainMargin;

/// <summary>Lays onsets and stretches along the range and judges each interval between them on its own.</summary>
internal sealed class IntervalLedger
{
    private const double BesideOnset = 0.05;
    private const int RefiningSteps = 6;
    private const int FewestSamples = 3;

    private readonly SweepModel _sweep;
    private readonly ImmutableArray<SweepSample> _samples;
    private readonly List<OnsetDraft> _drafts;
    private readonly List<GainStretch> _open;
    private readonly List<GainStretch> _onAxis;
    private readonly bool _trusted;

    /// <param name="sweep">The path made ready.</param>
    /// <param name="samples">Samples taken.</param>
    /// <param name="drafts">Onsets found.</param>
    /// <param name="open">Stretches left open.</param>
    /// <param name="onAxis">Stretches with a pair on the axis.</param>
    /// <param name="trusted">Whether counts at one gain may speak for an interval; if not, no interval is given a verdict.</param>
    public IntervalLedger(
        SweepModel sweep, ImmutableArray<SweepSample> samples, List<OnsetDraft> drafts, List<GainStretch> open, List<GainStretch> onAxis,
        bool trusted = true)
    {
        _trusted = trusted;
        _sweep = sweep;
        _samples = samples;
        _drafts = drafts;
        _open = open;
        _onAxis = onAxis;
    }

    private enum CutKind
    {
        /// <summary>An end of the range, or of a stretch along which a pair lies on the axis.</summary>
        Edge,
        Onset,
        Open,
    }

    private sealed record Cut(double From, double To, CutKind Kind);

    private sealed record Piece(double From, double To, RootCount Count, StabilityVerdict Inside, bool IsOpen);

    public ImmutableArray<StabilityOnset> Onsets { get; private set; } = [];

    public ImmutableArray<GainInterval> Intervals { get; private set; } = [];

    /// <summary>
    /// Whether the counts are those that the onsets and samples demand: a pair changes the count by two in its direction, a
    /// divergence by one, and no sample inside an interval counts otherwise than its middle. If not, an onset was not seen.
    /// </summary>
    public bool AddsUp { get; private set; } = true;

    public void Run()
    {
        var range = _sweep.Path.Range;
        var pieces = Pieces();
        Onsets = [.. _drafts.Select(d => Counted(d, pieces))];
        AddsUp = OnsetsAddUp() && pieces.All(SamplesAgree);
        var atFrom = _sweep.JudgeAt(range.From);
        var atTo = _sweep.JudgeAt(range.To);
        var intervals = ImmutableArray.CreateBuilder<GainInterval>(pieces.Count);
        for (int i = 0; i < pieces.Count; i++)
        {
            var piece = pieces[i];
            var lower = i == 0 ? atFrom : AtCut(piece.From, pieces[i - 1], piece);
            var upper = i == pieces.Count - 1 ? atTo : AtCut(piece.To, piece, pieces[i + 1]);
            bool insetFrom = i > 0 || IsApart(lower, piece);
            bool insetTo = i < pieces.Count - 1 || IsApart(upper, piece);
            intervals.Add(new GainInterval(
                piece.From, piece.To, lower, piece.Inside, upper, piece.Count,
                piece.IsOpen ? null : Extreme(piece, insetFrom, insetTo, LeastDamped),
                piece.Inside == StabilityVerdict.Unstable ? Extreme(piece, insetFrom, insetTo, Fastest) : null));
        }

        Intervals = intervals.ToImmutable();
    }

    private bool OnsetsAddUp()
    {
        for (int i = 0; i < _drafts.Count;)
        {
            int last = i;
            while (last + 1 < _drafts.Count && _drafts[last + 1].IsTogetherWith(_drafts[i]))
            {
                last++;
            }

            var group = _drafts.GetRange(i, last - i + 1);
            int change = Onsets[last].Above.Growing - Onsets[i].Below.Growing;
            int undecided = Math.Max(Onsets[last].Above.Undecided, Onsets[i].Below.Undecided);
            bool pairs = group.All(d => d.Kind == OnsetKind.Flutter);
            bool isOdd = group.Count == 1 && group[0].Kind == OnsetKind.Divergence;
            int demanded = group.Sum(d => 2 * Math.Sign(d.Slope ?? 0));
            if (undecided == 0 && ((pairs && change != demanded) || (isOdd && Math.Abs(change) != 1)))
            {
                return false;
            }

            i = last + 1;
        }

        return true;
    }

    private bool SamplesAgree(Piece piece)
    {
        return piece.IsOpen || piece.Count.Undecided > 0 || Inside(piece.From, piece.To)
            .Select(s => s.Roots.Count).All(c => c.Undecided > 0 || c.Growing == piece.Count.Growing);
    }

    /// <summary>
    /// Whether a sample inside counts otherwise than the middle, be it only because roots there cannot be told from the axis: a
    /// crossing among them may have gone unseen.
    /// </summary>
    private bool IsDoubted(double from, double to, RootCount count) => Inside(from, to).Any(s => s.Roots.Count.Growing != count.Growing);

    /// <summary>Samples between two gains, but for those so near to an end that is no end of the range that they count with it.</summary>
    private IEnumerable<SweepSample> Inside(double from, double to)
    {
        var range = _sweep.Path.Range;
        double beside = SweepRun.Inset * range.Width;
        double low = from == range.From ? from : from + beside;
        double high = to == range.To ? to : to - beside;
        return _samples.Where(s => s.Gain > low && s.Gain < high);
    }

    private static bool IsApart(StabilityVerdict end, Piece piece) => end != piece.Inside || end == StabilityVerdict.Undecided;

    private List<Piece> Pieces()
    {
        var cuts = Cuts();
        var pieces = new List<Piece>();
        for (int i = 0; i + 1 < cuts.Count; i++)
        {
            var piece = Judged(cuts[i], cuts[i + 1]);
            bool joins = cuts[i].Kind == CutKind.Edge && pieces.Count > 0 && !pieces[^1].IsOpen
                && pieces[^1].Inside == piece.Inside && pieces[^1].Count.Growing == piece.Count.Growing;
            if (joins)
            {
                pieces[^1] = piece with { From = pieces[^1].From };
            }
            else
            {
                pieces.Add(piece);
            }

            if (cuts[i + 1].Kind == CutKind.Open)
            {
                pieces.Add(new Piece(cuts[i + 1].From, cuts[i + 1].To, default, StabilityVerdict.Undecided, true));
            }
        }

        return pieces;
    }

    private Piece Judged(Cut below, Cut above)
    {
        var (from, to) = (below.To, above.From);
        double middle = 0.5 * (from + to);
        var count = _sweep.CountAt(middle);
        var verdict = count.Verdict;
        bool onAxis = _onAxis.Any(s => s.From <= middle && s.To >= middle);
        if (verdict != StabilityVerdict.Unstable && (onAxis || verdict == StabilityVerdict.Undecided))
        {
            double inset = 1e-9 * (to - from);
            verdict = _sweep.TheoremOver(
                below.Kind == CutKind.Onset ? from + inset : from, above.Kind == CutKind.Onset ? to - inset : to);
        }

        return new Piece(from, to, count, _trusted && !IsDoubted(from, to, count) ? verdict : StabilityVerdict.Undecided, false);
    }

    /// <summary>What ends an interval, ascending and apart; the ends of the range are the first and last.</summary>
    private List<Cut> Cuts()
    {
        var range = _sweep.Path.Range;
        double near = 4 * SweepRun.Inset * range.Width;
        var cuts = new List<Cut> { new(range.From, range.From, CutKind.Edge) };
        var hard = _drafts.Select(d => new Cut(d.Gain, d.Gain, CutKind.Onset)).Concat(_open.Select(s => new Cut(s.From, s.To, CutKind.Open)));
        foreach (var cut in hard.OrderBy(c => c.From).ThenByDescending(c => c.To))
        {
            bool covered = cuts.Count > 1 && cut.From <= cuts[^1].To;
            bool together = cut.Kind == CutKind.Onset && cuts[^1].Kind == CutKind.Onset && AreTogether(cuts[^1].From, cut.From);
            if (!covered && !together)
            {
                cuts.Add(cut);
            }
        }

        cuts.Add(new Cut(range.To, range.To, CutKind.Edge));
        foreach (double edge in _onAxis.SelectMany(s => new[] { s.From, s.To }))
        {
            if (cuts.All(c => edge < c.From - near || edge > c.To + near))
            {
                cuts.Add(new Cut(edge, edge, CutKind.Edge));
            }
        }

        return [.. cuts.OrderBy(c => c.From)];
    }

    private bool AreTogether(double a, double b)
    {
        var first = _drafts.First(d => d.Gain == a);
        return _drafts.First(d => d.Gain == b).IsTogetherWith(first);
    }

    private StabilityOnset Counted(OnsetDraft draft, List<Piece> pieces)
    {
        var below = pieces.LastOrDefault(p => !p.IsOpen && p.To <= draft.Gain + draft.Uncertainty, pieces[0]).Count;
        var above = pieces.FirstOrDefault(p => !p.IsOpen && p.From >= draft.Gain - draft.Uncertainty, pieces[^1]).Count;
        var direction = Math.Sign(above.Growing - below.Growing) switch
        {
            > 0 => CrossingDirection.Destabilising,
            < 0 => CrossingDirection.Restabilising,
            _ => CrossingDirection.Touching,
        };
        return new StabilityOnset(
            draft.Gain, draft.Uncertainty, draft.Kind, direction, draft.Frequency, draft.Slope, draft.BackwardError,
            draft.Right, draft.Left, below, above, draft.Energy, TimeToDouble(draft, pieces, above.Growing - below.Growing));
    }

    /// <summary>
    /// Time in which the motion doubles one decibel past the onset, if the interval there reaches that far and the motion is the
    /// only one that grows.
    /// </summary>
    private double? TimeToDouble(OnsetDraft draft, List<Piece> pieces, int change)
    {
        double gain = Decibel.Past(draft.Gain, change > 0);
        bool beside = change > 0
            ? pieces.Exists(p => p.From == draft.Gain && gain > p.From && gain < p.To && !p.IsOpen)
            : pieces.Exists(p => p.To == draft.Gain && gain > p.From && gain < p.To && !p.IsOpen);
        var (below, above) = (pieces.LastOrDefault(p => p.To <= draft.Gain), pieces.FirstOrDefault(p => p.From >= draft.Gain));
        int growing = (change > 0 ? above : below)?.Count.Growing ?? 0;
        if (change == 0 || !beside || growing > Math.Abs(change))
        {
            return null;
        }

        double growth = Fastest(gain, _sweep.RootsAt(gain)).Approach.Root.Real;
        return growth > 0 ? Math.Log(2) / growth : null;
    }

    /// <summary>
    /// At an onset the crossing root is on the axis: marginal, unless another root grows on both sides. At infinity nothing
    /// is claimed; elsewhere the gain is judged by itself.
    /// </summary>
    private StabilityVerdict AtCut(double gain, Piece left, Piece right)
    {
        var here = _drafts.Where(d => Math.Abs(d.Gain - gain) <= d.Uncertainty).ToArray();
        if (here.Length == 0 || left.IsOpen || right.IsOpen)
        {
            return _sweep.JudgeAt(gain);
        }

        if (here.Any(d => d.Kind == OnsetKind.ThroughInfinity))
        {
            return StabilityVerdict.Undecided;
        }

        return Math.Min(left.Count.Growing, right.Count.Growing) > 0 ? StabilityVerdict.Unstable
            : left.Count.Undecided > 0 || right.Count.Undecided > 0 ? StabilityVerdict.Undecided
            : StabilityVerdict.Marginal;
    }

    /// <summary>The least of a measure, a little away from an end that has another verdict.</summary>
    private ClosestApproach Extreme(Piece piece, bool insetFrom, bool insetTo, Func<double, RootSet, (ClosestApproach Approach, double Measure)> measure)
    {
        double low = piece.From + (insetFrom ? BesideOnset * (piece.To - piece.From) : 0);
        double high = piece.To - (insetTo ? BesideOnset * (piece.To - piece.From) : 0);
        (ClosestApproach Approach, double Measure) At(double gain) => measure(gain, _sweep.RootsAt(gain));
        var approaches = _samples.Where(s => s.Gain > low && s.Gain < high).Select(s => measure(s.Gain, s.Roots)).ToList();
        if (approaches.Count < FewestSamples)
        {
            approaches = [.. Enumerable.Range(1, FewestSamples).Select(k => At(low + ((high - low) * k / (FewestSamples + 1))))];
        }

        approaches.Insert(0, At(low));
        approaches.Add(At(high));
        return Refinement.Least(approaches, a => a.Approach.Gain, a => a.Measure, At, RefiningSteps).Approach;
    }

    private (ClosestApproach Approach, double Measure) LeastDamped(double gain, RootSet roots)
        => Worst(gain, roots, (s, i) => roots.VerdictOf(i) == StabilityVerdict.Undecided ? 0 : -s.Real / Complex.Abs(s));

    private (ClosestApproach Approach, double Measure) Fastest(double gain, RootSet roots) => Worst(gain, roots, (s, _) => -s.Real);

    private (ClosestApproach Approach, double Measure) Worst(double gain, RootSet roots, Func<Complex, int, double> measure)
    {
        int worst = -1;
        double least = double.PositiveInfinity;
        for (int i = 0; i < roots.Values.Length; i++)
        {
            double m = measure(Physical(roots.Values[i]), i);
            (worst, least) = m < least ? (i, m) : (worst, least);
        }

        var root = worst < 0 ? Complex.Zero : Physical(roots.Values[worst]);
        bool undecided = worst >= 0 && roots.VerdictOf(worst) == StabilityVerdict.Undecided;
        return (new ClosestApproach(gain, root, root == 0 || undecided ? 0 : -root.Real / Complex.Abs(root)), least);
    }

    private Complex Physical(Complex root) => (root * _sweep.Model.Rate) - _sweep.Decay;
}
