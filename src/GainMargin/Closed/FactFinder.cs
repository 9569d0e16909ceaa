using System.Collections.Immutable;
using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>Classical theorems whose conditions hold.</summary>
internal static class FactFinder
{
    private const string Merkin = "D. R. Merkin, Introduction to the Theory of Stability, Springer 1997, ch. 6 (from memory)";

    public static ImmutableArray<DecidingFact> Run(
        QuadraticPencil physical, QuadraticPencil hat, SymmetricPart conservative, SymmetricPart dissipative)
    {
        var facts = ImmutableArray.CreateBuilder<DecidingFact>();
        bool massDefinite = Dense.IsSymmetric(physical.Mass) && Dense.TryCholesky(hat.Mass) is not null;
        if (!massDefinite)
        {
            return [];
        }

        bool conservativeOnly = Dense.IsSymmetric(physical.Stiffness);
        bool damped = dissipative.Definiteness == Definiteness.PositiveDefinite;
        bool lossless = Dense.Norm(Dense.SymmetricPart(physical.Damping)) == 0;
        if (conservativeOnly && damped && conservative.Definiteness == Definiteness.PositiveDefinite)
        {
            facts.Add(new DecidingFact(
                "Kelvin–Tait–Chetaev", StabilityVerdict.Stable, "positive definite stiffness with complete damping; gyroscopic terms do no harm", Merkin));
        }

        if (conservativeOnly && damped && conservative.SmallestEigenvalue < -conservative.EigenvalueUncertainty)
        {
            facts.Add(new DecidingFact(
                "Kelvin–Tait–Chetaev", StabilityVerdict.Unstable, "a negative stiffness with complete damping; gyroscopic terms do not help", Merkin));
        }

        if (conservativeOnly && lossless && conservative.Definiteness is (Definiteness.PositiveDefinite or Definiteness.PositiveSemidefinite or Definiteness.Zero))
        {
            // For K ≥ 0 and skew D each root solves s²m + i·s·γ + k = 0 with m > 0, k ≥ 0: purely imaginary.
            facts.Add(new DecidingFact(
                "Lagrange–Dirichlet", StabilityVerdict.Marginal, "no negative stiffness and no damping at all: the energy is conserved", Merkin));
        }

        if (IsNegativeDeterminant(hat.Stiffness))
        {
            facts.Add(new DecidingFact(
                "negative stiffness determinant", StabilityVerdict.Unstable, "det K < 0 with det M > 0: there is a positive real root",
                "E. J. Routh, Dynamics of a System of Rigid Bodies, Advanced Part (1905) (from memory)"));
        }

        if (IsNegativeTrace(hat))
        {
            facts.Add(new DecidingFact(
                "negative total damping", StabilityVerdict.Unstable, "trace(M⁻¹D) < 0: the roots add up to a positive number",
                "sum of the roots of the characteristic polynomial; common practice, no source"));
        }

        if (!conservativeOnly && Dense.Norm(physical.Damping) == 0 && IsMultipleOfIdentity(Dense.SymmetricPart(hat.Stiffness))
            && Dense.Norm(Dense.SkewPart(hat.Stiffness)) > 2 * hat.Order * Tolerances.Backward(hat.Order, Dense.Norm(hat.Stiffness)))
        {
            facts.Add(new DecidingFact(
                "Merkin", StabilityVerdict.Unstable, "equal frequencies, no damping, and circulatory stiffness however small", Merkin));
        }

        return facts.ToImmutable();
    }

    private static bool IsNegativeDeterminant(Matrix<double> stiffness)
    {
        var system = RealEigen.Solve(stiffness);
        int negative = 0;
        for (int i = 0; i < system.Values.Length; i++)
        {
            bool real = system.Values[i].Imaginary == 0;
            if (Complex.Abs(system.Values[i]) <= Math.Max(system.Uncertainty[i], Tolerances.NullSpace(stiffness.RowCount, Dense.Norm(stiffness))))
            {
                return false;
            }

            negative += real && system.Values[i].Real < 0 ? 1 : 0;
        }

        return negative % 2 == 1;
    }

    private static bool IsNegativeTrace(QuadraticPencil hat)
    {
        var d = Dense.TrySolve(hat.Mass, hat.Damping);
        return d is not null && d.Trace() < -Tolerances.Backward(hat.Order, Dense.Norm(d));
    }

    private static bool IsMultipleOfIdentity(Matrix<double> a)
    {
        int n = a.RowCount;
        double mean = a.Trace() / n;
        return Dense.Norm(a - (Dense.Identity(n) * mean)) <= Tolerances.Backward(n, Dense.Norm(a));
    }
}
