namespace GainMargin.Numerics;

/// <summary>Every tolerance of the library, scaled by size and norm: <c>c·ε·n·‖A‖</c>.</summary>
internal static class Tolerances
{
    /// <summary>Spacing of doubles at one, 2⁻⁵².</summary>
    public const double Epsilon = 2.220446049250313e-16;

    /// <summary>Imaginary part, relative to the modulus, below which a computed parameter value counts as real.</summary>
    /// <remarks>A real double value splits into a pair at a distance of √ε; this leaves a factor of seven.</remarks>
    public const double RealParameter = 1e-7;

    /// <summary>A Newton iteration whose steps no longer shrink has arrived if they are within this multiple of rounding.</summary>
    public const double Stagnation = 1e3;

    /// <summary>Largest eigenvalue condition number that first-order error bounds are trusted with.</summary>
    public const double LargestCondition = 1e-1 / Epsilon;

    /// <summary>Condition number up to which the factors of an equilibrated matrix cost no more than half the digits.</summary>
    /// <remarks>1/√ε.</remarks>
    public const double ModerateCondition = 67108864;

    /// <summary>
    /// A disc about an eigenvalue wider than this fraction of the norm says that the vectors are poor: a double eigenvalue costs
    /// far less.
    /// </summary>
    public const double WideDisc = 1e-3;

    /// <summary>
    /// Backward error of a dense factorisation or eigenvalue iteration of order <paramref name="n"/>; the factor covers the
    /// worst of a million eigenvalues of integer matrices, which exceed <c>ε·n·‖A‖</c> by up to 1.6.
    /// </summary>
    public static double Backward(int n, double norm) => 2 * Epsilon * Math.Max(n, 4) * norm;

    /// <summary>Singular values below this belong to the null space of a matrix of order <paramref name="n"/>.</summary>
    public static double NullSpace(int n, double norm) => 10 * Epsilon * Math.Max(n, 4) * norm;

    /// <summary>
    /// Rounding of one residual entry per unit of <c>|s|²|M|+|s||D|+|K|</c>: the entries of the matrices carry a few roundings each from
    /// scaling and from the loops, the products one more.
    /// </summary>
    public const double Entry = 8 * Epsilon;

    /// <summary>A symmetric matrix whose skew part is below this fraction of its norm counts as symmetric.</summary>
    public static double Symmetry(int n) => 8 * Epsilon * Math.Max(n, 4);
}
