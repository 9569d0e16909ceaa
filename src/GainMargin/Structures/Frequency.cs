using System.Globalization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A frequency, kept as an angular frequency in radians per unit of time. Not negative; may be unlimited.</summary>
public readonly record struct Frequency : IComparable<Frequency>
{
    private Frequency(double radians) => Radians = radians;

    /// <summary>The frequency of a root that passes through infinity.</summary>
    public static Frequency Unlimited { get; } = new(double.PositiveInfinity);

    /// <summary>Angular frequency, radians per unit of time.</summary>
    public double Radians { get; }

    /// <summary>Cycles per unit of time (hertz if the unit of time is the second).</summary>
    public double Cycles => Radians / (2 * Math.PI);

    /// <summary>Whether the frequency is infinite.</summary>
    public bool IsUnlimited => double.IsPositiveInfinity(Radians);

    /// <summary>From an angular frequency.</summary>
    /// <param name="perTime">Radians per unit of time.</param>
    /// <exception cref="ArgumentOutOfRangeException">Negative or not finite.</exception>
    public static Frequency FromRadians(double perTime) => new(NotNegative(perTime, nameof(perTime)));

    /// <summary>From a number of cycles.</summary>
    /// <param name="perTime">Cycles per unit of time.</param>
    /// <exception cref="ArgumentOutOfRangeException">Negative or not finite.</exception>
    public static Frequency FromCycles(double perTime) => new(Guard.Finite(NotNegative(perTime, nameof(perTime)) * (2 * Math.PI), nameof(perTime)));

    /// <inheritdoc/>
    public int CompareTo(Frequency other) => Radians.CompareTo(other.Radians);

    /// <summary>Whether the left frequency is the lower one.</summary>
    /// <param name="left">Left.</param>
    /// <param name="right">Right.</param>
    public static bool operator <(Frequency left, Frequency right) => left.Radians < right.Radians;

    /// <summary>Whether the left frequency is not the higher one.</summary>
    /// <param name="left">Left.</param>
    /// <param name="right">Right.</param>
    public static bool operator <=(Frequency left, Frequency right) => left.Radians <= right.Radians;

    /// <summary>Whether the left frequency is the higher one.</summary>
    /// <param name="left">Left.</param>
    /// <param name="right">Right.</param>
    public static bool operator >(Frequency left, Frequency right) => left.Radians > right.Radians;

    /// <summary>Whether the left frequency is not the lower one.</summary>
    /// <param name="left">Left.</param>
    /// <param name="right">Right.</param>
    public static bool operator >=(Frequency left, Frequency right) => left.Radians >= right.Radians;

    /// <summary>The angular frequency with its unit.</summary>
    public override string ToString() => IsUnlimited ? "unlimited" : Radians.ToString("G7", CultureInfo.InvariantCulture) + " rad per unit time";

    internal static Frequency Of(double radians) => new(Math.Abs(radians));

    private static double NotNegative(double value, string parameter)
        => Guard.Finite(value, parameter) >= 0
            ? value
            : throw new ArgumentOutOfRangeException(parameter, value, Guard.Invariant($"{parameter} is {value:R}; a frequency is not negative."));
}
