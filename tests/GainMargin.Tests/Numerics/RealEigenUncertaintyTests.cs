using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

/// <summary>The stated uncertainty against errors that are known exactly.</summary>
public sealed class RealEigenUncertaintyTests
{
    [Theory]
    [InlineData(2, 0)]
    [InlineData(3, 0)]
    [InlineData(2, 1)]
    [InlineData(3, 1)]
    [InlineData(2, -2)]
    [InlineData(3, -2)]
    [InlineData(2, 3.7)]
    [InlineData(3, 3.7)]
    public void Uncertainty_JordanBlock_CoversTheErrorAndStaysUseful(int order, double eigenvalue)
    {
        var block = DenseMatrix.Create(order, order, (i, j) => i == j ? eigenvalue : j == i + 1 ? 1 : 0);
        CheckCoverage(block, [.. Enumerable.Repeat(new Complex(eigenvalue, 0), order)]);
        // An error ε of the matrix moves a root of multiplicity k by ε^(1/k); a bound ten thousand times that says nothing.
        double useful = 1e4 * Math.Pow(ScaledAssert.Epsilon * Math.Max(1, block.FrobeniusNorm()), 1.0 / order);
        Assert.All(RealEigen.Solve(block).Uncertainty, u => ScaledAssert.Small(u, useful, "uncertainty"));
    }

    [Fact]
    public void Uncertainty_DefectivePairOfComplexRoots_CoversTheError()
        => CheckCoverage(
            DenseMatrix.OfArray(new double[,] { { 0, 1, 1, 0 }, { -1, 0, 0, 1 }, { 0, 0, 0, 1 }, { 0, 0, -1, 0 } }),
            [new(0, 1), new(0, -1), new(0, 1), new(0, -1)]);

    /// <summary>Found among a million random ones: the iteration errs by more than ε·n·‖A‖ here.</summary>
    [Fact]
    public void Uncertainty_IterationAtItsWorst_CoversTheError()
        => CheckCoverage(
            DenseMatrix.OfArray(new double[,] { { -1, 0, 0, 0 }, { 12, 5, 0, 0 }, { 4, 2, 3, 2 }, { -3, -4, -1, 1 } }),
            [-1, 5, new(2, 1), new(2, -1)]);

    [Fact]
    public void Uncertainty_RandomIntegerMatricesWithKnownEigenvalues_CoversTheError()
    {
        var random = new Random(17);
        for (int trial = 0; trial < 2000; trial++)
        {
            var (matrix, eigenvalues) = KnownMatrix(random, random.Next(2, 9));
            CheckCoverage(matrix, eigenvalues);
        }
    }

    [Fact]
    public void Uncertainty_RandomIntegerMatrices_StaysWithinTheConditionNumbers()
    {
        var random = new Random(18);
        for (int trial = 0; trial < 200; trial++)
        {
            var (matrix, _) = KnownMatrix(random, random.Next(2, 9));
            var system = RealEigen.Solve(matrix);
            for (int j = 0; j < system.Values.Length; j++)
            {
                double condition = Math.Sqrt(system.Left[j].Sum(c => Math.Pow(Complex.Abs(c), 2)));
                double plain = 16 * ScaledAssert.Epsilon * Math.Max(matrix.RowCount, 4) * matrix.FrobeniusNorm() * Math.Max(1, condition);
                ScaledAssert.Small(system.Uncertainty[j], plain, $"trial {trial}: uncertainty of eigenvalue {j}");
            }
        }
    }

    private static void CheckCoverage(Matrix<double> matrix, Complex[] eigenvalues)
    {
        var system = RealEigen.Solve(matrix);
        ScaledAssert.Roots(eigenvalues, system.Values, system.Uncertainty);
    }

    /// <summary><c>SΛS⁻¹</c> with an integer <c>S</c> of determinant one: exact in doubles, and so are its eigenvalues.</summary>
    private static (Matrix<double> Matrix, Complex[] Eigenvalues) KnownMatrix(Random random, int n)
    {
        Matrix<double> matrix = new DenseMatrix(n, n);
        var eigenvalues = new List<Complex>();
        while (eigenvalues.Count < n)
        {
            int k = eigenvalues.Count;
            bool pair = k < n - 1 && random.Next(2) == 0;
            double re = random.Next(-9, 10);
            double im = pair ? random.Next(1, 6) : 0;
            matrix[k, k] = re;
            eigenvalues.Add(new Complex(re, im));
            if (pair)
            {
                (matrix[k + 1, k + 1], matrix[k, k + 1], matrix[k + 1, k]) = (re, im, -im);
                eigenvalues.Add(new Complex(re, -im));
            }
        }

        for (int step = 0; step < 2 * n; step++)
        {
            (int i, int j, int factor) = (random.Next(n), random.Next(n), random.Next(-2, 3));
            if (i != j)
            {
                matrix.SetRow(i, matrix.Row(i) + (factor * matrix.Row(j)));
                matrix.SetColumn(j, matrix.Column(j) - (factor * matrix.Column(i)));
            }
        }

        return (matrix, [.. eigenvalues]);
    }
}
