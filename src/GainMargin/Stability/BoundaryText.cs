using System.Globalization;
using System.Text;

namespace GainMargin;

/// <summary>Results as an engineer would paste them into a report.</summary>
internal static class BoundaryText
{
    public static string Of(StabilityBoundary boundary)
    {
        var text = new StringBuilder();
        string unit = Suffix(boundary.Unit);
        text.Append("Stability boundary: ").Append(boundary.Path)
            .Append(CultureInfo.InvariantCulture, $", {boundary.From:G7} to {boundary.To:G7}{unit}\n");
        int next = 0;
        AppendEnd(text, boundary.From, boundary.Unit, boundary.Intervals[0].AtFrom, boundary.Intervals[0].Inside);
        foreach (var interval in boundary.Intervals)
        {
            double middle = 0.5 * (interval.From + interval.To);
            for (; next < boundary.Onsets.Length && boundary.Onsets[next].Gain < middle; next++)
            {
                text.Append("  ").Append(Of(boundary.Onsets[next], boundary.Units, boundary.Unit)).Append('\n');
            }

            text.Append("  ").Append(Of(interval, boundary.Units, boundary.Unit)).Append('\n');
        }

        AppendEnd(text, boundary.To, boundary.Unit, boundary.Intervals[^1].AtTo, boundary.Intervals[^1].Inside);
        text.Append(CultureInfo.InvariantCulture, $"At the release gain {boundary.ReleaseGain:G7}{unit}: {Word(boundary.VerdictAt(boundary.ReleaseGain))}");
        text.Append(boundary.TryGetNearest(boundary.ReleaseGain, out var nearest) ? $"; nearest onset {nearest}\n" : "; no onset in this range\n");
        text.Append("Coverage: ").Append(boundary.Completeness).Append('\n');
        foreach (var caution in boundary.Cautions)
        {
            text.Append("Caution: ").Append(caution.Text).Append('\n');
        }

        return text.ToString().TrimEnd('\n');
    }

    public static string Of(GainInterval interval, UnitLabels units, string? unit)
    {
        var (from, to) = Ends(interval.From, interval.To);
        string line = $"{from} … {to}{Suffix(unit)}: {Word(interval.Inside)}";
        if (interval.LeastDamped is { } least)
        {
            line += string.Create(
                CultureInfo.InvariantCulture, $", away from its ends least damping ratio {least.DampingRatio:G4} at {least.Gain:G5} ({units.Show(least.Frequency)})");
        }

        return line;
    }

    public static string Of(StabilityOnset onset, UnitLabels units, string? unit)
    {
        string kind = onset.Kind switch
        {
            OnsetKind.Divergence => "divergence",
            OnsetKind.ThroughInfinity => "root through infinity",
            _ => "flutter",
        };
        string frequency = onset.Kind == OnsetKind.Flutter ? $" at {units.Show(onset.Frequency)}" : "";
        string slope = onset.GrowthRateSlope is { } rate ? $", growth rate slope {units.ShowRatePerGain(rate, unit)}" : "";
        return string.Create(
            CultureInfo.InvariantCulture,
            $"{(Math.Abs(onset.Gain) <= onset.GainUncertainty ? 0 : onset.Gain):G10}{Suffix(unit)} ± {onset.GainUncertainty:G2}: {kind}{frequency}, {Word(onset.Direction)}, growing roots {onset.Below.Growing} → {onset.Above.Growing}{slope}");
    }

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
        string low = from.ToString("G7", CultureInfo.InvariantCulture);
        string high = to.ToString("G7", CultureInfo.InvariantCulture);
        return low != high ? (low, high) : (from.ToString("R", CultureInfo.InvariantCulture), to.ToString("R", CultureInfo.InvariantCulture));
    }

    private static void AppendEnd(StringBuilder text, double gain, string? unit, StabilityVerdict at, StabilityVerdict inside)
    {
        if (at != inside)
        {
            text.Append(CultureInfo.InvariantCulture, $"  at {gain:G7}{Suffix(unit)}: {Word(at)}\n");
        }
    }

    private static string Suffix(string? unit) => string.IsNullOrWhiteSpace(unit) ? "" : " " + unit;
}
