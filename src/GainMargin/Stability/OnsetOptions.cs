namespace GainMargin;

/// <summary>Options of <see cref="OnsetFinder"/>.</summary>
public sealed record OnsetOptions
{
    /// <summary>
    /// How finely to sample where the path is swept, and for the least damping between onsets; by default as a sweep does.
    /// </summary>
    public SweepOptions Sweep { get; init; } = new();
}
