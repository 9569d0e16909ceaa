using System.Numerics;
using FsCheck;
using FsCheck.Fluent;
using GainMargin.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

public sealed class DenseTests
{
    [Fact]
    public void NullSpace_ProductOfKnownRank_HasItsDimensionAndIsOrthonormal()
    {
        var random = new Random(51);
        for (int trial = 0; trial < 200; trial++)
        {
            (int rows, int n) = (random.Next(1, 9), random.Next(1, 9));
            int rank = random.Next(0, Math.Min(rows, n) + 1);
            var a = rank == 0 ? new DenseMatrix(rows, n) : Systems.Uniform(random, rows, rank) * Systems.Uniform(random, rank, n);
            double tolerance = 1e-12 * Math.Max(1, a.FrobeniusNorm());
            var (kernel, complement) = Dense.NullSpace(a, tolerance);
            Assert.Equal((n - rank, rank), (kernel.ColumnCount, complement.ColumnCount));
            var basis = complement.Append(kernel);
            ScaledAssert.Matrices(DenseMatrix.CreateIdentity(n), basis.TransposeThisAndMultiply(basis), what: $"trial {trial}: Gram matrix");
            ScaledAssert.Small(rank == n ? 0 : (a * kernel).FrobeniusNorm(), tolerance, $"trial {trial}: ‖A·null‖");
        }
    }

    [Fact]
    public void NullSpace_SingularValueAtTheTolerance_CountsAsZero()
    {
        var a = DenseMatrix.OfDiagonalArray([1, 0.5, 0.25]);
        Assert.Equal(1, Dense.NullSpace(a, 0.25).Null.ColumnCount);
        Assert.Equal(0, Dense.NullSpace(a, 0.2499).Null.ColumnCount);
    }

    [Fact]
    public void SymmetricAndSkewPart_DyadicMatrix_AddUpExactly()
        => Seeded.Check(52, Prop.ForAll(SquareMatrices, a =>
        {
            var symmetric = Dense.SymmetricPart(a);
            var skew = Dense.SkewPart(a);
            return symmetric.Equals(symmetric.Transpose()) && skew.Equals(-skew.Transpose()) && (symmetric + skew).Equals(a);
        }));

    [Fact]
    public void SymmetricAndSkewPart_RandomMatrix_AddUpToRounding()
    {
        var a = Systems.Uniform(new Random(53), 12, 12);
        ScaledAssert.Matrices(a, Dense.SymmetricPart(a) + Dense.SkewPart(a), factor: 1);
    }

    [Fact]
    public void SkewPart_BitwiseSymmetricMatrix_IsExactlyZero()
    {
        var random = new Random(54);
        var half = Systems.Uniform(random, 8, 8);
        var a = (half + half.Transpose()) * Math.PI;
        Assert.True(Dense.SkewPart(a).ForAll(v => v == 0));
        a[2, 5] = Math.BitIncrement(a[2, 5]);
        Assert.NotEqual(0, Dense.SkewPart(a)[2, 5]);
    }

    [Fact]
    public void SymmetricEigen_RandomMatrix_DiagonalisesInAscendingOrder()
    {
        for (int n = 1; n <= 12; n++)
        {
            var half = Systems.Uniform(new Random(n), n, n);
            var a = half + half.Transpose();
            var (values, vectors) = Dense.SymmetricEigen(a);
            Assert.Equal(values.Order(), values);
            ScaledAssert.Matrices(a, (vectors * Dense.Diagonal(values)).TransposeAndMultiply(vectors), what: $"order {n}: VΛVᵀ");
            ScaledAssert.Matrices(DenseMatrix.CreateIdentity(n), vectors.TransposeThisAndMultiply(vectors), what: $"order {n}: VᵀV");
        }
    }

    [Fact]
    public void SymmetricEigen_ZeroMatrix_IsZeroAndOrthonormal()
    {
        var (values, vectors) = Dense.SymmetricEigen(new DenseMatrix(3, 3));
        Assert.Equal([0, 0, 0], values);
        Assert.Equal(Dense.Identity(3), vectors);
    }

    [Fact]
    public void LowerSolve_RandomFactor_SolvesAndLeavesInputs()
    {
        var lower = (Systems.Uniform(new Random(55), 9, 9) + (3 * DenseMatrix.CreateIdentity(9))).LowerTriangle();
        var b = Systems.Uniform(new Random(56), 9, 4);
        var before = b.Clone();
        ScaledAssert.Matrices(b, lower * Dense.LowerSolve(lower, b), factor: 32);
        Assert.Equal(before, b);
    }

    [Fact]
    public void LowerSolve_EntriesAboveTheDiagonal_AreNotRead()
    {
        var full = DenseMatrix.OfArray(new[,] { { 2, double.NaN }, { 1, 4 } });
        var solution = Dense.LowerSolve(full, DenseMatrix.OfArray(new[,] { { 6.0 }, { 4.0 } }));
        Assert.Equal(DenseMatrix.OfArray(new[,] { { 3.0 }, { 0.25 } }), solution);
    }

    [Fact]
    public void LowerTransposeSolve_ComplexVector_SolvesTheTransposedSystem()
    {
        var lower = DenseMatrix.OfArray(new double[,] { { 2, 0, 0 }, { 1, 4, 0 }, { -2, 3, 8 } });
        Complex[] x = [new(1, -2), new(0.5, 3), new(-4, 0.25)];
        Complex[] b = [(2 * x[0]) + x[1] - (2 * x[2]), (4 * x[1]) + (3 * x[2]), 8 * x[2]];
        Assert.Equal(x, Dense.LowerTransposeSolve(lower, b));
    }

    [Fact]
    public void TrySolve_RegularMatrix_Solves()
    {
        var a = Systems.Uniform(new Random(57), 7, 7) + (2 * DenseMatrix.CreateIdentity(7));
        var b = Systems.Uniform(new Random(58), 7, 3);
        ScaledAssert.Matrices(b, a * Dense.TrySolve(a, b)!, factor: 32);
    }

    [Fact]
    public void TrySolve_SingularMatrix_ReturnsNull()
    {
        var a = DenseMatrix.OfArray(new double[,] { { 1, 2 }, { 2, 4 } });
        Assert.Null(Dense.TrySolve(a, Dense.Identity(2)));
        Assert.Null(Dense.TrySolve(a, DenseMatrix.OfArray(new double[,] { { 0 }, { 0 } })));
        Assert.Null(Dense.TrySolve(a.ToComplex(), [1, 1]));
    }

    [Fact]
    public void TrySolve_OrderZero_ReturnsTheRightHandSide()
    {
        var solution = Dense.TrySolve(new DenseMatrix(0, 0), new DenseMatrix(0, 3));
        Assert.Equal((0, 3), (solution?.RowCount, solution?.ColumnCount));
    }

    [Fact]
    public void TryCholesky_DefiniteAndIndefinite_ReturnsFactorOrNull()
    {
        var factor = Dense.TryCholesky(DenseMatrix.OfArray(new double[,] { { 4, 2 }, { 2, 10 } }));
        Assert.Equal(DenseMatrix.OfArray(new double[,] { { 2, 0 }, { 1, 3 } }), factor);
        Assert.Null(Dense.TryCholesky(DenseMatrix.OfArray(new double[,] { { 1, 2 }, { 2, 1 } })));
    }

    [Theory]
    [InlineData(3, 4, 5)]
    [InlineData(3e200, 4e200, 5e200)]
    [InlineData(3e-200, 4e-200, 5e-200)]
    [InlineData(0, 0, 0)]
    public void Norm2_LargeAndSmallParts_NeitherOverflowsNorUnderflows(double re, double im, double norm)
        => ScaledAssert.Relative(norm, Dense.Norm2([new Complex(re, im)]), 4 * ScaledAssert.Epsilon);

    private static Arbitrary<Matrix<double>> SquareMatrices
        => Gen.Choose(1, 6).SelectMany(n => Gen.Choose(-1000, 1000).Select(c => c / 8.0).Array2DOf(n, n))
            .Select(Matrix<double> (a) => DenseMatrix.OfArray(a)).ToArbitrary();
}
