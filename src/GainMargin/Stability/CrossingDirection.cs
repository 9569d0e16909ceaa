namespace GainMargin;

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
