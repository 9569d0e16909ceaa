using System.Collections.Immutable;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>What a loop pushes: a force pattern over named points, <c>f = b·u</c>. Immutable.</summary>
public sealed class Actuator
{
    private Actuator(ImmutableArray<PatternWeight> weights) => Weights = weights;

    /// <summary>The weights.</summary>
    public ImmutableArray<PatternWeight> Weights { get; }

    /// <summary>Pushes one point against the ground.</summary>
    /// <param name="dof">Name of the point.</param>
    /// <exception cref="ArgumentException">The name is blank.</exception>
    public static Actuator At(string dof) => Weighted(new PatternWeight(Guard.Name(dof), 1));

    /// <summary>Pushes one point and pulls another by the same force.</summary>
    /// <param name="dof">Name of the point pushed.</param>
    /// <param name="reaction">Name of the point that takes the reaction.</param>
    /// <exception cref="ArgumentException">A name is blank, or both are the same.</exception>
    public static Actuator Between(string dof, string reaction) => new(WeightedPattern.Difference("actuator", Guard.Name(dof), Guard.Name(reaction), nameof(reaction)));

    /// <summary>Pushes a weighted pattern.</summary>
    /// <param name="weights">The points and their weights.</param>
    /// <exception cref="ArgumentException">All weights are zero, one is not finite, or a name occurs twice.</exception>
    public static Actuator Weighted(params ReadOnlySpan<PatternWeight> weights) => new(WeightedPattern.Checked("actuator", weights));

    /// <summary>The pattern as text.</summary>
    public override string ToString() => WeightedPattern.Show(Weights);
}
