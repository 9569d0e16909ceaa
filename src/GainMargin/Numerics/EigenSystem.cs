using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>
/// Eigenvalues of a real matrix with right vectors of unit length, left vectors scaled to <c>wᴴv = 1</c>, and a first-order
/// bound of each eigenvalue's rounding error. Conjugates stand next to each other, the one above the real axis first.
/// </summary>
internal sealed record EigenSystem(Complex[] Values, Complex[][] Right, Complex[][] Left, double[] Uncertainty);
