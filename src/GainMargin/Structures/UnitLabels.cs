using System.Globalization;

namespace GainMargin;

/// <summary>
/// Names of the units the caller works in. They are labels and convert nothing: any consistent set of units will do. Hertz
/// is shown only when <see cref="Time"/> is <c>s</c>.
/// </summary>
public sealed record UnitLabels
{
    /// <summary>Unit of length, such as <c>m</c>.</summary>
    public string? Length { get; init; }

    /// <summary>Unit of force, such as <c>N</c>.</summary>
    public string? Force { get; init; }

    /// <summary>Unit of time, such as <c>s</c>.</summary>
    public string? Time { get; init; }

    internal static UnitLabels None { get; } = new();

    internal bool IsSeconds => Time == "s";

    private string TimeName => string.IsNullOrWhiteSpace(Time) ? "unit time" : Time;

    internal string Show(Frequency frequency)
    {
        if (frequency.IsUnlimited)
        {
            return "unlimited";
        }

        string radians = frequency.Radians.ToString("G7", CultureInfo.InvariantCulture);
        return IsSeconds
            ? $"{radians} rad/s ({frequency.Cycles.ToString("G6", CultureInfo.InvariantCulture)} Hz)"
            : $"{radians} rad/{TimeName}";
    }

    /// <summary>A rate, such as <c>0.1 1/s</c>.</summary>
    internal string ShowRate(double rate) => $"{rate.ToString("G4", CultureInfo.InvariantCulture)} 1/{TimeName}";

    /// <summary>A time, such as <c>0.1 s</c>.</summary>
    internal string ShowTime(double time)
        => string.IsNullOrWhiteSpace(Time) ? $"{time.ToString("G4", CultureInfo.InvariantCulture)} units of time" : $"{time.ToString("G4", CultureInfo.InvariantCulture)} {Time}";

    /// <summary>A rate per unit of gain, such as <c>0.1 1/s per N/m</c>.</summary>
    internal string ShowRatePerGain(double rate, string? gainUnit)
    {
        string gain = string.IsNullOrWhiteSpace(gainUnit) ? "unit gain" : gainUnit;
        return $"{ShowRate(rate)} per {gain}";
    }
}
