using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// What a structure is made from: <c>M q″ + D q′ + K q = f</c>, all matrices <c>n×n</c> over the same names. Plain input;
/// <see cref="ElasticStructure.FromMatrices"/> checks and copies it.
/// </summary>
public sealed record StructureMatrices
{
    /// <summary>Names of the <c>n</c> degrees of freedom.</summary>
    public required DofNames Dofs { get; init; }

    /// <summary>Mass <c>M</c>, symmetric positive definite.</summary>
    public required Matrix<double> Mass { get; init; }

    /// <summary>Damping <c>D</c>; its skew part is gyroscopic.</summary>
    public required Matrix<double> Damping { get; init; }

    /// <summary>Stiffness <c>K</c>; its skew part is circulatory.</summary>
    public required Matrix<double> Stiffness { get; init; }
}
