using System.Collections.Immutable;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Collects what the reader of a boundary should know.</summary>
internal static class CautionFinder
{
    private const string Screening =
        "a linear screening, not a clearance: raise gains on the rig in stages, with limits and an emergency stop; local codes and licensed practice decide.";

    public static ImmutableArray<Caution> Run(SweepModel sweep, IntervalLedger ledger, List<GainStretch> stretches, bool singularSetsAreComplete)
    {
        var path = sweep.Path;
        var cautions = ImmutableArray.CreateBuilder<Caution>();
        cautions.Add(new Caution(CautionKind.LinearScreening, Screening));
        var open = OpenLoopVerdict(path.Nominal);
        if (open != StabilityVerdict.Stable)
        {
            cautions.Add(new Caution(
                CautionKind.OpenLoopNotStable, $"with all loops open the structure is {BoundaryText.Word(open)}: what is stable here rests on the feedback."));
        }

        if (sweep.Permanent.ZeroRoots > 0)
        {
            cautions.Add(new Caution(
                CautionKind.FreeMotion,
                Guard.Invariant($"a rigid-body motion stays free at every gain; its {sweep.Permanent.ZeroRoots} zero root(s) are no onset, and the best verdict is marginal.")));
        }

        int undecided = ledger.Intervals.Select(i => i.Count.Undecided).DefaultIfEmpty(0).Max();
        if (undecided > 0)
        {
            cautions.Add(new Caution(
                CautionKind.RootsOnAxis,
                Guard.Invariant($"up to {undecided} root(s) lie on the imaginary axis within rounding; damping, however small, decides about them.")));
        }

        foreach (var stretch in stretches)
        {
            cautions.Add(new Caution(
                CautionKind.OpenStretch, Guard.Invariant($"between {stretch.From:R} and {stretch.To:R} the sweep could not tell what happens; the verdict there is undecided.")));
        }

        foreach (var onset in ledger.Onsets.Where(o => o.Kind == OnsetKind.ThroughInfinity))
        {
            cautions.Add(new Caution(
                CautionKind.ThroughInfinity,
                Guard.Invariant($"at {onset.Gain:G7} a root passes through infinity: beyond it the model means little without actuator dynamics.")));
        }

        if (!singularSetsAreComplete)
        {
            cautions.Add(new Caution(
                CautionKind.SingularForEveryGain, "the static or mass matrix is singular for every gain, so divergences were only sampled."));
        }

        AddRelease(cautions, path, ledger);
        return cautions.ToImmutable();
    }

    private static void AddRelease(ImmutableArray<Caution>.Builder cautions, GainPath path, IntervalLedger ledger)
    {
        double release = path.ReleaseValue;
        if (!path.Range.Contains(release))
        {
            cautions.Add(new Caution(CautionKind.ReleaseOutsideRange, Guard.Invariant($"the release gain {release:G7} lies outside the range screened.")));
            return;
        }

        var interval = ledger.Intervals.First(i => release >= i.From && release <= i.To);
        var verdict = release == interval.From ? interval.AtFrom : release == interval.To ? interval.AtTo : interval.Inside;
        if (verdict != StabilityVerdict.Stable)
        {
            cautions.Add(new Caution(
                CautionKind.ReleaseNotStable, Guard.Invariant($"the release gain {release:G7} was not shown to be stable: {BoundaryText.Word(verdict)}.")));
        }
    }

    private static StabilityVerdict OpenLoopVerdict(ClosedLoop nominal)
    {
        var law = nominal.Law.Loops.Aggregate(nominal.Law, (l, setting) => l.WithGain(setting.Loop.Name, 0));
        return SpectrumFinder.Run(ClosedLoop.Create(nominal.Structure, law), CancellationToken.None).Verdict;
    }
}
