using System.Numerics;
using MathNet.Numerics.LinearAlgebra.Double;
using Xunit.Sdk;

namespace GainMargin.Tests.Support;

public sealed class ScaledAssertTests
{
    [Fact]
    public void Within_ErrorEqualToAllowance_Passes() => ScaledAssert.Within(1, 1.25, 0.25);

    [Theory]
    [InlineData(1.26)]
    [InlineData(0.74)]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void Within_ErrorAboveAllowance_FailsWithBothNumbers(double actual)
    {
        var failure = Assert.Throws<FailException>(() => ScaledAssert.Within(1, actual, 0.25, "gain"));
        Assert.Contains("gain: expected 1", failure.Message, StringComparison.Ordinal);
        Assert.Contains("allowed 0.25", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Within_AllowanceIsNaN_Fails() => Assert.Throws<FailException>(() => ScaledAssert.Within(1, 1, double.NaN));

    [Fact]
    public void Relative_NegativeExpectation_ScalesWithItsSize()
    {
        ScaledAssert.Relative(-1000, -1000.9, 1e-3);
        Assert.Throws<FailException>(() => ScaledAssert.Relative(-1000, -1001.1, 1e-3));
        Assert.Throws<FailException>(() => ScaledAssert.Relative(0, 1e-300, 1e-3));
    }

    [Theory]
    [InlineData(2.0)]
    [InlineData(double.NaN)]
    public void Small_ResidualAboveAllowance_Fails(double residual)
    {
        ScaledAssert.Small(1, 1);
        var failure = Assert.Throws<FailException>(() => ScaledAssert.Small(residual, 1, "residual of root 3"));
        Assert.Contains("residual of root 3 is", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Matrices_RoundingOfTheNorm_Passes()
    {
        var expected = DenseMatrix.OfArray(new double[,] { { 3, 0 }, { 0, 4 } });
        var actual = DenseMatrix.OfArray(new double[,] { { 3, 8 * ScaledAssert.Epsilon }, { 0, 4 } });
        ScaledAssert.Matrices(expected, actual, factor: 1);
    }

    [Theory]
    [InlineData(1e-14)]
    [InlineData(double.NaN)]
    public void Matrices_TwoWrongEntries_NamesTheWorst(double error)
    {
        var expected = DenseMatrix.OfArray(new double[,] { { 1, 0 }, { 0, 1 } });
        var actual = DenseMatrix.OfArray(new double[,] { { 1, error }, { 5e-15, 1 } });
        var failure = Assert.Throws<FailException>(() => ScaledAssert.Matrices(expected, actual, factor: 1));
        Assert.Contains("matrix[0, 1], the worst entry", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Matrices_OtherShape_Fails() =>
        Assert.ThrowsAny<XunitException>(() => ScaledAssert.Matrices(DenseMatrix.CreateIdentity(2), new DenseMatrix(2, 3)));

    [Fact]
    public void Roots_OtherOrder_Passes() => ScaledAssert.Roots([1, new(0, 2), new(0, -2)], [new(0, -2), 1, new(0, 2)], 0);

    [Fact]
    public void Roots_GreedyPairingWouldFail_FindsThePairing() => ScaledAssert.Roots([1, 2], [1.9, 2.9], 0.95);

    [Fact]
    public void Roots_DoubleRootMetByOneOnly_Fails()
    {
        var failure = Assert.Throws<FailException>(() => ScaledAssert.Roots([1, 1, 3], [1, 3, 3], 1e-9));
        Assert.Contains("1 of 3 expected roots have no partner; worst 1 + 0i", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Roots_OneTooFar_NamesItWithDistanceAndAllowance()
    {
        var failure = Assert.Throws<FailException>(() => ScaledAssert.Roots([1, new(0, 2)], [new(0, 2.5), 1], [0.25, 0]));
        Assert.Contains("worst 0 + 2i: nearest actual root 0 + 2.5i at 0.5, allowed 0.25", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Roots_NaN_Fails() => Assert.Throws<FailException>(() => ScaledAssert.Roots([1], [new Complex(double.NaN, 0)], 1e9));

    [Fact]
    public void Roots_OtherCount_Fails() => Assert.ThrowsAny<XunitException>(() => ScaledAssert.Roots([1, 2], [1], 10));
}
