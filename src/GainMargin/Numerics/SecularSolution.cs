using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>
/// All roots of a secular equation with a bound of each root's rounding error. Conjugates stand next to each other, the one
/// above the real axis first; real roots come last.
/// </summary>
internal sealed record SecularSolution(Complex[] Roots, double[] Uncertainty);
