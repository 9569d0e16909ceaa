using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A range of gains to screen, in the unit of the path.</summary>
public readonly record struct GainRange
{
    private GainRange(double from, double to)
    {
        From = from;
        To = to;
    }

    /// <summary>Lower end.</summary>
    public double From { get; }

    /// <summary>Upper end.</summary>
    public double To { get; }

    /// <summary><c>To − From</c>.</summary>
    public double Width => To - From;

    /// <summary>Makes a range.</summary>
    /// <param name="from">Lower end.</param>
    /// <param name="to">Upper end, above the lower one.</param>
    /// <exception cref="ArgumentException">An end is not finite, or the range is empty, reversed or too wide for a double.</exception>
    public static GainRange Between(double from, double to)
    {
        Guard.Finite(from);
        Guard.Finite(to);
        return to > from && double.IsFinite(to - from)
            ? new GainRange(from, to)
            : throw new ArgumentException(Guard.Invariant($"The gain range from {from:R} to {to:R} is empty, reversed or too wide."), nameof(to));
    }

    /// <summary>The two ends.</summary>
    public override string ToString() => Guard.Invariant($"{From:G7} to {To:G7}");

    internal bool Contains(double gain) => gain >= From && gain <= To;

    internal void Check()
    {
        if (From == To)
        {
            throw new ArgumentException("The gain range is empty; make one with GainRange.Between.", nameof(GainRange));
        }
    }
}
