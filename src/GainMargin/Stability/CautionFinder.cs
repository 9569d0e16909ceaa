using System.Collections.Immutable;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Collects what the reader of a boundary should know.</summary>
internal static class CautionFinder
{
    private const string Screening =
        "a linear screening, not a clearance: raise gains on the rig in stages, with limits and an emergency stop; local codes and licensed practice decide.";

    public static ImmutableArray<Caution> OfSweep(SweepModel sweep, IntervalLedger ledger, List<GainStretch> stretches, bool singularSetsAreComplete)
    {
        var cautions = Common(sweep.Path.Nominal.Structure, OpenLoopVerdict(sweep.Path.Nominal), sweep.Permanent.ZeroRoots, ledger.Onsets, ledger.Intervals);
        foreach (var stretch in stretches)
        {
            cautions.Add(new Caution(
                CautionKind.OpenStretch, Guard.Invariant($"between {stretch.From:R} and {stretch.To:R} the sweep could not tell what happens; the verdict there is undecided.")));
        }

        if (!singularSetsAreComplete)
        {
            cautions.Add(new Caution(
                CautionKind.SingularForEveryGain, "the static or mass matrix is singular for every gain, so divergences were only sampled."));
        }

        AddRelease(cautions, sweep.Path, ledger.Intervals, sweep.Decay);
        return cautions.ToImmutable();
    }

    public static ImmutableArray<Caution> OfOneLoop(OneLoop loop, OneLoopLedger ledger, IEnumerable<GainStretch> unresolved)
    {
        bool baseIsOpen = loop.Decay == 0 && loop.Terms.BaseValue == 0 && loop.Path.Nominal.Law.Loops.Length == 1;
        var open = baseIsOpen ? loop.BaseCount.Verdict : OpenLoopVerdict(loop.Path.Nominal);
        int zeroRoots = loop.Decay == 0 ? loop.Terms.Invisible.Count(p => p.Value == 0) : 0;
        var cautions = Common(loop.Path.Nominal.Structure, open, zeroRoots, ledger.Onsets, ledger.Intervals);
        foreach (var pole in loop.Terms.Invisible.Where(p => p.Value != 0 && p.Verdict is StabilityVerdict.Marginal or StabilityVerdict.Undecided))
        {
            var frequency = Frequency.Of(pole.Value.Imaginary * loop.Terms.Rate);
            cautions.Add(new Caution(
                CautionKind.UnseenMode, $"a mode at {loop.Path.Nominal.Structure.Units.Show(frequency)} without damping of its own is not moved by this loop: it stays marginal at every gain."));
        }

        if (loop.Terms.IsLossless)
        {
            cautions.Add(new Caution(
                CautionKind.LosslessLoop, "this loop neither takes energy out nor puts any in; damping, however small, may lower the onset of flutter by a finite amount, depending on how it is distributed."));
        }

        foreach (var stretch in GainStretch.Merged(unresolved))
        {
            bool beyond = ledger.Onsets.Any(o => o.Kind == OnsetKind.ThroughInfinity && (o.Gain == stretch.From || o.Gain == stretch.To));
            cautions.Add(beyond
                ? new Caution(CautionKind.ThroughInfinity, Guard.Invariant($"between {stretch.From:R} and {stretch.To:R}, beyond the loss through infinity, nothing was searched."))
                : new Caution(CautionKind.OpenStretch, Guard.Invariant($"between {stretch.From:R} and {stretch.To:R} rounding leaves open what happens; the verdict there is undecided.")));
        }

        foreach (double gain in ledger.Contradicted)
        {
            cautions.Add(new Caution(
                CautionKind.OpenStretch, Guard.Invariant($"at {gain:G7} a second matrix has growing roots where the first has none; the interval is left undecided.")));
        }

        AddRelease(cautions, loop.Path, ledger.Intervals, loop.Decay);
        return cautions.ToImmutable();
    }

    private static ImmutableArray<Caution>.Builder Common(
        ElasticStructure structure, StabilityVerdict open, int zeroRoots, ImmutableArray<StabilityOnset> onsets, ImmutableArray<GainInterval> intervals)
    {
        var cautions = ImmutableArray.CreateBuilder<Caution>();
        cautions.Add(new Caution(CautionKind.LinearScreening, Screening));
        if (open != StabilityVerdict.Stable)
        {
            cautions.Add(new Caution(
                CautionKind.OpenLoopNotStable, $"with all loops open the structure is {BoundaryText.Word(open)}: what is stable here rests on the feedback."));
        }

        if (!Dense.IsSymmetric(structure.Stiffness.Values))
        {
            cautions.Add(new Caution(
                CautionKind.StiffnessNotSymmetric, "the structure's own stiffness is not symmetric: right for follower forces or friction, a slip otherwise."));
        }

        if (zeroRoots > 0)
        {
            cautions.Add(new Caution(
                CautionKind.FreeMotion,
                Guard.Invariant($"a rigid-body motion stays free at every gain; its {zeroRoots} zero root(s) are no onset, and the best verdict is marginal.")));
        }

        int undecided = intervals.Select(i => i.Count.Undecided).DefaultIfEmpty(0).Max();
        if (undecided > 0)
        {
            cautions.Add(new Caution(
                CautionKind.RootsOnAxis,
                Guard.Invariant($"up to {undecided} root(s) lie on the imaginary axis within rounding; damping, however small, decides about them.")));
        }

        foreach (var onset in onsets.Where(o => o.Kind == OnsetKind.ThroughInfinity))
        {
            cautions.Add(new Caution(
                CautionKind.ThroughInfinity,
                Guard.Invariant($"at {onset.Gain:G7} a root passes through infinity: beyond it the model means little without actuator dynamics.")));
        }

        return cautions;
    }

    private static void AddRelease(ImmutableArray<Caution>.Builder cautions, GainPath path, ImmutableArray<GainInterval> intervals, double decay)
    {
        double release = path.ReleaseValue;
        if (!path.Range.Contains(release))
        {
            cautions.Add(new Caution(CautionKind.ReleaseOutsideRange, Guard.Invariant($"the release gain {release:G7} lies outside the range screened.")));
            return;
        }

        var interval = intervals.First(i => release >= i.From && release <= i.To);
        var verdict = release == interval.From ? interval.AtFrom : release == interval.To ? interval.AtTo : interval.Inside;
        if (verdict != StabilityVerdict.Stable && decay > 0)
        {
            cautions.Add(new Caution(CautionKind.ReleaseNotStable, Guard.Invariant($"at the release gain {release:G7} not every root was shown to decay at the rate demanded.")));
        }
        else if (verdict != StabilityVerdict.Stable)
        {
            cautions.Add(new Caution(
                CautionKind.ReleaseNotStable, Guard.Invariant($"the release gain {release:G7} was not shown to be stable: {BoundaryText.Word(verdict)}.")));
        }
    }

    private static StabilityVerdict OpenLoopVerdict(ClosedLoop nominal)
    {
        var law = nominal.Law.Loops.Aggregate(nominal.Law, (l, setting) => l.WithGain(setting.Loop.Name, 0));
        var open = ClosedLoop.Create(nominal.Structure, law);
        var facts = SplitFinder.Run(open).Facts;
        return facts.IsEmpty ? SpectrumFinder.Run(open, CancellationToken.None).Verdict : facts[0].Verdict;
    }
}
