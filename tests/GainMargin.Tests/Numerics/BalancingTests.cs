using GainMargin.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

public sealed class BalancingTests
{
    [Fact]
    public void Balance_BadlyScaledMatrices_IsAnExactSimilarityByPowersOfTwo()
    {
        var random = new Random(21);
        for (int trial = 0; trial < 200; trial++)
        {
            var a = BadlyScaled(random, random.Next(1, 13));
            var (balanced, scale) = Balancing.Balance(a);
            Assert.All(scale, t => Assert.Equal(t, Math.ScaleB(1, Math.ILogB(t))));
            for (int i = 0; i < a.RowCount; i++)
            {
                for (int j = 0; j < a.RowCount; j++)
                {
                    Assert.Equal(a[i, j] * scale[j] / scale[i], balanced[i, j]);
                }
            }
        }
    }

    [Fact]
    public void Balance_BadlyScaledMatrices_RowsAndColumnsAreOfOneSize()
    {
        var random = new Random(22);
        for (int trial = 0; trial < 200; trial++)
        {
            var (balanced, _) = Balancing.Balance(BadlyScaled(random, random.Next(2, 13)));
            for (int i = 0; i < balanced.RowCount; i++)
            {
                double diagonal = Math.Abs(balanced[i, i]);
                double ratio = (balanced.Column(i).L1Norm() - diagonal) / (balanced.Row(i).L1Norm() - diagonal);
                Assert.True(ratio is > 0.25 and < 4, $"trial {trial}: column {i} is {ratio} times its row");
            }
        }
    }

    [Fact]
    public void Balance_SymmetricMatrix_ChangesNothing()
    {
        var half = Systems.Uniform(new Random(23), 6, 6);
        var a = half + half.Transpose();
        var (balanced, scale) = Balancing.Balance(a);
        Assert.Equal(a, balanced);
        Assert.All(scale, t => Assert.Equal(1, t));
    }

    [Fact]
    public void Balance_TriangularMatrix_ReturnsAnExactSimilarity()
    {
        var a = DenseMatrix.OfArray(new[,] { { 1, 1e12, 1e20 }, { 0, 2, 1e8 }, { 0, 0, 3 } });
        var (balanced, scale) = Balancing.Balance(a);
        Assert.Equal(a.Diagonal(), balanced.Diagonal());
        Assert.Equal(1e12 * scale[1] / scale[0], balanced[0, 1]);
        Assert.Equal(0, balanced[2, 0]);
    }

    [Fact]
    public void Balance_AnyMatrix_LeavesTheInputUnchanged()
    {
        var a = BadlyScaled(new Random(24), 7);
        var before = a.Clone();
        var (balanced, _) = Balancing.Balance(a);
        Assert.Equal(before, a);
        Assert.NotEqual(before, balanced);
    }

    [Fact]
    public void Equilibrate_BadlyScaledRowsAndColumns_AreOfSizeOne()
    {
        var random = new Random(25);
        for (int trial = 0; trial < 200; trial++)
        {
            int n = random.Next(1, 13);
            double[] unit = [.. Enumerable.Range(0, n).Select(_ => Math.Pow(10, (40 * random.NextDouble()) - 20))];
            Matrix<double> a = DenseMatrix.Create(n, n, (i, j) => ((2 * random.NextDouble()) - 1) * unit[i] * unit[n - 1 - j]);
            var (rows, columns) = Balancing.Equilibrate(a);
            var even = DenseMatrix.Create(n, n, (i, j) => Math.ScaleB(Math.Abs(a[i, j]), rows[i] + columns[j]));
            for (int i = 0; i < n; i++)
            {
                Assert.InRange(even.Row(i).Maximum(), 0.25, 4);
                Assert.InRange(even.Column(i).Maximum(), 0.25, 4);
            }
        }
    }

    [Fact]
    public void Equilibrate_RowAndColumnOfZeros_AreLeftAlone()
    {
        var (rows, columns) = Balancing.Equilibrate(DenseMatrix.OfArray(new[,] { { 0, 0 }, { 0, 1e30 } }));
        Assert.Equal((0, 0), (rows[0], columns[0]));
        Assert.Equal(99, -(rows[1] + columns[1]), 1.0);
    }

    private static Matrix<double> BadlyScaled(Random random, int n)
    {
        double[] unit = [.. Enumerable.Range(0, n).Select(_ => Math.Pow(10, (16 * random.NextDouble()) - 8))];
        return DenseMatrix.Create(n, n, (i, j) => ((2 * random.NextDouble()) - 1) * unit[j] / unit[i]);
    }
}
