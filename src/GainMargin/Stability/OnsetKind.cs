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

/// <summary>What an onset does as the gain grows.</summary>
public enum CrossingDirection
{
    /// <summary>The number of growing roots stays the same: a root reaches the boundary and turns back, or two change places.</summary>
    Touching,

    /// <summary>The number of growing roots increases with the gain.</summary>
    Destabilising,

    /// <summary>The number of growing roots decreases with the gain.</summary>
    Restabilising,
}
