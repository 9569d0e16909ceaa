using System.Collections.Immutable;
using System.Numerics;
using System.Text.Json.Serialization;

namespace GainMargin;

/// <summary>A root at one gain.</summary>
/// <param name="Gain">The gain, in the unit of the path.</param>
/// <param name="Root">The root, per unit of time.</param>
public readonly record struct LocusPoint(double Gain, Complex Root);

/// <summary>The way of one root through the range, its identity kept across crossings and meetings.</summary>
public sealed class RootLocus
{
    [JsonConstructor]
    internal RootLocus(ImmutableArray<LocusPoint> points) => Points = points;

    /// <summary>The points by ascending gain; where the root bends they are closer.</summary>
    public ImmutableArray<LocusPoint> Points { get; }
}
