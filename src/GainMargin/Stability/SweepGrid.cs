namespace GainMargin;

/// <summary>
/// First samples of a piece: never further apart than the widest step, and towards zero gain in octaves, since a loop
/// moves the roots most where it begins to act.
/// </summary>
internal static class SweepGrid
{
    /// <summary>Octaves taken towards zero: about 72 dB.</summary>
    private const int Octaves = 12;

    /// <summary>Share of a step by which a sample may be moved aside; steps are shorter by as much.</summary>
    public const double Aside = 0.05;

    /// <param name="from">Lower end of the piece.</param>
    /// <param name="to">Upper end of the piece.</param>
    /// <param name="width">Width of the whole range.</param>
    /// <param name="options">The widest step and the budget.</param>
    /// <param name="release">The release value, which is sampled with its half and its double: it is what the reader looks at.</param>
    public static double[] Between(double from, double to, double width, SweepOptions options, double release)
    {
        // More nodes than the budget allows would not be reached.
        double steps = Math.Ceiling((to - from) / ((1 - Aside) * options.MaximumStep * width));
        int count = (int)Math.Clamp(steps, 1, options.MaximumDecompositions + 1.0);
        double reach = Math.Max(Math.Abs(from), Math.Abs(to));
        var nodes = new SortedSet<double> { from, to, 0.5 * release, release, 2 * release };
        for (int i = 1; i < count; i++)
        {
            nodes.Add(from + ((to - from) * i / count));
        }

        for (int k = 1; k <= Octaves; k++)
        {
            double octave = Math.ScaleB(reach, -k);
            nodes.Add(octave);
            nodes.Add(-octave);
        }

        return [.. nodes.Where(g => g >= from && g <= to)];
    }
}
