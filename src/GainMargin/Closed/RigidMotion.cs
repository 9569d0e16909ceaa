using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// Motions that meet no stiffness, in normalised coordinates: orthonormal bases of those that meet damping
/// (<see cref="Drifting"/>, one zero root each) and of those that do not (<see cref="Free"/>, two zero roots each), and
/// of the complement. Splitting them off exactly keeps their defective zero roots out of the eigenvalue problem.
/// </summary>
/// <param name="Elastic">Complement.</param>
/// <param name="Drifting">Motions that meet damping only.</param>
/// <param name="Free">Motions that meet neither.</param>
/// <param name="OnLeft">
/// Whether these are left null vectors: a motion that no force reaches, though a sensor may see it, so that the right null
/// vector depends on the gain.
/// </param>
internal sealed record RigidMotion(Matrix<double> Elastic, Matrix<double> Drifting, Matrix<double> Free, bool OnLeft)
{
    public int ZeroRoots => Drifting.ColumnCount + (2 * Free.ColumnCount);

    /// <summary>Rigid motion of one closed loop.</summary>
    public static RigidMotion Of(NormalisedModel model, ReadOnlySpan<double> gains)
    {
        var closed = model.ClosedHat(gains);
        var even = model.Even.At(gains);
        var moduli = model.Even.ModuliAt(gains);
        return Larger(
            Find(
                closed.Stiffness, closed.Damping, false,
                basis => model.IsAnnihilated(even.Stiffness, moduli.Stiffness, basis), basis => model.IsAnnihilated(even.Damping, moduli.Damping, basis)),
            Find(
                closed.Stiffness.Transpose(), closed.Damping.Transpose(), true,
                basis => model.IsAnnihilated(even.Stiffness.Transpose(), moduli.Stiffness.Transpose(), basis),
                basis => model.IsAnnihilated(even.Damping.Transpose(), moduli.Damping.Transpose(), basis)));
    }

    /// <summary>The side that accounts for more zero roots; the right one where both do.</summary>
    public static RigidMotion Larger(RigidMotion right, RigidMotion left) => left.ZeroRoots > right.ZeroRoots ? left : right;

    /// <param name="stiffness">Everything that can resist displacement, stacked in rows.</param>
    /// <param name="damping">Everything that can resist velocity, stacked in rows.</param>
    /// <param name="onLeft">Whether the rows belong to the transposed matrices.</param>
    /// <param name="meetsNoStiffness">Whether a basis really meets no stiffness, row by row.</param>
    /// <param name="meetsNoDamping">Whether a basis really meets no damping, row by row; if not, all motions drift.</param>
    public static RigidMotion Find(
        Matrix<double> stiffness, Matrix<double> damping, bool onLeft, Func<Matrix<double>, bool> meetsNoStiffness, Func<Matrix<double>, bool> meetsNoDamping)
    {
        int n = stiffness.ColumnCount;
        var (rigid, elastic) = Dense.NullSpace(stiffness, Tolerances.NullSpace(n, Dense.Norm(stiffness)));
        if (rigid.ColumnCount == 0 || !meetsNoStiffness(rigid))
        {
            return new RigidMotion(Dense.Identity(n), Dense.Zero(n, 0), Dense.Zero(n, 0), onLeft);
        }

        var (free, drifting) = Dense.NullSpace(damping * rigid, Tolerances.NullSpace(n, Dense.Norm(damping)));
        return free.ColumnCount == 0 || meetsNoDamping(rigid * free)
            ? new RigidMotion(elastic, rigid * drifting, rigid * free, onLeft)
            : new RigidMotion(elastic, rigid, Dense.Zero(n, 0), onLeft);
    }
}
