using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>The books of a sweep: what the counts say when an onset was not seen.</summary>
public sealed class IntervalLedgerTests
{
    private static readonly SweepModel Sweep = new(Boundaries.Flutter(), CancellationToken.None);

    private static IntervalLedger Ledger(IEnumerable<double> samples, List<OnsetDraft> drafts, bool trusted = true)
    {
        var ledger = new IntervalLedger(Sweep, [.. samples.Select(Sweep.SampleAt)], drafts, [], [], trusted);
        ledger.Run();
        return ledger;
    }

    [Fact]
    public void AddsUp_OnsetUnseenBetweenSamples_IsFalse()
        => Assert.False(Ledger([-0.9, -0.5, 0.5], []).AddsUp);

    [Fact]
    public void AddsUp_OnsetWithTheWrongDirection_IsFalse()
    {
        var onset = Assert.Single(GainSweep.Run(Boundaries.Flutter()).Onsets);
        OnsetDraft Draft(double slope) => new(
            onset.Gain, onset.GainUncertainty, onset.Kind, onset.Frequency, slope, onset.BackwardError, onset.RightMode, onset.LeftMode, onset.Energy);

        Assert.True(Ledger([-0.9, 0.5], [Draft(-0.5)]).AddsUp);
        Assert.False(Ledger([-0.9, 0.5], [Draft(+0.5)]).AddsUp);
    }

    [Fact]
    public void Run_NotTrusted_GivesNoIntervalAVerdict()
        => Assert.All(Ledger([-0.9, 0.5], [], trusted: false).Intervals, i => Assert.Equal(StabilityVerdict.Undecided, i.Inside));
}
