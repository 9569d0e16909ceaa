namespace GainMargin;

/// <summary>
/// The complete search for one loop: onsets, books, intervals. Gives up, and says why, where the terms cannot be trusted or the
/// books do not balance.
/// </summary>
internal sealed class OneLoopRun(OneLoop loop, IProgress<FinderProgress>? progress, CancellationToken cancellation)
{
    /// <summary>Largest share of the range that rounding may leave open where the release gain lies outside.</summary>
    private const double MostOpen = 0.5;

    private readonly LoopTerms _terms = loop.Terms;
    private readonly GainRange _range = loop.Path.Range;

    /// <summary>Why the search was given up.</summary>
    public string? Reason { get; private set; }

    public StabilityBoundary? TryRun()
    {
        Report("onsets", 0.1);
        var onsets = new OneLoopOnsets(loop, cancellation);
        Reason = onsets.Run();
        if (Reason is not null)
        {
            return null;
        }

        if (IsTooOpen(onsets.Open))
        {
            Reason = "rounding leaves open what happens at the release gain or in most of the range";
            return null;
        }

        List<GainStretch> open = [.. onsets.Open, .. onsets.Slivers];
        if (Books(onsets, open) is not { } books)
        {
            return null;
        }

        Report("intervals", 0.5);
        if (onsets.Low > _range.From)
        {
            open.Add(new GainStretch(_range.From, onsets.Low));
        }

        if (onsets.High < _range.To)
        {
            open.Add(new GainStretch(onsets.High, _range.To));
        }

        open = GainStretch.Merged(open.Where(s => s.To > _range.From && s.From < _range.To));
        var ledger = new OneLoopLedger(loop, OnsetDraft.WithoutRepeats(onsets.Drafts), open, onsets.Edges, onsets.Losses, books, cancellation);
        ledger.Run();
        Reason = ledger.Objection;
        if (Reason is not null)
        {
            return null;
        }

        Report("done", 1);
        var path = loop.Path;
        return new StabilityBoundary(
            path.ToString(), path.Unit, path.Nominal.Structure.Units, _range.From, _range.To, path.ReleaseValue, loop.Decay,
            ledger.Onsets, ledger.Intervals, [], Completeness.OfSearch(loop.Decompositions, onsets.Evaluations, ledger.Confirmed),
            CautionFinder.OfOneLoop(loop, ledger, open), ProvenanceOf.OneLoop(path, loop.Options));
    }

    /// <summary>Whether a sweep tells more: what matters is the way from the base to the release gain.</summary>
    private bool IsTooOpen(List<GainStretch> open)
    {
        double release = loop.Path.ReleaseValue;
        if (_range.Contains(release))
        {
            return open.Exists(s => s.From <= Math.Max(release, _terms.BaseValue) && s.To >= Math.Min(release, _terms.BaseValue));
        }

        double width = GainStretch.Merged(open).Sum(s => Math.Max(0, Math.Min(s.To, _range.To) - Math.Max(s.From, _range.From)));
        return width > MostOpen * _range.Width;
    }

    private CrossingBooks? Books(OneLoopOnsets onsets, List<GainStretch> open)
    {
        if (_terms.Poles.Any(p => p.Verdict == StabilityVerdict.Undecided))
        {
            Reason = "a pole at the base gain cannot be told from the axis";
            return null;
        }

        bool departs = _terms.Poles.Any(p => p.IsOnAxis);
        int? below = !departs ? 0 : _terms.IsLossless ? LosslessDeparture(-1) : Departure.Of(_terms, -1);
        int? above = !departs ? 0 : _terms.IsLossless ? LosslessDeparture(1) : Departure.Of(_terms, 1);
        return new CrossingBooks(_terms.BaseValue, loop.BaseCount.Growing, below, above, onsets.Events, open);
    }

    /// <summary>Without damping only a zero root can leave the axis at once.</summary>
    private int LosslessDeparture(int direction) => direction * _terms.DoubleZero < 0 ? 1 : 0;

    private void Report(string stage, double fraction) => progress?.Report(new FinderProgress(stage, fraction, loop.Decompositions));
}
