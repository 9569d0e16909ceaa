using System.Collections.Immutable;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>What a loop sees: a weighted sum of displacements of named points, <c>y = sᵀq</c>. Immutable.</summary>
public sealed class Sensor
{
    private Sensor(ImmutableArray<PatternWeight> weights) => Weights = weights;

    /// <summary>The weights.</summary>
    public ImmutableArray<PatternWeight> Weights { get; }

    /// <summary>Sees one point.</summary>
    /// <param name="dof">Name of the point.</param>
    /// <exception cref="ArgumentException">The name is blank.</exception>
    public static Sensor At(string dof) => Weighted(new PatternWeight(Guard.Name(dof), 1));

    /// <summary>Sees the motion of one point relative to another.</summary>
    /// <param name="dof">Name of the point.</param>
    /// <param name="reference">Name of the point it is measured from.</param>
    /// <exception cref="ArgumentException">A name is blank, or both are the same.</exception>
    public static Sensor Difference(string dof, string reference) => new(WeightedPattern.Difference("sensor", Guard.Name(dof), Guard.Name(reference), nameof(reference)));

    /// <summary>Sees a weighted sum.</summary>
    /// <param name="weights">The points and their weights.</param>
    /// <exception cref="ArgumentException">All weights are zero, one is not finite, or a name occurs twice.</exception>
    public static Sensor Weighted(params ReadOnlySpan<PatternWeight> weights) => new(WeightedPattern.Checked("sensor", weights));

    /// <summary>The weighted sum as text.</summary>
    public override string ToString() => WeightedPattern.Show(Weights);
}
