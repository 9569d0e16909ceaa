using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// How many roots are shown to grow and to decay with the shift that was used; roots at infinity and zero roots stay
/// undecided.
/// </summary>
internal sealed record ShiftedCount(int Growing, int Decaying, int Undecided, double Shift);

/// <summary>
/// All roots of <c>Q(s) = s²M + sD + K</c> from <c>s = σ + 1/θ</c>: <c>θ²Q(σ) + θQ′(σ) + M = 0</c>, so with <c>θ = τφ</c> the
/// <c>φ</c> are the eigenvalues of <c>[−Q(σ)⁻¹Q′(σ)/τ  −Q(σ)⁻¹M/τ²; I 0]</c>. Only <c>Q(σ)</c> is factorised, so the mass may
/// be singular or not symmetric (<c>θ = 0</c> is a root at infinity), and the low roots are known best. Every statement
/// rests on discs that hold the exact roots.
/// </summary>
/// <remarks>F. Tisseur, K. Meerbergen, The quadratic eigenvalue problem, SIAM Rev. 43 (2001) 235–286 (from memory).</remarks>
internal sealed class ShiftInverted
{
    private static readonly int[] Octaves = [0, 2, -2, 4, -4, 8, -8];

    /// <summary><c>τ</c>, a power of two.</summary>
    private readonly double _unit;

    private ShiftInverted(double shift, double unit, EigenDiscs discs)
    {
        Shift = shift;
        _unit = unit;
        Discs = discs;
    }

    public double Shift { get; }

    /// <summary>The eigenvalues <c>φ</c>.</summary>
    public EigenDiscs Discs { get; }

    /// <summary>
    /// Counts the roots of evenly scaled matrices as they stand, or returns <see langword="null"/> where no shift gives finite
    /// matrices: within rounding every number is a root.
    /// </summary>
    /// <exception cref="NumericalFailureException">The eigenvalue iteration failed.</exception>
    public static ShiftedCount? Count(QuadraticPencil closed)
    {
        if (Solve(closed) is not { } roots)
        {
            return null;
        }

        var count = RootCount.Of(roots.Verdicts());
        return new ShiftedCount(count.Growing, count.Decaying, count.Undecided, roots.Shift);
    }

    /// <summary>The roots themselves, by the first shift that keeps half the digits, else by the one that keeps most.</summary>
    public static ShiftInverted? Solve(QuadraticPencil closed)
    {
        if (!closed.IsFinite)
        {
            return null;
        }

        ShiftedInverse? best = null;
        foreach (double shift in Shifts(closed))
        {
            var inverse = ShiftedInverse.At(closed, shift);
            best = inverse?.Condition < (best?.Condition ?? double.PositiveInfinity) ? inverse : best;
            if (best?.Condition <= Tolerances.ModerateCondition)
            {
                break;
            }
        }

        if (best is null)
        {
            return null;
        }

        var (companion, scale) = Balancing.Balance(best.Companion());
        var discs = EigenDiscs.Of(companion, (system, right) => best.Doubt(system, right, scale));
        return new ShiftInverted(best.Shift, Math.ScaleB(1, best.Exponent), discs);
    }

    /// <summary><c>s = σ + 1/θ</c>.</summary>
    public Complex Root(int i) => Shift + (1 / (_unit * Discs.Values[i]));

    /// <summary>The side of each root: that of a disc of its own, or that on which all discs of its group agree.</summary>
    public StabilityVerdict[] Verdicts()
    {
        int n = Discs.Values.Length;
        StabilityVerdict[] wide = [.. Discs.Values.Zip(Discs.Radii, SideOf)];
        StabilityVerdict[] alone = [.. Discs.Values.Zip(Discs.Alone, SideOf)];
        int[] group = Discs.Groups();
        var split = Enumerable.Range(0, n).Where(i => wide[i] != wide[group[i]]).Select(i => group[i]).ToHashSet();
        return [.. alone.Select((side, i) => side != StabilityVerdict.Undecided || split.Contains(group[i]) ? side : wide[i])];
    }

    /// <summary>
    /// <c>Re s &gt; 0 ⇔ στ|φ|² + Re φ &gt; 0</c>, asked of the whole disc; a disc that reaches <c>φ = 0</c> holds infinity.
    /// </summary>
    private StabilityVerdict SideOf(Complex value, double radius)
    {
        double bend = Shift * _unit;
        double square = bend * ((value.Real * value.Real) + (value.Imaginary * value.Imaginary));
        double side = square + value.Real;
        double reach = (radius * Complex.Abs(1 + (2 * bend * value))) + (bend * radius * radius)
            + (Tolerances.Entry * (square + Math.Abs(value.Real)));
        return !(Complex.Abs(value) > radius) ? StabilityVerdict.Undecided
            : side > reach ? StabilityVerdict.Unstable
            : side < -reach ? StabilityVerdict.Stable
            : StabilityVerdict.Undecided;
    }

    /// <summary>No shift, then some near the frequency at which the stiffness meets the heaviest mass.</summary>
    private static IEnumerable<double> Shifts(QuadraticPencil closed)
    {
        yield return 0;
        var even = closed.Equilibrated(closed.Stiffness);
        double mass = Dense.Norm(even.Mass);
        double damping = Dense.Norm(even.Damping);
        double stiffness = Dense.Norm(even.Stiffness);
        double rate = stiffness > 0 && mass > 0 ? Math.Sqrt(stiffness) / Math.Sqrt(mass)
            : stiffness > 0 && damping > 0 ? stiffness / damping
            : damping > 0 && mass > 0 ? damping / mass
            : 1;
        foreach (int octave in Octaves)
        {
            yield return Math.ScaleB(1, Math.ILogB(rate) + octave);
        }
    }
}
