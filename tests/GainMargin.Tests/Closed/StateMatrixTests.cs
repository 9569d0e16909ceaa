using System.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

public sealed class StateMatrixTests
{
    [Fact]
    public void StateMatrix_TwoDofs_HasTheBlocksOfTheFirstOrderForm()
    {
        var structure = Systems.Of(
            new double[,] { { 2, 0 }, { 0, 4 } }, new double[,] { { 6, 2 }, { -2, 8 } }, new double[,] { { 10, -4 }, { -4, 12 } });
        var a = ClosedLoopAnalysis.StateMatrix(Systems.Closed(structure, 2, Systems.Loop("q2", "q1", position: 1, rate: 3)));
        var expected = DenseMatrix.OfArray(new double[,]
        {
            { 0, 0, 1, 0 },
            { 0, 0, 0, 1 },
            { -5, 1, -3, -4 },
            { 1, -3, 0.5, -2 },
        });
        ScaledAssert.Matrices(expected, a.ToMatrix(), factor: 1);
    }

    [Fact]
    public void StateMatrix_NamedDofs_NamesDisplacementsThenRates()
    {
        var structure = ElasticStructure.FromRowMajor(["base", "tip"], [1, 0, 0, 1], [0, 0, 0, 0], [1, 0, 0, 4]);
        var a = ClosedLoopAnalysis.StateMatrix(Systems.Open(structure));
        string[] names = ["base", "tip", "base′", "tip′"];
        Assert.Equal(names, a.Rows);
        Assert.Equal(names, a.Columns);
        Assert.Equal(-4, a["tip′", "tip"]);
        Assert.Equal(1, a["base", "base′"]);
    }

    [Fact]
    public void StateMatrix_DofNamedLikeTheRateOfAnother_StillHasDistinctNames()
    {
        var structure = ElasticStructure.FromRowMajor(["x", "x′"], [1, 0, 0, 1], [0, 0, 0, 0], [1, 0, 0, 4]);
        Assert.Equal(4, ClosedLoopAnalysis.StateMatrix(Systems.Open(structure)).Rows.Distinct().Count());
    }

    [Fact]
    public void StateMatrix_SmallWellScaledLoops_HasTheRootsOfTheSpectrum()
    {
        var random = new Random(141);
        for (int trial = 0; trial < 50; trial++)
        {
            int n = random.Next(1, 6);
            var closed = Systems.Closed(
                Systems.Random(random, n, damping: 0.1, skew: 0.2), random.NextDouble(),
                Systems.Loop("q1", $"q{n}", random.NextDouble(), random.NextDouble(), 0.2 * random.NextDouble()));
            // Another route: the plain decomposition, without normalisation or balancing.
            var plain = ClosedLoopAnalysis.StateMatrix(closed).ToMatrix().Evd(Symmetricity.Asymmetric).EigenValues.ToArray();
            Complex[] roots = [.. ClosedLoopAnalysis.Spectrum(closed).Roots.Select(r => r.Value)];
            ScaledAssert.Roots(plain, roots, 1e-10);
        }
    }

    [Fact]
    public void StateMatrix_SingularClosedMass_ThrowsWithStage()
    {
        var closed = Systems.Closed(Systems.One(1, 0.1, 1), -1, Systems.Loop("q1", "q1", acceleration: 1));
        var failure = Assert.Throws<NumericalFailureException>(() => ClosedLoopAnalysis.StateMatrix(closed));
        Assert.Equal("state matrix", failure.Stage);
    }
}
