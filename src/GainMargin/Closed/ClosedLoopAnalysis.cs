using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>What can be computed of one closed loop at its present gains.</summary>
public static class ClosedLoopAnalysis
{
    /// <summary>
    /// Splits <c>K</c> and <c>D</c>, each <c>n×n</c>, into symmetric and skew parts, with their shares, the sign character
    /// of the symmetric parts and the classical theorems that already decide.
    /// </summary>
    /// <param name="closed">The closed loop.</param>
    /// <remarks>D. R. Merkin, Introduction to the Theory of Stability, Springer 1997, ch. 6 (from memory).</remarks>
    public static SymmetrySplit Split(ClosedLoop closed) => SplitFinder.Run(Guard.NotNull(closed));

    /// <summary>
    /// The plain first-order state matrix, <c>2n×2n</c>: <c>x = [q; q′]</c> (the rates are
    /// named with a prime), <c>A = [0 I; −M⁻¹K −M⁻¹D]</c>, in the units
    /// of the model. It is for showing; roots are computed in normalised coordinates, see <see cref="Spectrum"/>.
    /// </summary>
    /// <param name="closed">The closed loop.</param>
    /// <exception cref="NumericalFailureException">The closed-loop mass is singular.</exception>
    /// <remarks>L. Meirovitch, Principles and Techniques of Vibrations (1997), ch. 4 (from memory).</remarks>
    public static NamedMatrix StateMatrix(ClosedLoop closed)
    {
        var m = Guard.NotNull(closed).Matrices;
        int n = m.Order;
        var stiffness = Dense.TrySolve(m.Mass, m.Stiffness);
        var damping = Dense.TrySolve(m.Mass, m.Damping);
        if (stiffness is null || damping is null)
        {
            throw new NumericalFailureException("state matrix", "The closed-loop mass matrix is singular: there is no state matrix.");
        }

        var dofs = closed.Structure.Dofs;
        string prime = "′";
        while (dofs.Any(d => dofs.TryGetIndex(d + prime, out _)))
        {
            prime += "′";
        }

        var names = DofNames.Of([.. dofs, .. dofs.Select(d => d + prime)]);
        return new NamedMatrix(names, names, DenseMatrix.Create(2 * n, 2 * n, (i, j) => (i < n, j < n) switch
        {
            (true, true) => 0,
            (true, false) => i == j - n ? 1 : 0,
            (false, true) => -stiffness[i - n, j],
            _ => -damping[i - n, j - n],
        }));
    }

    /// <summary>
    /// All <c>2n</c> roots of <c>det(s²M + sD + K) = 0</c> with frequency, damping, modes and the uncertainty of each.
    /// Computed mass-normalised and time-scaled; free rigid-body motion is split off exactly; a root whose side of the
    /// imaginary axis stays open is polished and, if it still does, counts as undecided.
    /// </summary>
    /// <param name="closed">The closed loop.</param>
    /// <param name="cancellation">Cancels between the stages.</param>
    /// <exception cref="NumericalFailureException">The eigenvalue iteration failed, or the closed-loop mass is singular.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    /// <remarks>F. Tisseur, K. Meerbergen, The quadratic eigenvalue problem, SIAM Rev. 43 (2001) 235–286.</remarks>
    public static Spectrum Spectrum(ClosedLoop closed, CancellationToken cancellation = default)
        => SpectrumFinder.Run(Guard.NotNull(closed), cancellation);

    /// <summary>What one loop adds to the matrices, and whether it is collocated.</summary>
    /// <param name="closed">The closed loop.</param>
    /// <param name="loop">Name of the loop.</param>
    /// <exception cref="ArgumentException">There is no such loop.</exception>
    public static LoopContribution ContributionOf(ClosedLoop closed, string loop)
    {
        int k = Guard.NotNull(closed).Law.IndexOf(loop);
        var definition = closed.Law.Loops[k].Loop;
        var coupling = definition.Coupling;
        var strength = closed.Pencil.CouplingAt(closed.Gains);
        NamedMatrix Times(double gain) => new(coupling.Rows, coupling.Columns, coupling.Values * gain);
        return new LoopContribution(
            Times(strength.Stiffness[k, k]), Times(strength.Damping[k, k]), Times(strength.Mass[k, k]), definition.IsCollocated);
    }
}
