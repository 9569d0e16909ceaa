using System.Text.Json.Serialization;

namespace GainMargin;

/// <summary>One gain at which a root reaches the boundary of stability, with the evidence for it.</summary>
public sealed class StabilityOnset
{
    [JsonConstructor]
    internal StabilityOnset(
        double gain, double gainUncertainty, OnsetKind kind, CrossingDirection direction, Frequency frequency,
        double? growthRateSlope, double backwardError, NamedVector rightMode, NamedVector leftMode,
        RootCount below, RootCount above, EnergyBalance? energy, double? timeToDouble)
    {
        Gain = gain;
        GainUncertainty = gainUncertainty;
        Kind = kind;
        Direction = direction;
        Frequency = frequency;
        GrowthRateSlope = growthRateSlope;
        BackwardError = backwardError;
        RightMode = rightMode;
        LeftMode = leftMode;
        Below = below;
        Above = above;
        Energy = energy;
        TimeToDouble = timeToDouble;
    }

    /// <summary>The gain, in the unit of the path.</summary>
    public double Gain { get; }

    /// <summary>Bound of its rounding error, for the matrices as given.</summary>
    public double GainUncertainty { get; }

    /// <summary>Flutter, divergence or loss through infinity.</summary>
    public OnsetKind Kind { get; }

    /// <summary>Whether the loop becomes less or more stable as the gain grows.</summary>
    public CrossingDirection Direction { get; }

    /// <summary>Frequency of the motion; zero at divergence, unlimited through infinity.</summary>
    public Frequency Frequency { get; }

    /// <summary>
    /// Derivative of the growth rate by the gain, <c>Re ds/dg</c>; <see langword="null"/> where it is unbounded (a double
    /// zero root, or a root at infinity).
    /// </summary>
    public double? GrowthRateSlope { get; }

    /// <summary>Normwise backward error of root and right mode, in coordinates of unit mass.</summary>
    /// <remarks>F. Tisseur, Linear Algebra Appl. 309 (2000) 339–361.</remarks>
    public double BackwardError { get; }

    /// <summary>Right mode: the shape of the motion. Its largest component is one.</summary>
    public NamedVector RightMode { get; }

    /// <summary>Left mode: where a force excites it. Its largest component is one.</summary>
    public NamedVector LeftMode { get; }

    /// <summary>Roots just below the gain.</summary>
    public RootCount Below { get; }

    /// <summary>Roots just above the gain.</summary>
    public RootCount Above { get; }

    /// <summary>Energy balance over one cycle at a flutter onset; <see langword="null"/> where there is no cycle.</summary>
    public EnergyBalance? Energy { get; }

    /// <summary>
    /// Time in which the motion doubles one decibel past the onset, <c>ln 2/Re s</c>; <see langword="null"/> where the unstable
    /// interval does not reach that far, where another motion grows already, or where growth was not looked for.
    /// </summary>
    public double? TimeToDouble { get; }

    /// <summary>Kind, gain, frequency and what changes.</summary>
    public override string ToString() => BoundaryText.Of(this, UnitLabels.None, null);
}
