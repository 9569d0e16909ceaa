using System.Text.Json.Serialization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>How the roots of a closed loop are spread; a conjugate pair counts as two.</summary>
/// <param name="Growing">Roots shown to grow.</param>
/// <param name="Decaying">Roots shown to decay.</param>
/// <param name="Marginal">Roots shown to lie on the imaginary axis, such as those of a free rigid-body motion.</param>
/// <param name="Undecided">Roots nearer to the axis than they are known.</param>
public readonly record struct RootCount(int Growing, int Decaying, int Marginal, int Undecided)
{
    /// <summary>All roots.</summary>
    [JsonIgnore]
    public int Total => Growing + Decaying + Marginal + Undecided;

    /// <summary>The verdict that the count alone gives.</summary>
    [JsonIgnore]
    public StabilityVerdict Verdict
        => Growing > 0 ? StabilityVerdict.Unstable
        : Undecided > 0 || Total == 0 ? StabilityVerdict.Undecided
        : Marginal > 0 ? StabilityVerdict.Marginal
        : StabilityVerdict.Stable;

    /// <summary>The count as text.</summary>
    public override string ToString()
    {
        string text = Guard.Invariant($"{Growing} growing, {Decaying} decaying");
        text += Marginal > 0 ? Guard.Invariant($", {Marginal} on the axis") : "";
        return text + (Undecided > 0 ? Guard.Invariant($", {Undecided} undecided") : "");
    }

    internal static RootCount Of(IEnumerable<StabilityVerdict> roots)
    {
        var count = default(RootCount);
        foreach (var root in roots)
        {
            count = root switch
            {
                StabilityVerdict.Unstable => count with { Growing = count.Growing + 1 },
                StabilityVerdict.Stable => count with { Decaying = count.Decaying + 1 },
                StabilityVerdict.Marginal => count with { Marginal = count.Marginal + 1 },
                _ => count with { Undecided = count.Undecided + 1 },
            };
        }

        return count;
    }
}
