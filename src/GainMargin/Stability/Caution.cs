namespace GainMargin;

/// <summary>What a caution is about.</summary>
public enum CautionKind
{
    /// <summary>Always there: what a linear screening is not.</summary>
    LinearScreening,

    /// <summary>With all loops open the structure is not stable, or could not be shown to be.</summary>
    OpenLoopNotStable,

    /// <summary>Rigid-body motion that no gain of the path restrains: its zero roots are no onset.</summary>
    FreeMotion,

    /// <summary>Roots that stay on the imaginary axis within rounding: no verdict follows from them.</summary>
    RootsOnAxis,

    /// <summary>A stretch of gains that rounding, the narrowest step or the budget left open, or that a second matrix contradicts.</summary>
    OpenStretch,

    /// <summary>The structure's own stiffness is not symmetric: intended for follower forces or friction, a slip otherwise.</summary>
    StiffnessNotSymmetric,

    /// <summary>A mode without damping that the loop does not move: it stays on the axis at every gain.</summary>
    UnseenMode,

    /// <summary>A loop that neither takes energy out nor puts any in: damping, however small, may lower its onsets.</summary>
    LosslessLoop,

    /// <summary>A root passes through infinity: beyond that gain the model without actuator dynamics means little.</summary>
    ThroughInfinity,

    /// <summary>The static matrix is singular for every gain, so divergences could only be sampled.</summary>
    SingularForEveryGain,

    /// <summary>The release gain lies outside the range screened.</summary>
    ReleaseOutsideRange,

    /// <summary>The release gain was not shown to be stable.</summary>
    ReleaseNotStable,
}

/// <summary>Something the reader of a result should know.</summary>
/// <param name="Kind">What it is about.</param>
/// <param name="Text">The caution in words.</param>
public sealed record Caution(CautionKind Kind, string Text)
{
    /// <summary>The caution in words.</summary>
    public override string ToString() => Text;
}
