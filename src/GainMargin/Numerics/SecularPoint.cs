using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>A polynomial <c>N</c> near a point, over any common factor.</summary>
/// <param name="Step">Newton's step to the root.</param>
/// <param name="Value"><c>|N|</c>.</param>
/// <param name="Noise">Rounding error of <c>N</c>.</param>
/// <param name="Slope"><c>|N′|</c>.</param>
/// <param name="Bend"><c>|N″|</c>.</param>
/// <param name="Floor">Rounding error of the point itself.</param>
internal readonly record struct SecularPoint(Complex Step, double Value, double Noise, double Slope, double Bend, double Floor)
{
    /// <summary>Whether rounding, four times as large, could not make the root a double one.</summary>
    public bool IsSimple => 8 * Noise * Bend < Slope * Slope;

    /// <summary>Whether the point cannot be told from a root.</summary>
    public bool IsRoot => Value <= Noise || Complex.Abs(Step) <= Floor;

    /// <summary>Error that remains after Newton's step, <c>|step|²·|N″/2N′|</c>.</summary>
    public double Remainder => ((Step.Real * Step.Real) + (Step.Imaginary * Step.Imaginary)) * Bend / (2 * Slope);

    /// <summary>Distance of the nearest other root, as far as this root knows.</summary>
    public double Separation => 2 * Slope / Bend;

    /// <summary>
    /// How far <c>|N′|·x − |N″|·x²/2 = noise</c> moves a root from zero; of a root that may be double, up to the farther solution.
    /// </summary>
    public double Uncertainty
    {
        get
        {
            double reach = IsSimple
                ? 2 * Noise / (Slope + Math.Sqrt((Slope * Slope) - (2 * Noise * Bend)))
                : (Slope + Math.Sqrt((Slope * Slope) + (2 * (Noise + Value) * Bend))) / Bend;
            return Math.Max(reach, Floor);
        }
    }
}
