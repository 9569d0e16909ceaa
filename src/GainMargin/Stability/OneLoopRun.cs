using System.Collections.Immutable;
using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// The complete search for one loop: terms, isolation, polishing on the original matrices, verdicts. Gives up, and says so
/// by returning nothing, where the terms cannot be trusted, a cell stays unresolved, a root cannot be polished, or the
/// root counts between the onsets do not add up with their directions.
/// </summary>
internal sealed class OneLoopRun(GainPath path, OnsetOptions options, IProgress<FinderProgress>? progress, CancellationToken cancellation)
{
    private readonly SweepModel _sweep = new(path, cancellation);

    public StabilityBoundary? TryRun()
    {
        Report("loop terms", 0);
        if (LoopTerms.Of(_sweep) is not { } terms)
        {
            return null;
        }

        var range = path.Range;
        var divergences = SingularGains.Divergences(_sweep);
        var infinities = SingularGains.ThroughInfinity(_sweep);
        var isolator = new OnsetIsolator(terms, Math.Max(Math.Abs(range.From - terms.BaseValue), Math.Abs(range.To - terms.BaseValue)));
        isolator.Run(cancellation);
        if (!isolator.IsComplete || !divergences.IsRegular || !infinities.IsRegular)
        {
            return null;
        }

        Report("onsets", 0.5);
        var evidence = new OnsetEvidence(_sweep);
        var drafts = divergences.Found.Where(IsInside).Select(evidence.OfDivergence)
            .Concat(infinities.Found.Where(IsInside).Select(evidence.OfInfinity)).ToList();
        foreach (var root in isolator.Roots)
        {
            double gain = terms.BaseValue - (1 / root.Real);
            if (gain < range.From - (1e-6 * range.Width) || gain > range.To + (1e-6 * range.Width))
            {
                continue;
            }

            if (Polished(gain, Math.Sqrt(root.Square)) is not { } crossing)
            {
                return null;
            }

            if (crossing.Gain - crossing.Uncertainty > range.From && crossing.Gain + crossing.Uncertainty < range.To)
            {
                drafts.Add(evidence.OfFlutter(crossing));
            }
        }

        return Assembled(OnsetDraft.WithoutRepeats(drafts));
    }

    private StabilityBoundary? Assembled(List<OnsetDraft> drafts)
    {
        var samples = Samples(drafts);
        if (samples.Any(s => Enumerable.Range(0, s.Values.Length).Any(s.IsOnAxis)))
        {
            return null;
        }

        var ledger = new IntervalLedger(_sweep, samples, drafts, [], []);
        ledger.Run();
        if (!AddsUp(drafts, ledger))
        {
            return null;
        }

        Report("done", 1);
        return new StabilityBoundary(
            path.ToString(), path.Unit, path.Nominal.Structure.Units, path.Range.From, path.Range.To, path.ReleaseValue,
            ledger.Onsets, ledger.Intervals, [], new Completeness(Coverage.Complete, Coverage.Complete, 0, _sweep.Decompositions),
            CautionFinder.Run(_sweep, ledger, [], true), ProvenanceOf.OneLoop(path, options));
    }

    /// <summary>Samples between the onsets, for the least damping there.</summary>
    private ImmutableArray<SweepSample> Samples(List<OnsetDraft> drafts)
    {
        double inset = SweepRun.Inset * path.Range.Width;
        double[] grid = SweepGrid.Between(path.Range.From, path.Range.To, path.Range.Width, options.Sweep);
        return [.. grid[1..^1].Where(g => drafts.All(d => Math.Abs(d.Gain - g) > inset)).Select(_sweep.SampleAt)];
    }

    /// <summary>
    /// Null vectors to start from: <c>Q₀⁻¹b</c> and <c>Q₀⁻ᴴs</c> at the onset frequency, which are those of the closed loop.
    /// </summary>
    private FlutterCrossing? Polished(double gain, double omega)
    {
        var even = _sweep.Model.Even;
        int loop = Enumerable.Range(0, even.LoopCount).Single(k => _sweep.Polynomials[k].Length > 1);
        var matrix = even.At(_sweep.GainsAt(_sweep.Path.Range.From + (0.5318 * path.Range.Width))).At(new Complex(0, omega));
        var right = Dense.TrySolve(matrix, [.. even.Drive.Column(loop).Select(x => new Complex(x, 0))]);
        var left = Dense.TrySolve(matrix.ConjugateTranspose(), [.. even.Sense.Column(loop).Select(x => new Complex(x, 0))]);
        if (right is null || left is null)
        {
            return null;
        }

        double slack = 1e-4 * Math.Max(Math.Abs(gain), path.Range.Width);
        return FlutterPolish.Run(_sweep, gain, omega, Unit(right), Unit(left), gain - slack, gain + slack);
    }

    private static Complex[] Unit(Complex[] v)
    {
        double length = Dense.Norm2(v);
        return Array.ConvertAll(v, x => x / length);
    }

    /// <summary>Each onset must change the number of growing roots as its direction says: by two for a pair, by one at divergence.</summary>
    private static bool AddsUp(List<OnsetDraft> drafts, IntervalLedger ledger)
    {
        if (ledger.Intervals.Any(i => i.Count.Undecided > 0))
        {
            return false;
        }

        for (int i = 0; i < drafts.Count;)
        {
            int last = i;
            while (last + 1 < drafts.Count && drafts[last + 1].IsTogetherWith(drafts[i]))
            {
                last++;
            }

            int change = ledger.Onsets[last].Above.Growing - ledger.Onsets[i].Below.Growing;
            var group = drafts.GetRange(i, last - i + 1);
            bool plain = group.All(d => d.Kind == OnsetKind.Flutter);
            if ((plain && change != group.Sum(d => 2 * Math.Sign(d.Slope ?? 0))) || (group.Count == 1 && group[0].Kind == OnsetKind.Divergence && Math.Abs(change) != 1))
            {
                return false;
            }

            i = last + 1;
        }

        return true;
    }

    private bool IsInside(SingularGain gain) => gain.Gain - gain.Uncertainty > path.Range.From && gain.Gain + gain.Uncertainty < path.Range.To;

    private void Report(string stage, double fraction) => progress?.Report(new FinderProgress(stage, fraction, _sweep.Decompositions));
}
