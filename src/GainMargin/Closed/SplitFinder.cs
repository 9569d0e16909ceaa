using System.Collections.Immutable;
using System.Numerics;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>Splits closed-loop matrices by symmetry and measures the parts in mass-normalised coordinates.</summary>
internal static class SplitFinder
{
    public static SymmetrySplit Run(ClosedLoop closed)
    {
        var model = new NormalisedModel(closed.Pencil);
        var hat = model.Hat.At(closed.Gains);
        double rate = model.Rate;
        var conservative = Symmetric(closed, model, closed.Stiffness, hat.Stiffness, rate * rate);
        var dissipative = Symmetric(closed, model, closed.Damping, hat.Damping, rate);
        var circulatory = Skew(closed.Stiffness, hat.Stiffness, rate * rate);
        var gyroscopic = Skew(closed.Damping, hat.Damping, rate);
        var skewMass = Skew(closed.Mass, hat.Mass, 1);
        return new SymmetrySplit(
            conservative, circulatory, dissipative, gyroscopic, skewMass,
            FactFinder.Run(closed.Matrices, hat, conservative, dissipative));
    }

    public static Definiteness Classify(double[] ascending, double rounding)
    {
        bool positive = ascending[^1] > rounding;
        bool negative = ascending[0] < -rounding;
        return (positive, negative) switch
        {
            (true, true) => Definiteness.Indefinite,
            (true, false) => ascending[0] > rounding ? Definiteness.PositiveDefinite : Definiteness.PositiveSemidefinite,
            (false, true) => ascending[^1] < -rounding ? Definiteness.NegativeDefinite : Definiteness.NegativeSemidefinite,
            _ => Definiteness.Zero,
        };
    }

    private static SymmetricPart Symmetric(ClosedLoop closed, NormalisedModel model, NamedMatrix physical, Matrix<double> hat, double unit)
    {
        int n = hat.RowCount;
        double whole = hat.FrobeniusNorm();
        var part = Dense.SymmetricPart(hat);
        var (values, vectors) = Dense.SymmetricEigen(part);
        double rounding = Tolerances.Backward(n, whole);
        var direction = model.EvenToPhysical(model.HatToEven([.. vectors.Column(0).Select(v => new Complex(v, 0))]));
        var definiteness = Classify(values, rounding);
        return new SymmetricPart(
            Named(physical, Dense.SymmetricPart(physical.Values)), unit * part.FrobeniusNorm(), Share(part, whole),
            definiteness == Definiteness.Zero, definiteness, unit * values[0], unit * rounding,
            NamedVector.Scaled(closed.Structure.Dofs, direction));
    }

    private static SplitPart Skew(NamedMatrix physical, Matrix<double> hat, double unit)
    {
        double whole = hat.FrobeniusNorm();
        var exact = Dense.SkewPart(physical.Values);
        var part = Dense.SkewPart(hat);
        bool negligible = exact.FrobeniusNorm() == 0 || part.FrobeniusNorm() <= Tolerances.Backward(hat.RowCount, whole);
        return new SplitPart(Named(physical, exact), negligible ? 0 : unit * part.FrobeniusNorm(), negligible ? 0 : Share(part, whole), negligible);
    }

    private static double Share(Matrix<double> part, double whole) => whole == 0 ? 0 : part.FrobeniusNorm() / whole;

    private static NamedMatrix Named(NamedMatrix like, Matrix<double> values) => new(like.Rows, like.Columns, values);
}

/// <summary>Classical theorems whose conditions hold.</summary>
internal static class FactFinder
{
    private const string Merkin = "D. R. Merkin, Introduction to the Theory of Stability, Springer 1997, ch. 6 (from memory)";

    public static ImmutableArray<DecidingFact> Run(
        QuadraticPencil physical, QuadraticPencil hat, SymmetricPart conservative, SymmetricPart dissipative)
    {
        var facts = ImmutableArray.CreateBuilder<DecidingFact>();
        bool massDefinite = IsSymmetric(physical.Mass) && Dense.TryCholesky(hat.Mass) is not null;
        if (!massDefinite)
        {
            return [];
        }

        bool conservativeOnly = IsSymmetric(physical.Stiffness);
        bool damped = dissipative.Definiteness == Definiteness.PositiveDefinite;
        bool lossless = Dense.SymmetricPart(physical.Damping).FrobeniusNorm() == 0;
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

        if (!conservativeOnly && physical.Damping.FrobeniusNorm() == 0 && IsMultipleOfIdentity(Dense.SymmetricPart(hat.Stiffness)))
        {
            facts.Add(new DecidingFact(
                "Merkin", StabilityVerdict.Unstable, "equal frequencies, no damping, and circulatory stiffness however small", Merkin));
        }

        return facts.ToImmutable();
    }

    private static bool IsSymmetric(Matrix<double> a) => Dense.SkewPart(a).FrobeniusNorm() == 0;

    private static bool IsNegativeDeterminant(Matrix<double> stiffness)
    {
        var system = RealEigen.Solve(stiffness);
        int negative = 0;
        for (int i = 0; i < system.Values.Length; i++)
        {
            bool real = system.Values[i].Imaginary == 0;
            if (Complex.Abs(system.Values[i]) <= system.Uncertainty[i])
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
        return d is not null && d.Trace() < -Tolerances.Backward(hat.Order, d.FrobeniusNorm());
    }

    private static bool IsMultipleOfIdentity(Matrix<double> a)
    {
        int n = a.RowCount;
        double mean = a.Trace() / n;
        return (a - (Dense.Identity(n) * mean)).FrobeniusNorm() <= Tolerances.Backward(n, a.FrobeniusNorm());
    }
}
