using System.Globalization;

namespace GainMargin;

/// <summary>One of the parts into which closed-loop stiffness and damping fall.</summary>
public class SplitPart
{
    internal SplitPart(NamedMatrix matrix, double norm, double relativeNorm, bool isNegligible)
    {
        Matrix = matrix;
        Norm = norm;
        RelativeNorm = relativeNorm;
        IsNegligible = isNegligible;
    }

    /// <summary>The part itself, <c>n×n</c>, in the units of the model.</summary>
    public NamedMatrix Matrix { get; }

    /// <summary>Frobenius norm in mass-normalised coordinates: 1/time² for stiffness, 1/time for damping.</summary>
    public double Norm { get; }

    /// <summary><see cref="Norm"/> as a fraction of the norm of the whole matrix; zero where that is zero.</summary>
    public double RelativeNorm { get; }

    /// <summary>Whether the part is zero within rounding.</summary>
    public bool IsNegligible { get; }

    /// <summary>Share of the whole.</summary>
    public override string ToString()
        => IsNegligible ? "none" : $"{(100 * RelativeNorm).ToString("G4", CultureInfo.InvariantCulture)} %";
}
