namespace GainMargin;

/// <summary>How a root reaches the boundary of stability.</summary>
public enum OnsetKind
{
    /// <summary>A complex pair reaches the imaginary axis.</summary>
    Flutter,

    /// <summary>A real root reaches zero.</summary>
    Divergence,

    /// <summary>
    /// Two undamped pairs meet on the imaginary axis and leave it: flutter of a loop that neither takes energy out nor puts any
    /// in. Damping, however small, may lower that gain by a finite amount.
    /// </summary>
    /// <remarks>H. Ziegler, Ing.-Arch. 20 (1952) 49–56.</remarks>
    LosslessCoalescence,

    /// <summary>A root passes through infinity: the closed-loop mass (or the instantaneous part of the loop) is singular.</summary>
    ThroughInfinity,
}
