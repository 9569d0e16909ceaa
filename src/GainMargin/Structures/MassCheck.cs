using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>Checks that a mass matrix is symmetric and positive definite, in a way that does not depend on the units.</summary>
internal static class MassCheck
{
    /// <summary>The mass with its rounding asymmetry removed.</summary>
    public static Matrix<double> Symmetrised(Matrix<double> mass, DofNames dofs, string parameter)
    {
        int n = dofs.Count;
        for (int i = 0; i < n; i++)
        {
            double m = mass[i, i];
            if (m == 0)
            {
                throw new ArgumentException(
                    $"{Guard.Entry("mass", dofs[i], dofs[i])} is 0; degrees of freedom without mass are not supported yet: give it a mass or condense it out.",
                    parameter);
            }

            if (m < 0)
            {
                throw new ArgumentException(
                    $"{Guard.Entry("mass", dofs[i], dofs[i])} is {Guard.Show(m)}; the mass matrix must be positive definite.", parameter);
            }
        }

        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < i; j++)
            {
                double scale = Math.Sqrt(mass[i, i]) * Math.Sqrt(mass[j, j]);
                if (Math.Abs(mass[i, j] - mass[j, i]) > Tolerances.Symmetry(n) * scale)
                {
                    throw new ArgumentException(
                        $"{Guard.Entry("mass", dofs[i], dofs[j])} is {Guard.Show(mass[i, j])} but {Guard.Entry("mass", dofs[j], dofs[i])} is " +
                        $"{Guard.Show(mass[j, i])}; the mass matrix must be symmetric.",
                        parameter);
                }
            }
        }

        var symmetric = Dense.SymmetricPart(mass);
        RequireDefinite(symmetric, dofs, parameter);
        return symmetric;
    }

    private static void RequireDefinite(Matrix<double> mass, DofNames dofs, string parameter)
    {
        int n = dofs.Count;
        var unitDiagonal = DenseMatrix.Create(n, n, (i, j) => i == j ? 1 : mass[i, j] / Math.Sqrt(mass[i, i]) / Math.Sqrt(mass[j, j]));
        var (values, vectors) = Dense.SymmetricEigen(unitDiagonal);
        double rounding = Tolerances.Backward(n, n);
        if (values[0] > rounding)
        {
            return;
        }

        int largest = vectors.Column(0).AbsoluteMaximumIndex();
        string how = values[0] < -rounding
            ? "is not positive definite"
            : "is singular to working precision; motion without mass is not supported yet";
        throw new ArgumentException(
            Guard.Invariant($"The mass matrix {how}: scaled to a unit diagonal its smallest eigenvalue is {values[0]:R}, in a direction led by \"{dofs[largest]}\"."),
            parameter);
    }
}
