using System.Globalization;

namespace GainMargin;

/// <summary>Sign character of a symmetric matrix; zero means zero within rounding.</summary>
public enum Definiteness
{
    /// <summary>Zero within rounding.</summary>
    Zero,

    /// <summary>All eigenvalues positive.</summary>
    PositiveDefinite,

    /// <summary>None negative, at least one zero within rounding.</summary>
    PositiveSemidefinite,

    /// <summary>Positive and negative ones.</summary>
    Indefinite,

    /// <summary>None positive, at least one zero within rounding.</summary>
    NegativeSemidefinite,

    /// <summary>All eigenvalues negative.</summary>
    NegativeDefinite,
}

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

/// <summary>A symmetric part, which does or stores work along each direction, with its sign character.</summary>
public sealed class SymmetricPart : SplitPart
{
    internal SymmetricPart(
        NamedMatrix matrix, double norm, double relativeNorm, bool isNegligible,
        Definiteness definiteness, double smallest, double uncertainty, NamedVector direction)
        : base(matrix, norm, relativeNorm, isNegligible)
    {
        Definiteness = definiteness;
        SmallestEigenvalue = smallest;
        EigenvalueUncertainty = uncertainty;
        SmallestDirection = direction;
    }

    /// <summary>Sign character.</summary>
    public Definiteness Definiteness { get; }

    /// <summary>
    /// Smallest eigenvalue against the mass matrix, <c>A x = λ M x</c>: for stiffness a squared frequency, for damping <c>2ζω</c>.
    /// </summary>
    public double SmallestEigenvalue { get; }

    /// <summary>Rounding bound of <see cref="SmallestEigenvalue"/>.</summary>
    public double EigenvalueUncertainty { get; }

    /// <summary>Direction <c>x</c> of the smallest eigenvalue; its largest component is one.</summary>
    public NamedVector SmallestDirection { get; }

    /// <summary>Share of the whole and sign character.</summary>
    public override string ToString() => IsNegligible ? "none" : $"{base.ToString()}, {Words(Definiteness)}";

    private static string Words(Definiteness definiteness) => definiteness switch
    {
        Definiteness.PositiveDefinite => "positive definite",
        Definiteness.PositiveSemidefinite => "positive semidefinite",
        Definiteness.Indefinite => "indefinite",
        Definiteness.NegativeSemidefinite => "negative semidefinite",
        Definiteness.NegativeDefinite => "negative definite",
        _ => "zero",
    };
}
