using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Options of <see cref="OnsetFinder"/>.</summary>
public sealed record OnsetOptions
{
    private readonly double _decayRate;
    private readonly int _maximumEvaluations = 1_000_000;

    /// <summary>
    /// Decay rate <c>σ ≥ 0</c> that every root must reach, per unit of time, by default zero: onsets are then the gains at which a
    /// root reaches <c>Re s = −σ</c>, and <em>stable</em> means that every root decays faster.
    /// </summary>
    public double DecayRate { get => _decayRate; init => _decayRate = Guard.NotNegative(value, nameof(DecayRate)); }

    /// <summary>
    /// Whether each stable interval is confirmed at its middle by the eigenvalues of a second matrix of another kind, by default
    /// yes: it costs one decomposition for each, and guards against what tiny masses do to the first.
    /// </summary>
    public bool Confirm { get; init; } = true;

    /// <summary>
    /// Whether the least damping and the largest growth inside each interval are looked for, by default yes; without, a result
    /// of many modes takes a fraction of the time.
    /// </summary>
    public bool Extremes { get; init; } = true;

    /// <summary>
    /// Most evaluations of the loop in the search, by default a million, some hundred times what a loop of 200 modes takes; a
    /// search that needs more is given up, the path is swept, and the result says so.
    /// </summary>
    public int MaximumEvaluations
    {
        get => _maximumEvaluations;
        init => _maximumEvaluations = Guard.AtLeast(value, 100, nameof(MaximumEvaluations));
    }

    /// <summary>How finely to sample where the path has to be swept; by default as a sweep does.</summary>
    public SweepOptions Sweep { get; init; } = new();
}
