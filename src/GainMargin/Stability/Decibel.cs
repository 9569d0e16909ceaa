namespace GainMargin;

/// <summary>Ratios of gains in decibels.</summary>
internal static class Decibel
{
    private const double One = 1.1220184543019633;

    /// <summary>One decibel past a gain, upward or downward along the axis of gains.</summary>
    public static double Past(double gain, bool upward) => upward == gain > 0 ? gain * One : gain / One;
}
