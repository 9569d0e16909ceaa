namespace GainMargin;

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
    /// Smallest eigenvalue against the mass of the structure, <c>A x = λ M x</c>: for stiffness a squared frequency, for damping
    /// <c>2ζω</c>.
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
