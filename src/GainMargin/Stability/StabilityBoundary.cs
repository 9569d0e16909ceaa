using System.Collections.Immutable;
using System.Text.Json.Serialization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// What a screening found along a path of gains: the onsets, the intervals between them with a verdict each, and what the
/// result rests on. A linear screening, not a clearance. Immutable.
/// </summary>
public sealed class StabilityBoundary
{
    [JsonConstructor]
    internal StabilityBoundary(
        string path, string? unit, UnitLabels units, double from, double to, double releaseGain, double requiredDecayRate,
        ImmutableArray<StabilityOnset> onsets, ImmutableArray<GainInterval> intervals, ImmutableArray<RootLocus> loci,
        Completeness completeness, ImmutableArray<Caution> cautions, Provenance provenance)
    {
        Path = path;
        Unit = unit;
        Units = units;
        From = from;
        To = to;
        ReleaseGain = releaseGain;
        RequiredDecayRate = requiredDecayRate;
        Onsets = onsets;
        Intervals = intervals;
        Loci = loci;
        Completeness = completeness;
        Cautions = cautions;
        Provenance = provenance;
    }

    /// <summary>What was varied, in words.</summary>
    public string Path { get; }

    /// <summary>Unit of the gain as text, if it has one.</summary>
    public string? Unit { get; }

    /// <summary>Labels of the units of the model.</summary>
    public UnitLabels Units { get; }

    /// <summary>Lower end of the range.</summary>
    public double From { get; }

    /// <summary>Upper end of the range.</summary>
    public double To { get; }

    /// <summary>The gain (or factor) at which the law stands.</summary>
    public double ReleaseGain { get; }

    /// <summary>
    /// Decay rate that was demanded, per unit of time; where it is not zero, onsets are gains at which a root reaches it, and
    /// <em>stable</em> means that every root decays faster.
    /// </summary>
    public double RequiredDecayRate { get; }

    /// <summary>The onsets inside the range by ascending gain. What holds at the ends of the range is said by the first and last interval.</summary>
    public ImmutableArray<StabilityOnset> Onsets { get; }

    /// <summary>The intervals by ascending gain; together they cover the range.</summary>
    public ImmutableArray<GainInterval> Intervals { get; }

    /// <summary>The root loci, if they were kept; zero roots of free rigid-body motion are left out.</summary>
    public ImmutableArray<RootLocus> Loci { get; }

    /// <summary>What the result covers and what it can miss.</summary>
    public Completeness Completeness { get; }

    /// <summary>What the reader should know.</summary>
    public ImmutableArray<Caution> Cautions { get; }

    /// <summary>Where the result comes from.</summary>
    public Provenance Provenance { get; }

    /// <summary>
    /// The verdict at one gain. Within the uncertainty of an onset it is the verdict of the onset itself; outside the
    /// range it is undecided.
    /// </summary>
    /// <param name="gain">The gain, in the unit of the path.</param>
    public StabilityVerdict VerdictAt(double gain)
    {
        foreach (var interval in Intervals)
        {
            if (!(gain >= interval.From && gain <= interval.To))
            {
                continue;
            }

            double low = UncertaintyOf(interval.From);
            double high = UncertaintyOf(interval.To);
            return gain - interval.From <= low ? interval.AtFrom
                : interval.To - gain <= high ? interval.AtTo
                : interval.Inside;
        }

        return StabilityVerdict.Undecided;
    }

    /// <summary>
    /// The onset nearest to a gain: by ratio among those of the same sign, otherwise by difference.
    /// </summary>
    /// <param name="gain">The gain, in the unit of the path.</param>
    /// <param name="nearest">The nearest onset.</param>
    /// <returns>Whether there is an onset at all.</returns>
    /// <exception cref="ArgumentOutOfRangeException">The gain is not finite.</exception>
    public bool TryGetNearest(double gain, [System.Diagnostics.CodeAnalysis.NotNullWhen(true)] out NearestOnset? nearest)
    {
        Guard.Finite(gain);
        var sameSign = Onsets.Where(o => Math.Abs(o.Gain) > o.GainUncertainty && Math.Sign(o.Gain) == Math.Sign(gain)).ToArray();
        var onset = sameSign.Length > 0
            ? sameSign.MinBy(o => Math.Abs(Math.Log(o.Gain / gain)))
            : Onsets.MinBy(o => Math.Abs(o.Gain - gain));
        nearest = onset is null ? null : new NearestOnset(onset, sameSign.Length > 0 ? onset.Gain / gain : null);
        return nearest is not null;
    }

    /// <summary>The whole result as text for a report.</summary>
    public override string ToString() => BoundaryText.Of(this);

    private double UncertaintyOf(double gain)
        => Onsets.Where(o => o.Gain == gain).Select(o => o.GainUncertainty).DefaultIfEmpty(0).Max();
}
