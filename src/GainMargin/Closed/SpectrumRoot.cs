using System.Globalization;
using System.Numerics;

namespace GainMargin;

/// <summary>One root <c>s</c> of <c>det(s²M + sD + K) = 0</c>.</summary>
public sealed class SpectrumRoot
{
    internal SpectrumRoot(Complex value, double uncertainty, StabilityVerdict verdict, double backwardError, NamedVector right, NamedVector left)
    {
        Value = value;
        Uncertainty = uncertainty;
        Verdict = verdict;
        BackwardError = backwardError;
        RightMode = right;
        LeftMode = left;
    }

    /// <summary>The root, per unit of time.</summary>
    public Complex Value { get; }

    /// <summary>
    /// Bound of its rounding error, per unit of time, for the matrices as given. Zero for the zero roots of a motion without
    /// stiffness: that motion is split off, and the roots are exact for matrices within rounding of those given.
    /// </summary>
    public double Uncertainty { get; }

    /// <summary>Whether this root decays, grows, lies on the axis, or cannot be told.</summary>
    public StabilityVerdict Verdict { get; }

    /// <summary>Frequency of the damped oscillation, <c>|Im s|</c>; zero for a real root.</summary>
    public Frequency Frequency => Frequency.Of(Value.Imaginary);

    /// <summary>Damping ratio <c>ζ = −Re s/|s|</c>; <see langword="null"/> for a zero root.</summary>
    public double? DampingRatio => Value == Complex.Zero ? null : (0 - Value.Real) / Complex.Abs(Value);

    /// <summary>Logarithmic decrement <c>δ = 2πζ/√(1−ζ²)</c>; <see langword="null"/> for a root that does not oscillate.</summary>
    public double? LogarithmicDecrement => Value.Imaginary == 0 ? null : -2 * Math.PI * Value.Real / Math.Abs(Value.Imaginary);

    /// <summary>
    /// Normwise backward error of the root with its right mode, <c>‖Qv‖/((|s|²‖M‖+|s|‖D‖+‖K‖)‖v‖)</c>, in coordinates of
    /// unit mass.
    /// </summary>
    /// <remarks>F. Tisseur, Backward error and condition of polynomial eigenvalue problems, Linear Algebra Appl. 309 (2000) 339–361.</remarks>
    public double BackwardError { get; }

    /// <summary>Right mode <c>v</c>, <c>Q(s)v = 0</c>; its largest component is one.</summary>
    public NamedVector RightMode { get; }

    /// <summary>Left mode <c>w</c>, <c>wᴴQ(s) = 0</c>; its largest component is one. It shows where a force excites the mode.</summary>
    public NamedVector LeftMode { get; }

    /// <summary>Root, damping and verdict.</summary>
    public override string ToString()
    {
        string sign = Value.Imaginary < 0 ? "-" : "+";
        string imaginary = Value.Imaginary == 0 ? "" : $" {sign} {Math.Abs(Value.Imaginary).ToString("G7", CultureInfo.InvariantCulture)}i";
        string damping = DampingRatio is { } ratio ? $", damping ratio {ratio.ToString("G4", CultureInfo.InvariantCulture)}" : "";
        return $"{Value.Real.ToString("G7", CultureInfo.InvariantCulture)}{imaginary}{damping}, {Verdict.ToString().ToLowerInvariant()}";
    }
}
