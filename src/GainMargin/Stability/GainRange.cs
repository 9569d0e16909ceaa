using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A range of gains to screen, in the unit of the path.</summary>
public readonly record struct GainRange
{
    private const double SmallestWidth = 1e-280;
    private const double GreatestWidth = 1e280;

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
    /// <exception cref="ArgumentException">
    /// An end is not finite; the range is empty, reversed, narrower than 1e-12 of its larger end, or too wide for a double.
    /// </exception>
    public static GainRange Between(double from, double to)
    {
        Guard.Finite(from);
        Guard.Finite(to);
        double width = to - from;
        double narrowest = Math.Max(SmallestWidth, 1e-12 * Math.Max(Math.Abs(from), Math.Abs(to)));
        return width >= narrowest && width <= GreatestWidth
            ? new GainRange(from, to)
            : throw new ArgumentException(
                Guard.Invariant($"The gain range from {from:R} to {to:R} is empty, reversed, too narrow to sample, or too wide for a double."), nameof(to));
    }

    /// <summary>The two ends.</summary>
    public override string ToString() => Guard.Invariant($"{From:G7} to {To:G7}");

    internal bool Contains(double gain) => gain >= From && gain <= To;

    internal void Check(string parameter)
    {
        if (From == To)
        {
            throw new ArgumentException("The gain range is empty; make one with GainRange.Between.", parameter);
        }
    }
}
