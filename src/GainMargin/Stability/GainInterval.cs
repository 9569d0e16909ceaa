using System.Text.Json.Serialization;

namespace GainMargin;

/// <summary>A stretch of gains between two onsets, or an end of the range.</summary>
public sealed class GainInterval
{
    [JsonConstructor]
    internal GainInterval(
        double from, double to, StabilityVerdict atFrom, StabilityVerdict inside, StabilityVerdict atTo, RootCount count, ClosestApproach? leastDamped,
        ClosestApproach? largestGrowth)
    {
        From = from;
        To = to;
        AtFrom = atFrom;
        Inside = inside;
        AtTo = atTo;
        Count = count;
        LeastDamped = leastDamped;
        LargestGrowth = largestGrowth;
    }

    /// <summary>Lower end.</summary>
    public double From { get; }

    /// <summary>Upper end.</summary>
    public double To { get; }

    /// <summary>Verdict at the lower end itself.</summary>
    public StabilityVerdict AtFrom { get; }

    /// <summary>Verdict inside.</summary>
    public StabilityVerdict Inside { get; }

    /// <summary>Verdict at the upper end itself.</summary>
    public StabilityVerdict AtTo { get; }

    /// <summary>Roots inside.</summary>
    public RootCount Count { get; }

    /// <summary>
    /// The least damped root inside and where, among the gains sampled and refined; a twentieth of the interval is left out
    /// beside an end with another verdict, since damping vanishes there by itself. <see langword="null"/> where the
    /// interval was not settled.
    /// </summary>
    public ClosestApproach? LeastDamped { get; }

    /// <summary>
    /// The root that grows fastest inside an unstable interval and where, among the gains sampled and refined: a hump if it is
    /// small, an explosion if it is not. <see langword="null"/> elsewhere.
    /// </summary>
    public ClosestApproach? LargestGrowth { get; }

    /// <summary>Ends and verdict.</summary>
    public override string ToString() => BoundaryText.Of(this, UnitLabels.None, null);
}
