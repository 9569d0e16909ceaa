namespace GainMargin.Numerics;

/// <summary>
/// Data of <c>L(s) = (p + v·s + a·s²)·(c + Σ(e·s + f)/(s² + d·s + κ) + Σ r/(s − λ))</c>, which must stay finite as <c>s → ∞</c>:
/// with <c>v</c> or <c>a</c> the constant <c>c</c> is zero, with <c>a</c> so is <c>Σe + Σr</c> but for rounding.
/// </summary>
/// <param name="E">Numerators' coefficients of <c>s</c> of the second-order terms.</param>
/// <param name="F">Numerators' constants of the second-order terms.</param>
/// <param name="D">Coefficients <c>d</c> of the second-order terms.</param>
/// <param name="Kappa">Constants <c>κ</c> of the second-order terms.</param>
/// <param name="Root">Poles <c>λ</c> of the first-order terms.</param>
/// <param name="Residue">Residues <c>r</c> of the first-order terms.</param>
/// <param name="Constant">The constant <c>c</c>.</param>
/// <param name="Position">The law's <c>p</c>.</param>
/// <param name="Rate">The law's <c>v</c>.</param>
/// <param name="Acceleration">The law's <c>a</c>.</param>
internal sealed record SecularTerms(
    double[] E, double[] F, double[] D, double[] Kappa, double[] Root, double[] Residue,
    double Constant = 0, double Position = 1, double Rate = 0, double Acceleration = 0);
