using GainMargin.Numerics;

namespace GainMargin;

/// <summary>An onset whose root counts on both sides are not known yet.</summary>
internal sealed record OnsetDraft(
    double Gain, double Uncertainty, OnsetKind Kind, Frequency Frequency, double? Slope, double BackwardError,
    NamedVector Right, NamedVector Left, EnergyBalance? Energy)
{
    public bool IsTogetherWith(OnsetDraft other)
        => Math.Abs(Gain - other.Gain) <= (2 * (Uncertainty + other.Uncertainty)) + (4 * Tolerances.Epsilon * Math.Abs(Gain));

    /// <summary>
    /// Ascending by gain. Two branches of equal frequency that cross together, as in a structure of two equal halves, are one
    /// onset.
    /// </summary>
    public static List<OnsetDraft> WithoutRepeats(IEnumerable<OnsetDraft> found)
    {
        var kept = new List<OnsetDraft>();
        foreach (var onset in found.OrderBy(o => o.Gain).ThenBy(o => o.Frequency))
        {
            bool repeats = kept.Count > 0 && kept[^1].Kind == onset.Kind && kept[^1].IsTogetherWith(onset)
                && Math.Abs(kept[^1].Frequency.Radians - onset.Frequency.Radians) <= 1e-9 * onset.Frequency.Radians;
            if (!repeats)
            {
                kept.Add(onset);
            }
        }

        return kept;
    }
}
