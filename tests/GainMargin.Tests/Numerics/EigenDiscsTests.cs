using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

public sealed class EigenDiscsTests
{
    [Fact]
    public void Of_DistinctEigenvalues_GivesEachADiscOfItsOwn()
    {
        var discs = Of(DenseMatrix.OfArray(new double[,] { { 1, 5, -3 }, { 0, 2, 4 }, { 0, 0, 4 } }));
        Check(discs, [1, 2, 4], "triangular");
        Assert.All(discs.Alone, r => ScaledAssert.Small(r, 1e-12));
        Assert.Equal(3, discs.Groups().Distinct().Count());
    }

    [Theory]
    [InlineData(2, 0)]
    [InlineData(3, 0)]
    [InlineData(4, -2)]
    [InlineData(3, 3.7)]
    public void Of_JordanBlock_HoldsItInOneSmallGroup(int order, double eigenvalue)
    {
        var discs = Of(DenseMatrix.Create(order, order, (i, j) => i == j ? eigenvalue : j == i + 1 ? 1 : 0));
        Check(discs, [.. Enumerable.Repeat(new Complex(eigenvalue, 0), order)], "Jordan block");
        Assert.Single(discs.Groups().Distinct());
        Assert.All(discs.Radii, r => ScaledAssert.Small(r, 1e4 * Math.Pow(ScaledAssert.Epsilon, 1.0 / order)));
    }

    [Fact]
    public void Of_RandomIntegerMatricesWithKnownEigenvalues_CountsThemRightly()
    {
        var random = new Random(41);
        int alone = 0;
        int all = 0;
        for (int trial = 0; trial < 2000; trial++)
        {
            var (matrix, eigenvalues) = KnownMatrix(random, random.Next(1, 9));
            var discs = Of(matrix);
            Check(discs, eigenvalues, $"trial {trial}");
            alone += discs.Alone.Count(double.IsFinite);
            all += eigenvalues.Length;
        }

        Assert.True(alone > all / 4, $"{alone} of {all} have a disc of their own");
    }

    [Fact]
    public void Of_MatrixKnownButForAnError_WidensTheDiscs()
    {
        var matrix = DenseMatrix.OfArray(new double[,] { { 1, 1 }, { 0, 3 } });
        var error = DenseMatrix.Create(2, 2, 1e-3);
        var discs = EigenDiscs.Of(matrix, (system, right) => Moduli(system) * error * right);
        Check(discs, Of(matrix + error).Values, "moved");
        Check(discs, Of(matrix - error).Values, "moved back");
        Assert.All(discs.Alone, r => Assert.InRange(r, 1e-3, 1e-2));

        static Matrix<double> Moduli(EigenSystem system) => DenseMatrix.Create(2, 2, (i, j) => Complex.Abs(system.Left[i][j]));
    }

    private static EigenDiscs Of(Matrix<double> a) => EigenDiscs.Of(a, (_, right) => 0 * right);

    private static void Check(EigenDiscs discs, Complex[] exact, string what)
    {
        int[] group = discs.Groups();
        foreach (int g in group.Distinct())
        {
            int[] members = [.. Enumerable.Range(0, exact.Length).Where(i => group[i] == g)];
            int held = exact.Count(e => members.Any(i => Complex.Abs(e - discs.Values[i]) <= discs.Radii[i]));
            Assert.True(held == members.Length, $"{what}: {members.Length} discs about {discs.Values[g]} hold {held}");
        }

        for (int i = 0; i < exact.Length; i++)
        {
            int held = exact.Count(e => Complex.Abs(e - discs.Values[i]) <= discs.Alone[i]);
            Assert.True(held == 1 || !double.IsFinite(discs.Alone[i]), $"{what}: the disc about {discs.Values[i]} holds {held}");
        }
    }

    /// <summary><c>STS⁻¹</c> with a triangular <c>T</c>, often defective, and an integer <c>S</c> of determinant one, so all is exact.</summary>
    private static (Matrix<double> Matrix, Complex[] Eigenvalues) KnownMatrix(Random random, int n)
    {
        Matrix<double> matrix = DenseMatrix.Create(n, n, (i, j) => i == j ? random.Next(-4, 5) : j > i ? random.Next(-1, 2) : 0);
        Complex[] eigenvalues = [.. matrix.Diagonal().Select(x => new Complex(x, 0))];
        for (int step = 0; step < 2 * n; step++)
        {
            (int i, int j, int factor) = (random.Next(n), random.Next(n), random.Next(-1, 2));
            if (i != j)
            {
                matrix.SetRow(i, matrix.Row(i) + (factor * matrix.Row(j)));
                matrix.SetColumn(j, matrix.Column(j) - (factor * matrix.Column(i)));
            }
        }

        return (matrix, eigenvalues);
    }
}
