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
