using System.Globalization;
using System.Text;

namespace GainMargin;

/// <summary>Results as an engineer would paste them into a report.</summary>
internal static class BoundaryText
{
    /// <summary>An end this much smaller than the other is written as zero.</summary>
    private const double Negligible = 1e-25;

    public static string Of(StabilityBoundary boundary)
    {
        var text = new StringBuilder();
        string unit = Suffix(boundary.Unit);
        text.Append("Stability boundary: ").Append(boundary.Path)
            .Append(CultureInfo.InvariantCulture, $", {boundary.From:G7} to {boundary.To:G7}{unit}")
            .Append(boundary.RequiredDecayRate > 0 ? $"; every root must decay at {boundary.Units.ShowRate(boundary.RequiredDecayRate)} at least" : "").Append('\n');
        int next = 0;
        bool ofDecay = boundary.RequiredDecayRate > 0;
        AppendEnd(text, boundary.From, boundary.Unit, boundary.Intervals[0].AtFrom, boundary.Intervals[0].Inside, ofDecay);
        foreach (var interval in boundary.Intervals)
        {
            double middle = 0.5 * (interval.From + interval.To);
            for (; next < boundary.Onsets.Length && boundary.Onsets[next].Gain < middle; next++)
            {
                text.Append("  ").Append(Of(boundary.Onsets[next], boundary.Units, boundary.Unit, ofDecay)).Append('\n');
            }

            text.Append("  ").Append(Of(interval, boundary.Units, boundary.Unit, ofDecay)).Append('\n');
        }

        AppendEnd(text, boundary.To, boundary.Unit, boundary.Intervals[^1].AtTo, boundary.Intervals[^1].Inside, ofDecay);
        text.Append(CultureInfo.InvariantCulture, $"At the release gain {boundary.ReleaseGain:G7}{unit}: {Word(boundary.VerdictAt(boundary.ReleaseGain), ofDecay)}");
        text.Append(boundary.TryGetNearest(boundary.ReleaseGain, out var nearest) ? $"; nearest onset {nearest}\n" : "; no onset in this range\n");
        text.Append("Coverage: ").Append(boundary.Completeness)
            .Append(boundary.Intervals.Any(i => i.Inside == StabilityVerdict.Undecided) ? "; except in the undecided intervals" : "").Append('\n');
        foreach (var caution in boundary.Cautions)
        {
            text.Append("Caution: ").Append(caution.Text).Append('\n');
        }

        return text.ToString().TrimEnd('\n');
    }

    public static string Of(GainInterval interval, UnitLabels units, string? unit, bool ofDecay = false)
    {
        var (from, to) = Ends(interval.From, interval.To);
        string line = $"{from} … {to}{Suffix(unit)}: {Word(interval.Inside, ofDecay)}";
        if (interval.LargestGrowth is { } growth)
        {
            line += string.Create(
                CultureInfo.InvariantCulture, $", {(growth.Root.Real < 0 ? "slowest decay" : "largest growth rate")} {units.ShowRate(Math.Abs(growth.Root.Real))} at {growth.Gain:G5} ({units.Show(growth.Frequency)})");
        }
        else if (interval.LeastDamped is { } least)
        {
            line += string.Create(
                CultureInfo.InvariantCulture, $", away from its ends least damping ratio {least.DampingRatio:G4} at {least.Gain:G5} ({units.Show(least.Frequency)})");
        }

        return line;
    }

    /// <param name="onset">The onset.</param>
    /// <param name="units">Units of the model.</param>
    /// <param name="unit">Unit of the gain.</param>
    /// <param name="ofDecay">Whether it is a matter of a decay rate, not of stability.</param>
    public static string Of(StabilityOnset onset, UnitLabels units, string? unit, bool ofDecay = false)
    {
        string kind = onset.Kind switch
        {
            OnsetKind.Flutter when ofDecay => "a pair at the decay rate",
            OnsetKind.Divergence when ofDecay => "a real root at the decay rate",
            OnsetKind.Divergence => "divergence",
            OnsetKind.ThroughInfinity => "root through infinity",
            OnsetKind.LosslessCoalescence => "flutter by coalescence",
            _ => "flutter",
        };
        string frequency = onset.Kind is OnsetKind.Flutter or OnsetKind.LosslessCoalescence ? $" at {units.Show(onset.Frequency)}" : "";
        string slope = onset.GrowthRateSlope is { } rate ? $", growth rate slope {units.ShowRatePerGain(rate, unit)}" : "";
        string doubling = onset.TimeToDouble is { } time ? $", doubles in {units.ShowTime(time)} 1 dB past it" : "";
        return string.Create(
            CultureInfo.InvariantCulture,
            $"{(Math.Abs(onset.Gain) <= onset.GainUncertainty ? 0 : onset.Gain):G10}{Suffix(unit)} ± {onset.GainUncertainty:G2}: {kind}{frequency}, {Word(onset.Direction)}, {(ofDecay ? "roots short of it" : "growing roots")} {Growing(onset.Below)} → {Growing(onset.Above)}{slope}{doubling}");
    }

    private static string Growing(RootCount count) => count.Total == 0 ? "unknown" : count.Growing.ToString(CultureInfo.InvariantCulture);

    /// <summary>Where a decay rate is demanded the verdicts are about that.</summary>
    private static string Word(StabilityVerdict verdict, bool ofDecay) => !ofDecay ? Word(verdict) : verdict switch
    {
        StabilityVerdict.Stable => "decays fast enough",
        StabilityVerdict.Unstable => "too slow",
        StabilityVerdict.Marginal => "at the decay rate",
        _ => Word(verdict),
    };

    public static string Word(StabilityVerdict verdict) => verdict.ToString().ToLowerInvariant();

    private static string Word(CrossingDirection direction) => direction switch
    {
        CrossingDirection.Destabilising => "destabilising",
        CrossingDirection.Restabilising => "restabilising",
        _ => "touching",
    };

    /// <summary>The two ends in seven digits, or in all where seven do not tell them apart.</summary>
    private static (string From, string To) Ends(double from, double to)
    {
        double rounding = Negligible * Math.Max(Math.Abs(from), Math.Abs(to));
        (from, to) = (Math.Abs(from) <= rounding ? 0 : from, Math.Abs(to) <= rounding ? 0 : to);
        string low = from.ToString("G7", CultureInfo.InvariantCulture);
        string high = to.ToString("G7", CultureInfo.InvariantCulture);
        return low != high ? (low, high) : (from.ToString("R", CultureInfo.InvariantCulture), to.ToString("R", CultureInfo.InvariantCulture));
    }

    private static void AppendEnd(StringBuilder text, double gain, string? unit, StabilityVerdict at, StabilityVerdict inside, bool ofDecay)
    {
        if (at != inside)
        {
            text.Append(CultureInfo.InvariantCulture, $"  at {gain:G7}{Suffix(unit)}: {Word(at, ofDecay)}\n");
        }
    }

    private static string Suffix(string? unit) => string.IsNullOrWhiteSpace(unit) ? "" : " " + unit;
}
