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
        var hat = model.ClosedHat(closed.Gains);
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
        double whole = Dense.Norm(hat);
        var part = Dense.SymmetricPart(hat);
        var (values, vectors) = Dense.SymmetricEigen(part);
        double rounding = Tolerances.NullSpace(n, whole);
        var direction = model.EvenToPhysical(model.HatToEven([.. vectors.Column(0).Select(v => new Complex(v, 0))]));
        var definiteness = Classify(values, rounding);
        return new SymmetricPart(
            Named(physical, Dense.SymmetricPart(physical.Values)), unit * Dense.Norm(part), Share(part, whole),
            definiteness == Definiteness.Zero, definiteness, unit * values[0], unit * rounding,
            NamedVector.Scaled(closed.Structure.Dofs, direction));
    }

    private static SplitPart Skew(NamedMatrix physical, Matrix<double> hat, double unit)
    {
        double whole = Dense.Norm(hat);
        var exact = Dense.SkewPart(physical.Values);
        var part = Dense.SkewPart(hat);
        bool negligible = Dense.Norm(exact) == 0 || Dense.Norm(part) <= Tolerances.Backward(hat.RowCount, whole);
        return new SplitPart(Named(physical, exact), negligible ? 0 : unit * Dense.Norm(part), negligible ? 0 : Share(part, whole), negligible);
    }

    private static double Share(Matrix<double> part, double whole) => whole == 0 ? 0 : Dense.Norm(part) / whole;

    private static NamedMatrix Named(NamedMatrix like, Matrix<double> values) => new(like.Rows, like.Columns, values);
}
