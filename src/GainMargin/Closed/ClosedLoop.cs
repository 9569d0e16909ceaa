using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// A structure with its control law closed. Without dynamics in the loops
/// <c>M(g) = M + Σ g·a·b·sᵀ</c>, <c>D(g) = D + Σ g·v·b·sᵀ</c>, <c>K(g) = K + Σ g·p·b·sᵀ</c>. Immutable.
/// </summary>
public sealed class ClosedLoop
{
    private ClosedLoop(ElasticStructure structure, ControlLaw law, LoopedPencil pencil, double[] gains)
    {
        Structure = structure;
        Law = law;
        Pencil = pencil;
        Gains = gains;
        Matrices = pencil.At(gains);
        Mass = new NamedMatrix(structure.Dofs, structure.Dofs, Matrices.Mass);
        Damping = new NamedMatrix(structure.Dofs, structure.Dofs, Matrices.Damping);
        Stiffness = new NamedMatrix(structure.Dofs, structure.Dofs, Matrices.Stiffness);
    }

    /// <summary>The structure.</summary>
    public ElasticStructure Structure { get; }

    /// <summary>The control law with its gains.</summary>
    public ControlLaw Law { get; }

    /// <summary>Closed-loop mass <c>M(g)</c>, <c>n×n</c>; not symmetric with acceleration feedback between two places.</summary>
    public NamedMatrix Mass { get; }

    /// <summary>Closed-loop damping <c>D(g)</c>, <c>n×n</c>.</summary>
    public NamedMatrix Damping { get; }

    /// <summary>Closed-loop stiffness <c>K(g)</c>, <c>n×n</c>.</summary>
    public NamedMatrix Stiffness { get; }

    /// <summary>Closes a law around a structure.</summary>
    /// <param name="structure">The structure.</param>
    /// <param name="law">The control law.</param>
    /// <exception cref="ArgumentException">
    /// A sensor or actuator names a point that the structure does not have; a rate or acceleration loop sees a residual
    /// flexibility; the gains make a matrix overflow or the loop algebraically singular.
    /// </exception>
    public static ClosedLoop Create(ElasticStructure structure, ControlLaw law)
    {
        Guard.NotNull(structure);
        Guard.NotNull(law);
        var closed = new ClosedLoop(structure, law, LoopedPencil.Of(structure, law), EffectiveGains(law));
        return closed.Matrices.IsFinite
            ? closed
            : throw new ArgumentException(
                $"At the gains {law} a closed-loop matrix is not finite: a gain is too large, or the residual flexibility makes the loop singular.",
                nameof(law));
    }

    /// <summary>Structure and law.</summary>
    public override string ToString() => $"{Structure}; {Law}";

    internal LoopedPencil Pencil { get; }

    /// <summary>Gains in model units, outer gains multiplied by their inner ones.</summary>
    internal double[] Gains { get; }

    internal QuadraticPencil Matrices { get; }

    private static double[] EffectiveGains(ControlLaw law)
    {
        double[] gains = new double[law.Loops.Length];
        for (int k = 0; k < gains.Length; k++)
        {
            gains[k] = law.Loops[k].Gain * law.Loops[k].DisplayScale;
            if (law.InnerOf(law.Loops[k].Loop.Name) is { } inner)
            {
                var setting = law.Loops[law.IndexOf(inner)];
                gains[k] *= setting.Gain * setting.DisplayScale;
            }
        }

        return gains;
    }
}
