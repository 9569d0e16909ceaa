using GainMargin.Numerics;

namespace GainMargin;

/// <summary>How finely a sweep samples.</summary>
public sealed record SweepOptions
{
    private readonly double _maximumStep = 1.0 / 24;
    private readonly double _minimumStep = 1e-10;
    private readonly int _maximumDecompositions = 4000;

    /// <summary>
    /// Widest step as a fraction of the range, by default 1/24: an excursion into instability and back that is narrower
    /// can only be missed where the slopes at both ends of a step give no sign of it.
    /// </summary>
    public double MaximumStep { get => _maximumStep; init => _maximumStep = Guard.InRange(value, 0, 1, nameof(MaximumStep)); }

    /// <summary>
    /// Narrowest step as a fraction of the range, by default 1e-10; where it does not settle a question, the stretch is
    /// reported as undecided. It is far above rounding and needs some thirty halvings.
    /// </summary>
    public double MinimumStep { get => _minimumStep; init => _minimumStep = Guard.InRange(value, 1e-14, 0.1, nameof(MinimumStep)); }

    /// <summary>
    /// Most eigenvalue decompositions spent on the search, by default 4000, some forty times what a law of 40 degrees of
    /// freedom takes; what is not settled by then is reported as undecided. Verdicts take a few more.
    /// </summary>
    public int MaximumDecompositions
    {
        get => _maximumDecompositions;
        init => _maximumDecompositions = Guard.AtLeast(value, 2, nameof(MaximumDecompositions));
    }

    /// <summary>Whether the result keeps all root loci, by default yes: they are what one plots.</summary>
    public bool KeepLoci { get; init; } = true;

    internal void Check(string parameter)
    {
        if (MinimumStep > MaximumStep)
        {
            throw new ArgumentException(Guard.Invariant($"The narrowest step {MinimumStep:R} is wider than the widest, {MaximumStep:R}."), parameter);
        }
    }
}
