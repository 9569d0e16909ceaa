namespace GainMargin;

/// <summary>
/// What can be said of a closed loop. Nothing is called stable that was not shown to be; the default is
/// <see cref="Undecided"/>.
/// </summary>
public enum StabilityVerdict
{
    /// <summary>It could not be decided: a root is nearer to the imaginary axis than it is known, or nothing was screened.</summary>
    Undecided,

    /// <summary>Every root decays.</summary>
    Stable,

    /// <summary>No root grows, and one or more were shown to lie on the imaginary axis.</summary>
    Marginal,

    /// <summary>At least one root grows.</summary>
    Unstable,
}
