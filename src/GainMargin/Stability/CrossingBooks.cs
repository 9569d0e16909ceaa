namespace GainMargin;

/// <summary>One change of the number of growing roots as the value rises; unknown where the direction is.</summary>
internal readonly record struct CrossingEvent(double Value, int? Change);

/// <summary>
/// Growing roots along a path from those at the base value, the departure of the roots that lie on the axis there, and the
/// crossings in between.
/// </summary>
internal sealed class CrossingBooks(double baseValue, int atBase, int? justBelow, int? justAbove, IReadOnlyList<CrossingEvent> events, IReadOnlyList<GainStretch> open)
{
    /// <summary>Growing roots at a value, or <see langword="null"/> where the way from the base is not known.</summary>
    public int? GrowingAt(double value)
    {
        if (value == baseValue)
        {
            return atBase;
        }

        bool upward = value > baseValue;
        double low = Math.Min(value, baseValue);
        double high = Math.Max(value, baseValue);
        int? count = atBase + (upward ? justAbove : justBelow);
        if (open.Any(s => s.From < high && s.To > low))
        {
            return null;
        }

        foreach (var crossing in events.Where(e => e.Value > low && e.Value < high))
        {
            count += upward ? crossing.Change : -crossing.Change;
        }

        return count;
    }
}
