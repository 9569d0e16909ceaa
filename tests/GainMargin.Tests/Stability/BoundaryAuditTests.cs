using System.Collections.Immutable;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>The audit has to see each way in which a boundary can be wrong.</summary>
public sealed class BoundaryAuditTests
{
    private static readonly GainPath Path = Boundaries.Flutter();

    [Fact]
    public void Of_TrueBoundary_HasNoComplaints()
    {
        var audit = Audit(Complete(GainSweep.Run(Path)));

        Assert.Empty(audit.Complaints);
        Assert.Equal(1, audit.OnsetsCompared);
    }

    [Fact]
    public void Of_OnsetLeftOut_Complains()
    {
        var found = GainSweep.Run(Path);
        var last = found.Intervals[^1];
        var whole = new GainInterval(found.From, found.To, last.AtFrom, last.Inside, last.AtTo, last.Count, last.LeastDamped, null);

        Assert.NotEmpty(Audit(Complete(found, [], [whole])).Complaints);
    }

    [Fact]
    public void Of_OnsetBetweenIntervalsWithoutVerdict_ComplainsOnlyOfWhatIsNotReported()
    {
        var found = GainSweep.Run(Path);
        ImmutableArray<GainInterval> open =
            [new(found.From, found.To, StabilityVerdict.Undecided, StabilityVerdict.Undecided, StabilityVerdict.Undecided, default, null, null)];

        var audit = Audit(Complete(found, [], open));

        Assert.Empty(audit.Complaints);
        Assert.Equal(audit.Probes, audit.UndecidedProbes);
    }

    [Fact]
    public void Of_CountsTurnedRound_Complains()
    {
        var found = GainSweep.Run(Path);
        var onset = found.Onsets[0];
        var turned = new StabilityOnset(
            onset.Gain, onset.GainUncertainty, onset.Kind, onset.Direction, onset.Frequency, onset.GrowthRateSlope, onset.BackwardError,
            onset.RightMode, onset.LeftMode, onset.Above, onset.Below, onset.Energy, null);

        Assert.NotEmpty(Audit(Complete(found, [turned], found.Intervals)).Complaints);
    }

    [Fact]
    public void Of_OnsetAMillionthOff_Complains()
    {
        var found = GainSweep.Run(Path);
        var onset = found.Onsets[0];
        var moved = new StabilityOnset(
            onset.Gain * (1 + 1e-6), onset.GainUncertainty, onset.Kind, onset.Direction, onset.Frequency, onset.GrowthRateSlope,
            onset.BackwardError, onset.RightMode, onset.LeftMode, onset.Below, onset.Above, onset.Energy, null);

        Assert.NotEmpty(Audit(Complete(found, [moved], found.Intervals)).Complaints);
    }

    private static BoundaryAudit Audit(StabilityBoundary boundary) => BoundaryAudit.Of(1, "test", Path, _ => boundary);

    private static StabilityBoundary Complete(StabilityBoundary found) => Complete(found, found.Onsets, found.Intervals);

    /// <summary>The same result, but with these onsets and intervals and a coverage that calls itself complete.</summary>
    private static StabilityBoundary Complete(
        StabilityBoundary found, ImmutableArray<StabilityOnset> onsets, ImmutableArray<GainInterval> intervals) => new(
        found.Path, found.Unit, found.Units, found.From, found.To, found.ReleaseGain, found.RequiredDecayRate, onsets, intervals, found.Loci,
        Completeness.OfSearch(found.Completeness.Decompositions, 0, 0), found.Cautions, found.Provenance);
}
