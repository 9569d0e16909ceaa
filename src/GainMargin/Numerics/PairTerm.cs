using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>One term of <see cref="PairTerms"/>.</summary>
/// <param name="Center"><c>c</c>.</param>
/// <param name="Square"><c>h</c>.</param>
/// <param name="Real0"><c>R₀</c>.</param>
/// <param name="Real1"><c>R₁</c>.</param>
/// <param name="Imaginary0"><c>I₀</c>.</param>
/// <param name="Imaginary1"><c>I₁</c>.</param>
/// <param name="Modulus"><c>|λ|²</c> of the poles.</param>
/// <param name="Weight">Modulus of the residue times the uncertainty of the pole, with a factor.</param>
/// <param name="ResidueError">Error of the residue.</param>
internal readonly record struct PairTerm(
    double Center, double Square, double Real0, double Real1, double Imaginary0, double Imaginary1, double Modulus, double Weight,
    double ResidueError = 0)
{
    /// <summary>Covers the change of numerators and denominator together, from zero frequency to infinity.</summary>
    private const double Moved = 16;

    /// <summary>Whether the term is <c>(R₁, I₁)/t</c>.</summary>
    public bool IsSimple => Square == 0 && Real0 == 0 && Imaginary0 == 0;

    /// <summary>The same with the rounding of its place as the least uncertainty of its pole.</summary>
    public PairTerm Blurred()
    {
        double residue = Math.Abs(Imaginary1) + (Modulus > 0 ? Math.Abs(Real1) / Math.Sqrt(Modulus) : 0);
        return this with { Weight = Math.Max(Weight, Moved * residue * Tolerances.Epsilon * Math.Sqrt(Modulus)) };
    }

    /// <summary><c>(e·s + f)/(s² + d·s + κ)</c> with a conjugate pair of poles, or two real ones of nearly equal modulus.</summary>
    public static PairTerm Second(double e, double f, double d, double kappa, double poleUncertainty)
    {
        double c = kappa - (0.5 * d * d);
        double residue = kappa == 0 ? 0 : Math.Abs(e) + (Math.Abs(f) / Math.Sqrt(Math.Abs(kappa)));
        return d == 0
            ? new PairTerm(kappa, 0, 0, -f, 0, -e, Math.Abs(kappa), Moved * residue * poleUncertainty)
            : new PairTerm(
                c, d * d * (kappa - (0.25 * d * d)), (0.5 * f * d * d) + (e * d * c), (e * d) - f, (0.5 * e * d * d) - (f * d), -e, Math.Abs(kappa),
                Moved * residue * poleUncertainty);
    }

    /// <summary><c>r/(s − λ)</c> with a real pole.</summary>
    public static PairTerm First(double residue, double pole, double poleUncertainty)
        => new(-(pole * pole), 0, 0, -(pole * residue), 0, -residue, pole * pole, Moved * Math.Abs(residue) * poleUncertainty);

    /// <summary><c>r/(s − λ) + r̄/(s − λ̄)</c>.</summary>
    public static PairTerm Pair(Complex residue, Complex pole, double poleUncertainty)
    {
        double e = 2 * residue.Real;
        double f = -2 * (residue * Complex.Conjugate(pole)).Real;
        double d = -2 * pole.Real;
        double c = (pole.Imaginary - pole.Real) * (pole.Imaginary + pole.Real);
        double half = d * pole.Imaginary;
        double modulus = (pole.Real * pole.Real) + (pole.Imaginary * pole.Imaginary);
        return pole.Real == 0
            ? new PairTerm(modulus, 0, 0, -f, 0, -e, modulus, Moved * Complex.Abs(residue) * poleUncertainty)
            : new PairTerm(
                c, half * half, (0.5 * f * d * d) + (e * d * c), (e * d) - f, (0.5 * e * d * d) - (f * d), -e, modulus,
                Moved * Complex.Abs(residue) * poleUncertainty);
    }
}
