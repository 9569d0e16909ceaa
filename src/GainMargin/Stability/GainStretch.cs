namespace GainMargin;

/// <summary>A stretch of gains.</summary>
internal readonly record struct GainStretch(double From, double To)
{
    /// <summary>The same gains in stretches that lie apart, ascending.</summary>
    public static List<GainStretch> Merged(IEnumerable<GainStretch> stretches)
    {
        var merged = new List<GainStretch>();
        foreach (var stretch in stretches.OrderBy(s => s.From))
        {
            if (merged.Count > 0 && stretch.From <= merged[^1].To)
            {
                merged[^1] = merged[^1] with { To = Math.Max(merged[^1].To, stretch.To) };
            }
            else
            {
                merged.Add(stretch);
            }
        }

        return merged;
    }
}
