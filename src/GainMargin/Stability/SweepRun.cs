using System.Collections.Immutable;

namespace GainMargin;

/// <summary>One sweep from path to boundary: barriers first, then the pieces between them, then the verdicts.</summary>
internal sealed class SweepRun
{
    /// <summary>Distance from a divergence at which sampling stops, as a fraction of the range.</summary>
    public const double Inset = 1e-8;

    /// <summary>How often a sweep whose books do not balance is repeated, each time with a quarter of the step.</summary>
    private const int Repetitions = 2;

    private readonly GainPath _path;
    private readonly SweepOptions _options;
    private readonly IProgress<FinderProgress>? _progress;
    private readonly SweepModel _sweep;
    private FlutterSearch _search;

    private readonly OnsetOptions? _instead;
    private readonly string? _whySampled;

    /// <param name="path">The path.</param>
    /// <param name="options">How finely to sample.</param>
    /// <param name="progress">Receives the progress.</param>
    /// <param name="cancellation">Cancels.</param>
    /// <param name="instead">Options of the complete search that this sweep takes the place of.</param>
    /// <param name="whySampled">Why that search was not possible.</param>
    public SweepRun(
        GainPath path, SweepOptions options, IProgress<FinderProgress>? progress, CancellationToken cancellation,
        OnsetOptions? instead = null, string? whySampled = null)
    {
        _instead = instead;
        _whySampled = whySampled;
        _path = path;
        _options = options;
        _progress = progress;
        _sweep = new SweepModel(path, cancellation, instead?.DecayRate ?? 0);
        _search = new FlutterSearch(_sweep, options, Settled);
    }

    public StabilityBoundary Run()
    {
        Report("barriers", 0);
        var divergences = SingularGains.Divergences(_sweep, _path.Range);
        var infinities = SingularGains.ThroughInfinity(_sweep, _path.Range);
        var evidence = new OnsetEvidence(_sweep);
        IntervalLedger ledger;
        List<GainStretch> stretches;
        for (int round = 0; ; round++)
        {
            SearchPieces(divergences, infinities);
            stretches = GainStretch.Merged(_search.Open);
            ledger = Ledger(evidence, divergences, infinities, stretches, trusted: true);
            if (ledger.AddsUp || round == Repetitions || _sweep.Decompositions >= _options.MaximumDecompositions)
            {
                break;
            }

            var finer = _options with { MaximumStep = _options.MaximumStep / Math.Pow(4, round + 1), MinimumStep = Math.Min(_options.MinimumStep, 1e-10) };
            _search = new FlutterSearch(_sweep, finer, Settled);
        }

        if (!ledger.AddsUp)
        {
            ledger = Ledger(evidence, divergences, infinities, stretches, trusted: false);
            stretches = [new GainStretch(_path.Range.From, _path.Range.To)];
        }

        Report("done", 1);
        bool singularSetsAreComplete = divergences.IsRegular && infinities.IsRegular;
        return new StabilityBoundary(
            _path.ToString(), _path.Unit, _path.Nominal.Structure.Units, _path.Range.From, _path.Range.To, _path.ReleaseValue, _sweep.Decay,
            ledger.Onsets, ledger.Intervals, _options.KeepLoci ? LocusBuilder.Run(_search.Steps, _sweep.Model.Rate) : [],
            Completeness.OfSweep(
                singularSetsAreComplete ? Coverage.Complete : Coverage.Sampled,
                _search.Steps.Select(s => s.Right.Gain - s.Left.Gain).DefaultIfEmpty(_path.Range.Width).Max(), _sweep.Decompositions, _whySampled),
            CautionFinder.OfSweep(_sweep, ledger, stretches, singularSetsAreComplete),
            _instead is null ? ProvenanceOf.Sweep(_path, _options) : ProvenanceOf.Sweep(_path, _instead));
    }

    private IntervalLedger Ledger(
        OnsetEvidence evidence, SingularGains divergences, SingularGains infinities, List<GainStretch> stretches, bool trusted)
    {
        var found = _search.Crossings.Select(evidence.OfFlutter)
            .Concat(divergences.Found.Where(IsInside).Select(evidence.OfDivergence))
            .Concat(infinities.Found.Where(IsInside).Select(evidence.OfInfinity));
        var ledger = new IntervalLedger(
            _sweep, SamplesOf(_search.Steps), OnsetDraft.WithoutRepeats(found), stretches, GainStretch.Merged(_search.OnAxis), trusted);
        ledger.Run();
        return ledger;
    }

    private static ImmutableArray<SweepSample> SamplesOf(List<SweepStep> steps)
        => [.. steps.SelectMany(s => new[] { s.Left, s.Right }).DistinctBy(s => s.Gain).OrderBy(s => s.Gain)];

    private bool IsInside(SingularGain gain)
        => gain.Gain - gain.Uncertainty > _path.Range.From && gain.Gain + gain.Uncertainty < _path.Range.To;

    private void SearchPieces(SingularGains divergences, SingularGains infinities)
    {
        var range = _path.Range;
        var barriers = divergences.Found.Concat(infinities.Found).OrderBy(g => g.Gain).ToList();
        double from = range.From;
        SweepSample? before = null;
        foreach (var barrier in barriers)
        {
            double own = Math.Max(Math.Abs(barrier.Gain), Math.Abs(_path.ReleaseValue));
            double narrow = Inset * (own > 0 ? Math.Min(own, range.Width) : range.Width);
            double inset = Math.Max(narrow, 4 * barrier.Uncertainty);
            if (barrier.Gain - inset > from)
            {
                before = Piece(before, from, barrier.Gain - inset);
            }
            else if (inset > narrow)
            {
                _search.Open.Add(new GainStretch(from, Math.Min(range.To, barrier.Gain + inset)));
            }

            from = Math.Max(from, barrier.Gain + inset);
        }

        if (from < range.To)
        {
            bool endsOnBarrier = barriers.Count > 0 && barriers[^1].Gain >= range.To;
            Piece(before, from, endsOnBarrier ? range.To - (Inset * range.Width) : range.To);
        }
    }

    /// <summary>Searches a piece, and before it the gap that a divergence left between it and the piece below.</summary>
    private SweepSample Piece(SweepSample? before, double from, double to)
    {
        var (first, last) = _search.Run(from, to);
        if (before is not null)
        {
            _search.Bridge(before, first);
        }

        return last;
    }

    private void Settled(double gain) => Report("sweep", (gain - _path.Range.From) / _path.Range.Width);

    private void Report(string stage, double fraction) => _progress?.Report(new FinderProgress(stage, fraction, _sweep.Decompositions));
}
