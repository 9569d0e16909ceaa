using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

public sealed class SplitTests
{
    [Fact]
    public void Split_RandomLoops_PartsAddUpToTheWhole()
    {
        var random = new Random(101);
        for (int trial = 0; trial < 100; trial++)
        {
            var closed = RandomLoop(random);
            var split = ClosedLoopAnalysis.Split(closed);
            CheckParts(closed.Stiffness, split.Conservative, split.Circulatory, $"trial {trial}: stiffness");
            CheckParts(closed.Damping, split.Dissipative, split.Gyroscopic, $"trial {trial}: damping");
            var skewMass = split.SkewMass.Matrix.ToMatrix();
            Assert.Equal(-skewMass.Transpose(), skewMass);
            ScaledAssert.Matrices(0.5 * (closed.Mass.ToMatrix() - closed.Mass.ToMatrix().Transpose()), skewMass, factor: 1);
        }
    }

    [Fact]
    public void Split_RandomLoops_RelativeNormsSquaredAddUpToOne()
    {
        var random = new Random(102);
        for (int trial = 0; trial < 100; trial++)
        {
            var split = ClosedLoopAnalysis.Split(RandomLoop(random));
            var wholes = new[] { ((SplitPart)split.Conservative, split.Circulatory), (split.Dissipative, split.Gyroscopic) };
            foreach (var (symmetric, skew) in wholes)
            {
                double sum = (symmetric.RelativeNorm * symmetric.RelativeNorm) + (skew.RelativeNorm * skew.RelativeNorm);
                ScaledAssert.Within(1, sum, 16 * ScaledAssert.Epsilon, $"trial {trial}: sum of squared shares");
                ScaledAssert.Relative(
                    symmetric.Norm * skew.RelativeNorm, skew.Norm * symmetric.RelativeNorm, 16 * ScaledAssert.Epsilon, $"trial {trial}: norms");
            }
        }
    }

    [Fact]
    public void Split_UnitMass_NormsAreThoseOfTheMatrices()
    {
        var closed = Systems.Open(Systems.Of(
            new double[,] { { 1, 0 }, { 0, 1 } }, new double[,] { { 1, 4 }, { -4, 2 } }, new double[,] { { 3, 5 }, { 1, 4 } }));
        var split = ClosedLoopAnalysis.Split(closed);
        ScaledAssert.Relative(Math.Sqrt(9 + 16 + 18), split.Conservative.Norm, 8 * ScaledAssert.Epsilon);
        ScaledAssert.Relative(Math.Sqrt(8), split.Circulatory.Norm, 8 * ScaledAssert.Epsilon);
        ScaledAssert.Relative(Math.Sqrt(5), split.Dissipative.Norm, 8 * ScaledAssert.Epsilon);
        ScaledAssert.Relative(Math.Sqrt(32), split.Gyroscopic.Norm, 8 * ScaledAssert.Epsilon);
        Assert.Equal(2, split.Circulatory.Matrix["q1", "q2"]);
        Assert.Equal(3, split.Conservative.Matrix["q2", "q1"]);
        Assert.True(split.SkewMass.IsNegligible);
    }

    [Theory]
    [InlineData(1, 2, Definiteness.PositiveDefinite)]
    [InlineData(0, 2, Definiteness.PositiveSemidefinite)]
    [InlineData(-1, 2, Definiteness.Indefinite)]
    [InlineData(-1, 0, Definiteness.NegativeSemidefinite)]
    [InlineData(-1, -2, Definiteness.NegativeDefinite)]
    [InlineData(0, 0, Definiteness.Zero)]
    public void Definiteness_KnownEigenvalues_IsTheirSignCharacter(double first, double second, Definiteness expected)
    {
        // Turned by the exact rotation of the 3-4-5 triangle, so that no entry shows the eigenvalues.
        var turn = DenseMatrix.OfArray(new double[,] { { 3, -4 }, { 4, 3 } });
        var a = turn * DenseMatrix.OfDiagonalArray([first, second]) * turn.Transpose();
        var mass = DenseMatrix.OfDiagonalArray([25, 25]);
        var split = ClosedLoopAnalysis.Split(Systems.Open(Systems.Of(mass, a, a)));
        Assert.Equal(expected, split.Conservative.Definiteness);
        Assert.Equal(expected, split.Dissipative.Definiteness);
        foreach (var part in new[] { split.Conservative, split.Dissipative })
        {
            Assert.Equal(expected == Definiteness.Zero, part.IsNegligible);
            ScaledAssert.Within(Math.Min(first, second), part.SmallestEigenvalue, part.EigenvalueUncertainty, "smallest eigenvalue");
            Assert.True(part.EigenvalueUncertainty < 1e-13, $"uncertainty {part.EigenvalueUncertainty:R}");
        }
    }

    [Fact]
    public void Definiteness_PurelyCirculatoryStiffness_IsZero()
    {
        var split = ClosedLoopAnalysis.Split(Systems.Open(Systems.OfStiffness(new double[,] { { 0, 1 }, { -1, 0 } })));
        Assert.Equal(Definiteness.Zero, split.Conservative.Definiteness);
        Assert.Equal(0, split.Conservative.RelativeNorm);
        Assert.Equal(1, split.Circulatory.RelativeNorm);
    }

    [Fact]
    public void SmallestDirection_ChainOfTwo_SolvesTheEigenproblemAgainstTheMass()
    {
        // Mass diag(4, 1) and stiffness diag(4, 9) turned into new coordinates: smallest eigenvalue 1 along the first old axis.
        var t = DenseMatrix.OfArray(new double[,] { { 1, 1 }, { 1, -2 } });
        var mass = t.Transpose() * DenseMatrix.OfDiagonalArray([4, 1]) * t;
        var stiffness = t.Transpose() * DenseMatrix.OfDiagonalArray([4, 9]) * t;
        var part = ClosedLoopAnalysis.Split(Systems.Open(Systems.Of(mass, new DenseMatrix(2, 2), stiffness))).Conservative;
        ScaledAssert.Within(1, part.SmallestEigenvalue, 1e-14);
        // The old axis is t·(2, 1)/3.
        ScaledAssert.Within(1, part.SmallestDirection["q1"].Real, 0);
        ScaledAssert.Within(0.5, part.SmallestDirection["q2"].Real, 1e-14);
    }

    [Fact]
    public void Classification_OneOfEachKind_NamesThePartsThatAreThere()
    {
        double[,] unit = { { 1, 0 }, { 0, 1 } };
        double[,] zero = { { 0, 0 }, { 0, 0 } };
        double[,] skew = { { 0, 1 }, { -1, 0 } };
        double[,] mixed = { { 1, 1 }, { -1, 1 } };
        Assert.Equal("inertia only", ClassificationOf(zero, zero));
        Assert.Equal("conservative", ClassificationOf(zero, unit));
        Assert.Equal("circulatory", ClassificationOf(zero, skew));
        Assert.Equal("dissipative", ClassificationOf(unit, zero));
        Assert.Equal("gyroscopic", ClassificationOf(skew, zero));
        Assert.Equal("conservative + circulatory + dissipative + gyroscopic", ClassificationOf(mixed, mixed));

        var accelerated = Systems.Closed(Systems.OfStiffness(unit), 0.5, Systems.Loop("q1", "q2", acceleration: 1));
        Assert.Equal("conservative + skew mass", ClosedLoopAnalysis.Split(accelerated).Classification);

        string ClassificationOf(double[,] damping, double[,] stiffness)
            => ClosedLoopAnalysis.Split(Systems.Open(Systems.Of(unit, damping, stiffness))).Classification;
    }

    [Fact]
    public void Split_CollocatedLoop_StaysConservativeExactly()
    {
        var structure = Systems.Random(new Random(103), 4);
        var split = ClosedLoopAnalysis.Split(Systems.Closed(structure, 0.3, Systems.Loop("q2", "q2", position: 1, rate: 0.1)));
        Assert.True(split.Circulatory.IsNegligible);
        Assert.Equal(0, split.Circulatory.Norm);
        Assert.Equal(0, split.Gyroscopic.RelativeNorm);
    }

    [Fact]
    public void Split_DofsInOtherUnits_KeepsSharesSignsAndFacts()
    {
        var random = new Random(104);
        for (int trial = 0; trial < 100; trial++)
        {
            var closed = RandomLoop(random);
            double[] unit = [.. closed.Structure.Dofs.Select(_ => Math.Pow(10, random.Next(-6, 7)))];
            var plain = ClosedLoopAnalysis.Split(closed);
            var scaled = ClosedLoopAnalysis.Split(Systems.InUnits(closed, unit));
            Assert.Equal(plain.Classification, scaled.Classification);
            Assert.Equal(plain.Conservative.Definiteness, scaled.Conservative.Definiteness);
            Assert.Equal(plain.Dissipative.Definiteness, scaled.Dissipative.Definiteness);
            Assert.Equal(plain.Facts.ToArray(), scaled.Facts.ToArray());
            foreach (var (a, b) in Parts(plain).Zip(Parts(scaled)))
            {
                ScaledAssert.Within(a.RelativeNorm, b.RelativeNorm, 1e-12, $"trial {trial}: share");
                ScaledAssert.Relative(a.Norm, b.Norm, 1e-12, $"trial {trial}: norm");
            }
        }

        static SplitPart[] Parts(SymmetrySplit s) => [s.Conservative, s.Circulatory, s.Dissipative, s.Gyroscopic, s.SkewMass];
    }

    [Theory]
    [InlineData(1024)]
    [InlineData(1.0 / 1024)]
    public void Split_UnitOfTimeByAPowerOfTwo_ScalesBitForBit(double unit)
    {
        var closed = RandomLoop(new Random(105));
        var plain = ClosedLoopAnalysis.Split(closed);
        var scaled = ClosedLoopAnalysis.Split(Systems.InTime(closed, unit));
        var pairs = new[] { (plain.Conservative, scaled.Conservative, unit * unit), (plain.Dissipative, scaled.Dissipative, unit) };
        foreach (var (a, b, factor) in pairs)
        {
            Assert.Equal(
                (a.Norm * factor, a.RelativeNorm, a.SmallestEigenvalue * factor, a.EigenvalueUncertainty * factor, a.Definiteness),
                (b.Norm, b.RelativeNorm, b.SmallestEigenvalue, b.EigenvalueUncertainty, b.Definiteness));
        }

        Assert.Equal((plain.Circulatory.Norm * unit * unit, plain.Gyroscopic.Norm * unit), (scaled.Circulatory.Norm, scaled.Gyroscopic.Norm));
        Assert.Equal(plain.SkewMass.Norm, scaled.SkewMass.Norm);
    }

    private static ClosedLoop RandomLoop(Random random)
    {
        int n = random.Next(2, 7);
        return Systems.Closed(
            Systems.Random(random, n, damping: 0.1, skew: random.NextDouble()), (4 * random.NextDouble()) - 2,
            Systems.Loop(Systems.AnyDof(random, n), Systems.AnyDof(random, n),
                random.NextDouble(), random.NextDouble(), 0.1 * random.NextDouble()));
    }

    private static void CheckParts(NamedMatrix whole, SplitPart symmetric, SplitPart skew, string what)
    {
        Matrix<double> s = symmetric.Matrix.ToMatrix();
        Matrix<double> k = skew.Matrix.ToMatrix();
        Assert.Equal(s.Transpose(), s);
        Assert.Equal(-k.Transpose(), k);
        Assert.Equal((whole.Rows, whole.Columns), (symmetric.Matrix.Rows, skew.Matrix.Columns));
        ScaledAssert.Matrices(whole.ToMatrix(), s + k, factor: 1, what: what);
    }
}
