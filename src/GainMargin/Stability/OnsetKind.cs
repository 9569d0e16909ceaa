namespace GainMargin;

/// <summary>How a root reaches the boundary of stability.</summary>
public enum OnsetKind
{
    /// <summary>A complex pair reaches the imaginary axis.</summary>
    Flutter,

    /// <summary>A real root reaches zero.</summary>
    Divergence,

    /// <summary>A root passes through infinity: the closed-loop mass (or the instantaneous part of the loop) is singular.</summary>
    ThroughInfinity,
}
