using System.Globalization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A loop with the gain it is set to, in the number that is typed into the drive.</summary>
/// <param name="Loop">The loop.</param>
/// <param name="Gain">The number typed into the drive.</param>
/// <param name="GainUnit">Its unit as text, for reports.</param>
/// <param name="DisplayScale">Gain in model units per unit typed: <c>g = DisplayScale × Gain</c>. Not zero.</param>
public readonly record struct LoopSetting(FeedbackLoop Loop, double Gain, string? GainUnit = null, double DisplayScale = 1)
{
    /// <summary>The gain with its unit.</summary>
    public override string ToString()
    {
        string gain = Gain.ToString("G7", CultureInfo.InvariantCulture);
        string unit = string.IsNullOrWhiteSpace(GainUnit) ? "" : " " + GainUnit;
        return $"{Loop?.Name} = {gain}{unit}";
    }

    internal void Check(string parameter)
    {
        Guard.NotNull(Loop, parameter);
        if (!double.IsFinite(Gain))
        {
            throw new ArgumentException($"The gain of loop \"{Loop.Name}\" is {Guard.Show(Gain)}; it must be finite.", parameter);
        }

        if (!double.IsFinite(DisplayScale) || DisplayScale == 0)
        {
            throw new ArgumentException(
                $"The display scale of loop \"{Loop.Name}\" is {Guard.Show(DisplayScale)}; it must be finite and not zero.", parameter);
        }
    }
}
