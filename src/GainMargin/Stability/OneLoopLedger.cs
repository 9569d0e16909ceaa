using System.Collections.Immutable;
using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Lays the onsets of one loop along the range and gives each interval its count: from the books of crossings, checked
/// against the roots of the secular equation at the gains sampled for least damping and largest growth.
/// </summary>
internal sealed class OneLoopLedger
{
    private const double BesideOnset = 0.05;

    /// <summary>Relative distance below which two gains leave no interval between them.</summary>
    private const double Coincident = 16 * Tolerances.Epsilon;

    private const int Octaves = 6;
    private const int EvenSteps = 8;
    private const int RefiningSteps = 5;

    private readonly OneLoop _loop;
    private readonly IReadOnlyList<OnsetDraft> _drafts;
    private readonly IReadOnlyList<GainStretch> _open;
    private readonly IReadOnlyList<GainStretch> _edges;
    private readonly IReadOnlyList<GainStretch> _losses;
    private readonly CrossingBooks _books;
    private readonly RootSampler _sampler;
    private readonly CancellationToken _cancellation;

    public OneLoopLedger(
        OneLoop loop, IReadOnlyList<OnsetDraft> drafts, IReadOnlyList<GainStretch> open, IReadOnlyList<GainStretch> edges, IReadOnlyList<GainStretch> losses,
        CrossingBooks books, CancellationToken cancellation)
    {
        _loop = loop;
        _drafts = drafts;
        _open = open;
        _edges = edges;
        _losses = losses;
        _books = books;
        _sampler = new RootSampler(loop.Terms);
        _cancellation = cancellation;
    }

    /// <summary>Steps beyond a loss through infinity, relative to its gain, at which the roots are tried to be counted.</summary>
    private static readonly double[] JustBeyond = [1e-6, 1e-5, 1e-4, 1e-3];

    /// <summary>Shares of an interval beside its ends at which the count is checked too.</summary>
    private static readonly double[] BesideEnds = [1e-6, 1e-4, 1e-2];

    private sealed record Piece(double From, double To, bool IsOpen, RootCount Count, StabilityVerdict Inside);

    public ImmutableArray<StabilityOnset> Onsets { get; private set; } = [];

    public ImmutableArray<GainInterval> Intervals { get; private set; } = [];

    /// <summary>Why the intervals could not be judged, or <see langword="null"/> if they could.</summary>
    public string? Objection { get; private set; }

    /// <summary>Intervals that a second matrix confirmed.</summary>
    public int Confirmed { get; private set; }

    /// <summary>Middles of intervals in which a second matrix has growing roots where the count has none.</summary>
    public List<double> Contradicted { get; } = [];

    public void Run()
    {
        var pieces = Pieces();
        if (Objection is not null)
        {
            return;
        }

        Onsets = [.. _drafts.Select(d => Counted(d, pieces))];
        var intervals = ImmutableArray.CreateBuilder<GainInterval>(pieces.Count);
        for (int i = 0; i < pieces.Count; i++)
        {
            var piece = pieces[i];
            var atFrom = i == 0 ? AtEnd(piece, piece.From) : AtCut(pieces[i - 1], piece);
            var atTo = i == pieces.Count - 1 ? AtEnd(piece, piece.To) : AtCut(piece, pieces[i + 1]);
            var (least, fastest) = piece.IsOpen || !_loop.Options.Extremes
                ? (null, null)
                : Extremes(piece, i > 0 || atFrom != piece.Inside, i < pieces.Count - 1 || atTo != piece.Inside);
            if (Objection is null && least is { DampingRatio: < 0 } && piece.Count.Growing == 0 && _loop.Decay == 0)
            {
                Objection = "a root grows where none was counted";
            }

            if (Objection is not null)
            {
                return;
            }

            var inside = piece.Inside;
            if (_loop.Options.Confirm && inside is StabilityVerdict.Stable or StabilityVerdict.Marginal && !IsConfirmed(piece))
            {
                (atFrom, inside, atTo) = (StabilityVerdict.Undecided, StabilityVerdict.Undecided, StabilityVerdict.Undecided);
            }

            intervals.Add(new GainInterval(piece.From, piece.To, atFrom, inside, atTo, piece.Count, least, inside == StabilityVerdict.Unstable ? fastest : null));
        }

        Intervals = intervals.ToImmutable();
    }

    private bool IsConfirmed(Piece piece)
    {
        double middle = 0.5 * (piece.From + piece.To);
        _cancellation.ThrowIfCancellationRequested();
        if (_loop.ShiftedCountAt(middle) is { Growing: > 0 })
        {
            Contradicted.Add(middle);
            return false;
        }

        Confirmed++;
        return true;
    }

    private List<Piece> Pieces()
    {
        var range = _loop.Path.Range;
        var cuts = new List<(double From, double To, bool IsOpen)> { (range.From, range.From, false) };
        OnsetDraft? last = null;
        var marks = _drafts.Select(d => (From: d.Gain, To: d.Gain, IsOpen: false, Draft: (OnsetDraft?)d))
            .Concat(_open.Select(s => (From: Math.Max(s.From, range.From), To: Math.Min(s.To, range.To), IsOpen: true, Draft: (OnsetDraft?)null)));
        foreach (var mark in marks.OrderBy(m => m.From).ThenByDescending(m => m.To))
        {
            bool covered = mark.To <= cuts[^1].To && cuts.Count > 1 && cuts[^1].IsOpen;
            bool together = mark.Draft is not null && last is not null && !cuts[^1].IsOpen && mark.Draft.IsTogetherWith(last);
            if (!covered && !together)
            {
                cuts.Add((mark.From, mark.To, mark.IsOpen));
                last = mark.Draft;
            }
        }

        cuts.Add((range.To, range.To, false));
        var pieces = new List<Piece>();
        for (int i = 0; i < cuts.Count; i++)
        {
            if (cuts[i].IsOpen)
            {
                pieces.Add(new Piece(pieces.Count > 0 ? pieces[^1].To : range.From, cuts[i].To, true, default, StabilityVerdict.Undecided));
            }

            if (i + 1 < cuts.Count && cuts[i + 1].From - cuts[i].To > Coincident * Math.Abs(cuts[i].To))
            {
                pieces.Add(Judged(pieces.Count > 0 ? pieces[^1].To : cuts[i].To, cuts[i + 1].From));
            }
        }

        return pieces;
    }

    private Piece Judged(double from, double to)
    {
        double middle = 0.5 * (from + to);
        int? booked = _books.GrowingAt(middle);
        var sample = booked is null || _loop.Options.Extremes ? _sampler.At(middle) : null;
        var counted = sample?.Count ?? (booked is null ? _loop.CountAt(middle) : null);
        if (booked is { } growing && (counted is null || sample?.IsClear == false))
        {
            counted = _loop.CountWith(growing);
        }

        if (counted is not { } count)
        {
            Objection = "the roots between two onsets could not be counted";
            return new Piece(from, to, true, default, StabilityVerdict.Undecided);
        }

        if (booked is { } expected && count.Growing != expected)
        {
            Objection = "the root counts do not add up with the onsets";
        }

        return new Piece(from, to, false, count, count.Verdict);
    }

    private StabilityOnset Counted(OnsetDraft draft, List<Piece> pieces)
    {
        var below = pieces.LastOrDefault(p => p.To <= draft.Gain + draft.Uncertainty, pieces[0]);
        var above = pieces.FirstOrDefault(p => p.From >= draft.Gain - draft.Uncertainty, pieces[^1]);
        if (draft.Kind == OnsetKind.ThroughInfinity)
        {
            // Beyond a loss through infinity nothing was searched; just beyond it the roots can be counted all the same.
            below = below.IsOpen ? below with { Count = Beyond(draft.Gain, -1) } : below;
            above = above.IsOpen ? above with { Count = Beyond(draft.Gain, 1) } : above;
        }

        bool known = below.Count.Total > 0 && above.Count.Total > 0;
        int change = known ? above.Count.Growing - below.Count.Growing : 2 * Math.Sign(draft.Slope ?? 0);
        var direction = change > 0 ? CrossingDirection.Destabilising : change < 0 ? CrossingDirection.Restabilising : CrossingDirection.Touching;
        return new StabilityOnset(
            draft.Gain, draft.Uncertainty, draft.Kind, direction, draft.Frequency, draft.Slope, draft.BackwardError,
            draft.Right, draft.Left, below.Count, above.Count, draft.Energy, TimeToDouble(draft, change, change > 0 ? above : below));
    }

    /// <summary>The count just beyond a loss through infinity, or none where rounding leaves it open.</summary>
    private RootCount Beyond(double gain, int side)
        => JustBeyond.Select(step => _sampler.At(gain + (side * step * Math.Abs(gain)))).FirstOrDefault(s => s?.IsClear == true)?.Count ?? default;

    /// <summary>
    /// Time in which the motion doubles one decibel past the onset, if the interval there reaches that far and the motion is the
    /// only one that grows.
    /// </summary>
    private double? TimeToDouble(OnsetDraft draft, int change, Piece unstable)
    {
        double gain = Decibel.Past(draft.Gain, change > 0);
        if (change == 0 || unstable.Count.Growing > Math.Abs(change) || !_loop.Options.Extremes || unstable.IsOpen || !(gain > unstable.From && gain < unstable.To) || _sampler.At(gain) is not { } sample)
        {
            return null;
        }

        double growth = Physical(sample.Roots[Fastest(sample)]).Real;
        return growth > 0 ? Math.Log(2) / growth : null;
    }

    /// <summary>At an end of the range: marginal at an onset, the poles themselves at the base, otherwise as inside.</summary>
    private StabilityVerdict AtEnd(Piece piece, double end)
    {
        if (piece.IsOpen || _losses.Any(l => end >= l.From && end <= l.To))
        {
            return StabilityVerdict.Undecided;
        }

        if (end == _loop.Terms.BaseValue)
        {
            return _loop.BaseCount.Verdict;
        }

        return _edges.Any(e => end >= e.From && end <= e.To)
            ? piece.Count.Growing > 0 ? StabilityVerdict.Undecided : StabilityVerdict.Marginal
            : piece.Inside;
    }

    private static StabilityVerdict AtCut(Piece left, Piece right)
    {
        if (left.IsOpen || right.IsOpen)
        {
            return StabilityVerdict.Undecided;
        }

        return Math.Min(left.Count.Growing, right.Count.Growing) > 0 ? StabilityVerdict.Unstable
            : left.Count.Undecided > 0 || right.Count.Undecided > 0 ? StabilityVerdict.Undecided
            : StabilityVerdict.Marginal;
    }

    /// <summary>
    /// Least damping and fastest growth, a little away from an end that has another verdict. Every sample must count as the
    /// interval does.
    /// </summary>
    private (ClosestApproach? Least, ClosestApproach? Fastest) Extremes(Piece piece, bool insetFrom, bool insetTo)
    {
        double low = piece.From + (insetFrom ? BesideOnset * (piece.To - piece.From) : 0);
        double high = piece.To - (insetTo ? BesideOnset * (piece.To - piece.From) : 0);
        var samples = new List<TermSample>();
        foreach (double gain in Nodes(low, high))
        {
            _cancellation.ThrowIfCancellationRequested();
            if (_sampler.At(gain) is not { } sample)
            {
                continue;
            }

            bool atEnd = gain == piece.From || gain == piece.To;
            if (!atEnd && sample.IsClear && sample.Count.Growing != piece.Count.Growing)
            {
                Objection = Guard.Invariant($"the roots at {gain:G7} do not count as those beside it");
                return (null, null);
            }

            samples.Add(sample);
        }

        foreach (double share in BesideEnds)
        {
            double inset = share * (piece.To - piece.From);
            if (new[] { piece.From + inset, piece.To - inset }.Select(_sampler.At).Any(s => s is { IsClear: true } && s.Count.Growing != piece.Count.Growing))
            {
                Objection = "the roots beside an end of an interval do not count as those inside";
                return (null, null);
            }
        }

        return samples.Count == 0 ? (null, null) : (Refined(samples, LeastDamped, Ratio), Refined(samples, Fastest, Decay));
    }

    private SortedSet<double> Nodes(double low, double high)
    {
        var nodes = new SortedSet<double> { low, high };
        double reach = Math.Max(Math.Abs(low), Math.Abs(high));
        double release = _loop.Path.ReleaseValue;
        for (int k = 1; k < EvenSteps; k++)
        {
            nodes.Add(low + ((high - low) * k / EvenSteps));
        }

        for (int k = 1; k <= Octaves; k++)
        {
            nodes.Add(Math.ScaleB(reach, -k));
            nodes.Add(-Math.ScaleB(reach, -k));
        }

        nodes.UnionWith([0.5 * release, release, 2 * release]);
        nodes.RemoveWhere(g => !(g >= low && g <= high));
        return nodes;
    }

    private ClosestApproach Refined(List<TermSample> samples, Func<TermSample, int> pick, Func<TermSample, int, double> measure)
    {
        var best = Refinement.Least(samples, s => s.Value, s => measure(s, pick(s)), _sampler.At, RefiningSteps);
        int worst = pick(best);
        return new ClosestApproach(best.Value, Physical(best.Roots[worst]), Ratio(best, worst));
    }

    private static double Decay(TermSample sample, int i) => -sample.Roots[i].Real;

    private double Ratio(TermSample sample, int i)
    {
        var s = Physical(sample.Roots[i]);
        return Math.Abs(sample.Roots[i].Real) <= sample.Uncertainty[i] && _loop.Decay == 0 ? 0 : -s.Real / Complex.Abs(s);
    }

    private int LeastDamped(TermSample sample) => Worst(sample, Ratio);

    private static int Fastest(TermSample sample) => Worst(sample, Decay);

    /// <summary>Zero roots of rigid motion are left out unless there is nothing else.</summary>
    private static int Worst(TermSample sample, Func<TermSample, int, double> measure)
    {
        int worst = 0;
        double least = double.PositiveInfinity;
        for (int i = 0; i < sample.Roots.Length; i++)
        {
            double m = sample.Roots[i] == 0 ? double.MaxValue : measure(sample, i);
            (worst, least) = m < least ? (i, m) : (worst, least);
        }

        return worst;
    }

    private Complex Physical(Complex root) => (root * _loop.Terms.Rate) - _loop.Decay;
}
