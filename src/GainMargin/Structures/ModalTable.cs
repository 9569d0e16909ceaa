using System.Collections.Immutable;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// A structure given by <c>m</c> of its modes, mass-normalised: <c>η″ + Δη′ + diag(ω²)η = Φᵀf</c>, displacement of the
/// <c>n</c> named points <c>y = Φη + R f</c>. Plain input; <see cref="ElasticStructure.FromModes"/> checks and copies it.
/// </summary>
/// <remarks>D. J. Ewins, Modal Testing (2000), ch. 2: mass-normalised mode shapes and residual terms.</remarks>
public sealed record ModalTable
{
    /// <summary>Names of the <c>n</c> points at which the shapes are known.</summary>
    public required DofNames Points { get; init; }

    /// <summary>The <c>m</c> undamped frequencies; zero for a rigid-body mode.</summary>
    public required ImmutableArray<Frequency> Frequencies { get; init; }

    /// <summary>The <c>m</c> damping ratios, <c>Δ = diag(2ζω)</c>; leave empty where <see cref="DampingMatrix"/> is given.</summary>
    public ImmutableArray<double> DampingRatios { get; init; } = [];

    /// <summary>Full modal damping matrix <c>Δ</c>, <c>m×m</c>, instead of ratios.</summary>
    public Matrix<double>? DampingMatrix { get; init; }

    /// <summary>Mass-normalised shapes <c>Φ</c>, <c>n×m</c>: a row for each point, a column for each mode.</summary>
    public required Matrix<double> Shapes { get; init; }

    /// <summary>
    /// Residual flexibility <c>R</c>, <c>n×n</c>, displacement per force: the static share of the modes that were left out.
    /// </summary>
    public Matrix<double>? ResidualFlexibility { get; init; }
}
