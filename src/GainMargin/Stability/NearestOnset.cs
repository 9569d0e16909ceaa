using System.Globalization;

namespace GainMargin;

/// <summary>The onset nearest to a gain.</summary>
/// <param name="Onset">The onset.</param>
/// <param name="Ratio">Onset gain over the gain; <see langword="null"/> where they differ in sign or the gain is zero.</param>
public sealed record NearestOnset(StabilityOnset Onset, double? Ratio)
{
    /// <summary>The ratio in decibels, <c>20·log₁₀</c>: positive where the gain must rise to reach the onset.</summary>
    public double? Decibels => Ratio is { } ratio ? 20 * Math.Log10(ratio) : null;

    /// <summary>Gain, ratio and decibels.</summary>
    public override string ToString()
    {
        string gain = Onset.Gain.ToString("G7", CultureInfo.InvariantCulture);
        return Ratio is { } ratio
            ? $"{gain} (ratio {ratio.ToString("G5", CultureInfo.InvariantCulture)}, {Decibels!.Value.ToString("+0.00;-0.00;0.00", CultureInfo.InvariantCulture)} dB)"
            : gain;
    }
}
