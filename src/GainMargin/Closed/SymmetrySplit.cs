using System.Collections.Immutable;
using System.Text;

namespace GainMargin;

/// <summary>
/// Closed-loop stiffness and damping in symmetric and skew parts. The symmetric part of <c>K</c> is conservative, its skew
/// part circulatory: it can feed energy into a motion that goes round. The symmetric part of <c>D</c> dissipates, its skew
/// part is gyroscopic and does no work.
/// </summary>
/// <remarks>D. R. Merkin, Introduction to the Theory of Stability, Springer 1997, ch. 6 (from memory).</remarks>
public sealed class SymmetrySplit
{
    internal SymmetrySplit(
        SymmetricPart conservative, SplitPart circulatory, SymmetricPart dissipative, SplitPart gyroscopic, SplitPart skewMass,
        ImmutableArray<DecidingFact> facts)
    {
        Conservative = conservative;
        Circulatory = circulatory;
        Dissipative = dissipative;
        Gyroscopic = gyroscopic;
        SkewMass = skewMass;
        Facts = facts;
    }

    /// <summary>Symmetric stiffness.</summary>
    public SymmetricPart Conservative { get; }

    /// <summary>Skew stiffness.</summary>
    public SplitPart Circulatory { get; }

    /// <summary>Symmetric damping.</summary>
    public SymmetricPart Dissipative { get; }

    /// <summary>Skew damping.</summary>
    public SplitPart Gyroscopic { get; }

    /// <summary>Skew mass, from acceleration feedback between two places.</summary>
    public SplitPart SkewMass { get; }

    /// <summary>The classical theorems that already decide.</summary>
    public ImmutableArray<DecidingFact> Facts { get; }

    /// <summary>The parts that are there, such as <c>conservative + circulatory + dissipative</c>.</summary>
    public string Classification
    {
        get
        {
            (string Name, SplitPart Part)[] parts =
            [
                ("conservative", Conservative), ("circulatory", Circulatory), ("dissipative", Dissipative), ("gyroscopic", Gyroscopic), ("skew mass", SkewMass),
            ];
            var there = parts.Where(p => !p.Part.IsNegligible).Select(p => p.Name).ToArray();
            return there.Length == 0 ? "inertia only" : string.Join(" + ", there);
        }
    }

    /// <summary>The parts, their shares and the theorems that decide.</summary>
    public override string ToString()
    {
        var text = new StringBuilder();
        text.Append("stiffness: conservative ").Append(Conservative).Append("; circulatory ").Append(Circulatory).Append('\n');
        text.Append("damping:   dissipative ").Append(Dissipative).Append("; gyroscopic ").Append(Gyroscopic);
        if (!SkewMass.IsNegligible)
        {
            text.Append("\nmass:      skew ").Append(SkewMass);
        }

        foreach (var fact in Facts)
        {
            text.Append('\n').Append(fact);
        }

        return text.ToString();
    }
}
