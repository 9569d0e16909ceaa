using System.Numerics;
using System.Text.Json.Serialization;

namespace GainMargin;

/// <summary>The least damped root found inside an interval.</summary>
public sealed class ClosestApproach
{
    [JsonConstructor]
    internal ClosestApproach(double gain, Complex root, double dampingRatio)
    {
        Gain = gain;
        Root = root;
        DampingRatio = dampingRatio;
    }

    /// <summary>Gain at which it was found.</summary>
    public double Gain { get; }

    /// <summary>The root <c>s</c>.</summary>
    public Complex Root { get; }

    /// <summary>Damping ratio <c>ζ = −Re s/|s|</c>, negative where it grows; zero where it cannot be told from zero.</summary>
    public double DampingRatio { get; }

    /// <summary>Frequency <c>|Im s|</c>.</summary>
    [JsonIgnore]
    public Frequency Frequency => Frequency.Of(Root.Imaginary);
}

/// <summary>A stretch of gains between two onsets, or an end of the range.</summary>
public sealed class GainInterval
{
    [JsonConstructor]
    internal GainInterval(
        double from, double to, StabilityVerdict atFrom, StabilityVerdict inside, StabilityVerdict atTo, RootCount count, ClosestApproach? leastDamped)
    {
        From = from;
        To = to;
        AtFrom = atFrom;
        Inside = inside;
        AtTo = atTo;
        Count = count;
        LeastDamped = leastDamped;
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

    /// <summary>Ends and verdict.</summary>
    public override string ToString() => BoundaryText.Of(this, UnitLabels.None, null);
}
