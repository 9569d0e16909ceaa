using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>What loops add to the matrices, with and without residual flexibility.</summary>
public sealed class ContributionTests
{
    [Fact]
    public void ContributionOf_WeightedPatterns_IsGainTimesRatioTimesPattern()
    {
        var closed = Systems.Closed(Systems.Random(new Random(151), 3), 2, Weighted(position: 3, rate: 0.5, acceleration: 0.25));
        var contribution = ClosedLoopAnalysis.ContributionOf(closed, "loop");
        Assert.Equal(["q3", "q1"], contribution.Stiffness.Rows);
        Assert.Equal(["q2", "q1"], contribution.Stiffness.Columns);
        // b = 2·q3 − q1, s = q2 + 4·q1.
        Assert.Equal(DenseMatrix.OfArray(new double[,] { { 12, 48 }, { -6, -24 } }), contribution.Stiffness.ToMatrix());
        Assert.Equal(DenseMatrix.OfArray(new double[,] { { 2, 8 }, { -1, -4 } }), contribution.Damping.ToMatrix());
        Assert.Equal(DenseMatrix.OfArray(new double[,] { { 1, 4 }, { -0.5, -2 } }), contribution.Mass.ToMatrix());
        Assert.False(contribution.IsCollocated);
        ScaledAssert.Matrices(
            closed.Structure.Stiffness.ToMatrix() + Placed(closed.Structure.Dofs, contribution.Stiffness), closed.Stiffness.ToMatrix(),
            factor: 1);
    }

    [Fact]
    public void ContributionOf_AllLoops_AddUpToTheClosedMatrices()
    {
        var structure = Systems.Random(new Random(152), 4);
        var law = ControlLaw.Cascade(
            new LoopSetting(Systems.Loop("q1", "q4", rate: 1, name: "inner"), 3, "V", DisplayScale: 0.5),
            new LoopSetting(Systems.Loop("q2", "q4", position: 0.7, name: "outer"), 5))
            .With(new LoopSetting(Systems.Loop("q3", "q3", 1, 2, 0.1, name: "third"), -0.2));
        var closed = ClosedLoop.Create(structure, law);
        var m = structure.Mass.ToMatrix();
        var d = structure.Damping.ToMatrix();
        var k = structure.Stiffness.ToMatrix();
        foreach (var setting in law.Loops)
        {
            var added = ClosedLoopAnalysis.ContributionOf(closed, setting.Loop.Name);
            m += Placed(structure.Dofs, added.Mass);
            d += Placed(structure.Dofs, added.Damping);
            k += Placed(structure.Dofs, added.Stiffness);
        }

        ScaledAssert.Matrices(m, closed.Mass.ToMatrix(), factor: 1, what: "mass");
        ScaledAssert.Matrices(d, closed.Damping.ToMatrix(), factor: 1, what: "damping");
        ScaledAssert.Matrices(k, closed.Stiffness.ToMatrix(), factor: 1, what: "stiffness");
        // The outer gain acts multiplied by the inner one.
        double outer = ClosedLoopAnalysis.ContributionOf(closed, "outer").Stiffness["q4", "q2"];
        ScaledAssert.Relative(5 * 3 * 0.5 * 0.7, outer, 4 * ScaledAssert.Epsilon);
    }

    [Fact]
    public void ContributionOf_CollocatedLoop_SaysSo()
        => Assert.True(ClosedLoopAnalysis.ContributionOf(
            Systems.Closed(Systems.One(1, 0, 1), 1, Systems.Loop("q1", "q1", position: 1)), "loop").IsCollocated);

    [Fact]
    public void ContributionOf_UnknownLoop_ThrowsWithTheNamesThereAre()
    {
        var failure = Assert.Throws<ArgumentException>(() => ClosedLoopAnalysis.ContributionOf(Systems.Open(Systems.One(1, 0, 1)), "yaw"));
        Assert.Contains("\"loop\"", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Create_PositionThroughResidualFlexibility_ClosesTheAlgebraicLoop()
    {
        const double gain = 30;
        const double ratio = 2;
        var structure = WithResidual();
        var closed = Systems.Closed(structure, gain, Systems.Loop("tip", "base", position: ratio));
        double effective = gain * ratio / (1 + (gain * ratio * structure.ResidualFlexibility!["tip", "base"]));
        ScaledAssert.Matrices(structure.Stiffness.ToMatrix() + (effective * ModalPattern(structure)), closed.Stiffness.ToMatrix(), factor: 1);
        Assert.Equal(structure.Mass.ToMatrix(), closed.Mass.ToMatrix());
    }

    [Fact]
    public void Spectrum_PositionThroughResidualFlexibility_HasTheRootsOfTheClosedMatrices()
    {
        var closed = Systems.Closed(WithResidual(), 30, Systems.Loop("tip", "base", position: 2));
        var matrices = Systems.Of(closed.Mass.ToMatrix(), closed.Damping.ToMatrix(), closed.Stiffness.ToMatrix());
        ScaledAssert.Roots(
            [.. ClosedLoopAnalysis.Spectrum(Systems.Open(matrices)).Roots.Select(r => r.Value)],
            [.. ClosedLoopAnalysis.Spectrum(closed).Roots.Select(r => r.Value)], 1e-12);
    }

    [Fact]
    public void ContributionOf_PositionThroughResidualFlexibility_IsWhatTheLoopAdds()
    {
        var structure = WithResidual();
        var closed = Systems.Closed(structure, 30, Systems.Loop("tip", "base", position: 2));
        var added = ClosedLoopAnalysis.ContributionOf(closed, "loop").Stiffness["base", "tip"] * ModalPattern(structure);
        ScaledAssert.Matrices(closed.Stiffness.ToMatrix() - structure.Stiffness.ToMatrix(), added, factor: 8);
    }

    [Fact]
    public void Create_TwoLoopsThroughResidualFlexibility_SolvesThemTogether()
    {
        var structure = WithResidual();
        var law = ControlLaw.Of(
            new LoopSetting(Systems.Loop("tip", "base", position: 1, name: "a"), 40),
            new LoopSetting(Systems.Loop("base", "tip", position: 1, name: "b"), 25));
        var closed = ClosedLoop.Create(structure, law);
        // u = −G(Sᵀq + R·u) with R from actuators to sensors.
        var r = structure.ResidualFlexibility!;
        var residual = DenseMatrix.OfArray(new[,] { { r["tip", "base"], r["tip", "tip"] }, { r["base", "base"], r["base", "tip"] } });
        var gains = DenseMatrix.OfDiagonalArray([40, 25]);
        var coupling = (DenseMatrix.CreateIdentity(2) + (gains * residual)).Inverse() * gains;
        var shapes = structure.Shapes!.ToMatrix();
        var drive = DenseMatrix.OfRowVectors(shapes.Row(0), shapes.Row(1)).Transpose();
        var sense = DenseMatrix.OfRowVectors(shapes.Row(1), shapes.Row(0));
        ScaledAssert.Matrices(structure.Stiffness.ToMatrix() + (drive * coupling * sense), closed.Stiffness.ToMatrix(), factor: 4);
    }

    [Fact]
    public void Create_GainThatMakesTheAlgebraicLoopSingular_Throws()
    {
        // Residual 1/16 from base to tip: at gain −16 the loop asks for its own force.
        var structure = WithResidual();
        Assert.Equal(0.0625, structure.ResidualFlexibility!["tip", "base"]);
        var failure = Assert.Throws<ArgumentException>(() => Systems.Closed(structure, -16, Systems.Loop("tip", "base", position: 1)));
        Assert.Contains("residual flexibility", failure.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(1, 0)]
    [InlineData(0, 1)]
    public void Create_RateOrAccelerationThroughResidualFlexibility_IsRefused(double rate, double acceleration)
    {
        var loop = Systems.Loop("tip", "base", 1, rate, acceleration);
        var failure = Assert.Throws<ArgumentException>(() => Systems.Closed(WithResidual(), 1, loop));
        Assert.Contains("roll-off", failure.Message, StringComparison.Ordinal);
    }

    private static ElasticStructure WithResidual() => ElasticStructure.FromModes(new ModalTable
    {
        Points = ["base", "tip"],
        Frequencies = [Frequency.FromRadians(3), Frequency.FromRadians(7)],
        DampingRatios = [0.01, 0.02],
        Shapes = DenseMatrix.OfArray(new[,] { { 0.5, 1.25 }, { 1.5, -0.75 } }),
        ResidualFlexibility = DenseMatrix.OfArray(new[,] { { 0.03, 0.0625 }, { 0.0625, 0.2 } }),
    });

    /// <summary>Force at the base on the modes times motion of the tip in the modes.</summary>
    private static Matrix<double> ModalPattern(ElasticStructure structure)
        => structure.Shapes!.ToMatrix().Row(0).OuterProduct(structure.Shapes.ToMatrix().Row(1));

    private static FeedbackLoop Weighted(double position, double rate, double acceleration) => FeedbackLoop.Create(
        "loop", Sensor.Weighted(new PatternWeight("q2", 1), new PatternWeight("q1", 4)),
        Actuator.Weighted(new PatternWeight("q3", 2), new PatternWeight("q1", -1)),
        new FeedbackRatios { Position = position, Rate = rate, Acceleration = acceleration });

    private static Matrix<double> Placed(DofNames dofs, NamedMatrix part)
    {
        var whole = new DenseMatrix(dofs.Count, dofs.Count);
        foreach (string row in part.Rows)
        {
            foreach (string column in part.Columns)
            {
                whole[dofs.IndexOf(row), dofs.IndexOf(column)] = part[row, column];
            }
        }

        return whole;
    }
}
