namespace GainMargin.Numerics;

/// <summary>
/// A real function of <c>z</c> over a cell <c>[m − r, m + r]</c>: value and slope at the middle, bounds of the moduli of its first
/// and second derivative over the cell, and the rounding of value and slope.
/// </summary>
/// <param name="Value"><c>f(m)</c>.</param>
/// <param name="Slope"><c>f′(m)</c>.</param>
/// <param name="First">Bound of <c>|f′|</c> over the cell.</param>
/// <param name="Second">Bound of <c>|f″|</c> over the cell.</param>
/// <param name="Radius"><c>r</c>.</param>
/// <param name="Rounding">Error of the value.</param>
/// <param name="SlopeRounding">Error of the slope.</param>
internal readonly record struct Bounded(
    double Value, double Slope, double First, double Second, double Radius, double Rounding, double SlopeRounding)
{
    /// <summary>Bound of <c>|f|</c> over the cell.</summary>
    public double Greatest => Math.Abs(Value) + (First * Radius);

    /// <summary>A lower bound of the function over the cell.</summary>
    public double Low => Value - (First * Radius) - Rounding;

    /// <summary>An upper bound of the function over the cell.</summary>
    public double High => Value + (First * Radius) + Rounding;

    /// <summary>Whether the function has no zero in the cell.</summary>
    public bool HasNoZero => Math.Abs(Value) > (First * Radius) + Rounding;

    /// <summary>Whether the function is strictly monotone over the cell.</summary>
    public bool IsMonotone => Math.Abs(Slope) > (Second * Radius) + SlopeRounding;

    /// <summary>Whether the function cannot be told from zero anywhere in the cell.</summary>
    public bool IsLostInRounding => Greatest <= 2 * Rounding;

    /// <summary><c>c₀ + c₁z</c> at <paramref name="z"/>, whose coefficients carry a relative rounding.</summary>
    public static Bounded Linear(double constant, double slope, double z, double radius)
        => new(
            constant + (slope * z), slope, Math.Abs(slope), 0, radius,
            Tolerances.Entry * (Math.Abs(constant) + Math.Abs(slope * z)), Tolerances.Entry * Math.Abs(slope));

    /// <summary><c>t² + h</c>.</summary>
    public static Bounded Parabola(double t, double h, double radius)
    {
        double reach = Math.Abs(t) + radius;
        return new Bounded((t * t) + h, 2 * t, 2 * reach, 2, radius, Tolerances.Entry * ((t * t) + Math.Abs(h)), Tolerances.Entry * 2 * Math.Abs(t));
    }

    public static Bounded operator +(Bounded a, Bounded b)
        => new(
            a.Value + b.Value, a.Slope + b.Slope, a.First + b.First, a.Second + b.Second, a.Radius,
            a.Rounding + b.Rounding, a.SlopeRounding + b.SlopeRounding);

    public static Bounded operator -(Bounded a, Bounded b)
        => a + new Bounded(-b.Value, -b.Slope, b.First, b.Second, b.Radius, b.Rounding, b.SlopeRounding);

    public static Bounded operator *(Bounded a, Bounded b)
        => new(
            a.Value * b.Value, (a.Slope * b.Value) + (a.Value * b.Slope),
            (a.First * b.Greatest) + (a.Greatest * b.First),
            (a.Second * b.Greatest) + (2 * a.First * b.First) + (a.Greatest * b.Second),
            a.Radius,
            (Math.Abs(a.Value) * b.Rounding) + (Math.Abs(b.Value) * a.Rounding),
            (Math.Abs(a.Slope) * b.Rounding) + (Math.Abs(b.Value) * a.SlopeRounding) + (Math.Abs(a.Value) * b.SlopeRounding) + (Math.Abs(b.Slope) * a.Rounding));
}
