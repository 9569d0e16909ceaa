using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// Motions that meet no stiffness, in normalised coordinates: orthonormal bases of those that meet damping
/// (<see cref="Drifting"/>, one zero root each) and of those that do not (<see cref="Free"/>, two zero roots each), and
/// of the complement. Splitting them off exactly keeps their defective zero roots out of the eigenvalue problem.
/// </summary>
internal sealed record RigidMotion(Matrix<double> Elastic, Matrix<double> Drifting, Matrix<double> Free)
{
    public int ZeroRoots => Drifting.ColumnCount + (2 * Free.ColumnCount);

    /// <param name="stiffness">Everything that can resist displacement, stacked in rows.</param>
    /// <param name="damping">Everything that can resist velocity, stacked in rows.</param>
    public static RigidMotion Find(Matrix<double> stiffness, Matrix<double> damping)
    {
        int n = stiffness.ColumnCount;
        var (rigid, elastic) = Dense.NullSpace(stiffness, Tolerances.NullSpace(n, stiffness.FrobeniusNorm()));
        if (rigid.ColumnCount == 0)
        {
            return new RigidMotion(elastic, rigid, rigid);
        }

        var (free, drifting) = Dense.NullSpace(damping * rigid, Tolerances.NullSpace(n, damping.FrobeniusNorm()));
        return new RigidMotion(elastic, rigid * drifting, rigid * free);
    }
}
