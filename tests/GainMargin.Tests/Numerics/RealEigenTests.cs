using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;
using MathNet.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

public sealed class RealEigenTests
{
    [Fact]
    public void Solve_RandomMatricesOfOrder1To40_ResidualsAreRounding()
    {
        for (int n = 1; n <= 40; n++)
        {
            var a = Systems.Uniform(new Random(n), n, n);
            CheckResiduals(a, RealEigen.Solve(a), Matrix<double>.Build.DenseIdentity(n));
        }
    }

    [Fact]
    public void Solve_DiagonalSimilarity_KeepsEigenvaluesAndResiduals()
    {
        var random = new Random(11);
        for (int trial = 0; trial < 100; trial++)
        {
            int n = random.Next(2, 13);
            var a = Systems.Uniform(random, n, n);
            var unit = DenseMatrix.OfDiagonalArray([.. Enumerable.Range(0, n).Select(_ => Math.Pow(10, (16 * random.NextDouble()) - 8))]);
            unit[0, 0] = 1e8;
            unit[n - 1, n - 1] = 1e-8;
            var plain = RealEigen.Solve(a);
            var scaled = RealEigen.Solve(unit.Inverse() * a * unit);
            // The similarity itself rounds each entry three times.
            ScaledAssert.Roots(plain.Values, scaled.Values, [.. scaled.Uncertainty.Select(u => 4 * u)]);
            CheckResiduals(unit.Inverse() * a * unit, scaled, unit);
        }
    }

    [Fact]
    public void Solve_ZeroMatrix_ReturnsExactZerosAndUnitVectors()
    {
        var system = RealEigen.Solve(new DenseMatrix(3, 3));
        Assert.All(system.Values, v => Assert.Equal(Complex.Zero, v));
        Assert.All(system.Uncertainty, u => Assert.Equal(0, u));
        for (int i = 0; i < 3; i++)
        {
            Assert.Equal([.. Enumerable.Range(0, 3).Select(j => i == j ? Complex.One : Complex.Zero)], system.Right[i]);
            Assert.Equal(system.Right[i], system.Left[i]);
        }
    }

    [Fact]
    public void Solve_OrderZero_IsEmpty() => Assert.Empty(RealEigen.Solve(new DenseMatrix(0, 0)).Values);

    [Fact]
    public void Solve_IterationThatDoesNotConverge_RecoversWithinTheUncertainty()
    {
        // A² = 0, so every eigenvalue is zero; only zero and badly graded matrices were found to stop the managed iteration.
        var a = new DenseMatrix(5, 5);
        (a[2, 0], a[2, 1], a[4, 0]) = (1e-5, -1e-94, 1e-117);
        Assert.Throws<NonConvergenceException>(() => Balancing.Balance(a).Balanced.Evd(Symmetricity.Asymmetric));
        var system = RealEigen.Solve(a);
        ScaledAssert.Roots(new Complex[5], system.Values, system.Uncertainty);
    }

    [Theory]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void Solve_EntryNotFinite_ThrowsWithStage(double entry)
    {
        var a = DenseMatrix.OfArray(new[,] { { 1, entry }, { 0, 1 } });
        var failure = Assert.Throws<NumericalFailureException>(() => RealEigen.Solve(a));
        Assert.Equal("eigenvalues", failure.Stage);
    }

    [Fact]
    public void Solve_SparseIntegerMatrices_ReturnTheExactCharacteristicPolynomial()
    {
        var random = new Random(8);
        for (int trial = 0; trial < 1000; trial++)
        {
            int n = random.Next(2, 7);
            var a = DenseMatrix.Create(n, n, (_, _) => random.Next(-1, 2));
            CheckPolynomial(a, RealEigen.Solve(a).Values);
        }
    }

    [Fact]
    public void Solve_ComplexPairs_StandTogetherUpperOneFirst()
    {
        var random = new Random(5);
        for (int trial = 0; trial < 50; trial++)
        {
            int n = random.Next(2, 12);
            var system = RealEigen.Solve(Systems.Uniform(random, n, n));
            for (int j = 0; j < n; j++)
            {
                if (system.Values[j].Imaginary == 0)
                {
                    Assert.All(system.Right[j].Concat(system.Left[j]), c => Assert.Equal(0, c.Imaginary));
                    continue;
                }

                Assert.True(system.Values[j].Imaginary > 0, $"trial {trial}: {system.Values[j]} comes before its conjugate");
                Assert.Equal(Complex.Conjugate(system.Values[j]), system.Values[j + 1]);
                Assert.Equal(Array.ConvertAll(system.Right[j], Complex.Conjugate), system.Right[j + 1]);
                Assert.Equal(Array.ConvertAll(system.Left[j], Complex.Conjugate), system.Left[j + 1]);
                Assert.Equal(system.Uncertainty[j], system.Uncertainty[j + 1]);
                j++;
            }
        }
    }

    [Fact]
    public void Solve_AnyMatrix_LeavesItUnchangedAndRepeatsBits()
    {
        var a = Systems.Uniform(new Random(3), 9, 9) * 1e5;
        var before = a.Clone();
        var first = RealEigen.Solve(a);
        var second = RealEigen.Solve(a);
        Assert.Equal(before, a);
        Assert.Equal(first.Values, second.Values);
        Assert.Equal(first.Uncertainty, second.Uncertainty);
        Assert.Equal(first.Right.SelectMany(v => v), second.Right.SelectMany(v => v));
        Assert.Equal(first.Left.SelectMany(v => v), second.Left.SelectMany(v => v));
    }

    /// <param name="a">The matrix.</param>
    /// <param name="system">What was found for it.</param>
    /// <param name="unit">Coordinates in which the residuals are measured, <c>unit⁻¹·a·unit</c> being well scaled.</param>
    private static void CheckResiduals(Matrix<double> a, EigenSystem system, Matrix<double> unit)
    {
        int n = a.RowCount;
        var scaled = unit.Inverse() * a * unit;
        double norm = scaled.FrobeniusNorm();
        var right = system.Right.Select((_, j) => Times(unit.Inverse(), system.Right[j])).ToArray();
        var left = system.Left.Select((_, j) => Times(unit, system.Left[j])).ToArray();
        double condition = right.Select((v, j) => Norm(v) * Norm(left[j])).Sum();
        for (int j = 0; j < n; j++)
        {
            double rounding = 8 * ScaledAssert.Epsilon * Math.Max(n, 4);
            Complex[] av = Times(scaled, right[j]);
            Complex[] wa = Times(scaled.Transpose(), left[j]);
            double direct = Norm([.. av.Select((x, i) => x - (system.Values[j] * right[j][i]))]);
            double adjoint = Norm([.. wa.Select((x, i) => x - (Complex.Conjugate(system.Values[j]) * left[j][i]))]);
            var product = system.Left[j].Zip(system.Right[j], (w, v) => Complex.Conjugate(w) * v).Aggregate(Complex.Add);
            ScaledAssert.Small(direct, rounding * norm * Norm(right[j]), $"order {n}: ‖Av − λv‖ of eigenvalue {j}");
            // Left vectors come from an inverse, so the conditioning of all vectors enters.
            ScaledAssert.Small(adjoint, rounding * norm * condition * Norm(left[j]), $"order {n}: ‖wᴴA − λwᴴ‖ of eigenvalue {j}");
            ScaledAssert.Small(Complex.Abs(product - 1), rounding * condition, $"order {n}: wᴴv − 1 of eigenvalue {j}");
            ScaledAssert.Within(1, Norm(system.Right[j]), rounding, $"order {n}: length of right vector {j}");
        }
    }

    /// <summary>
    /// The coefficient <c>c_k</c> of <c>λ^(n−k)</c> is a sum of <c>C(n,k)</c> minors of order <c>k</c>, so an error <c>E</c> of the matrix
    /// moves it by at most <c>k·C(n,k)·‖A‖^(k−1)·‖E‖</c>: a bound that holds for defective matrices too.
    /// </summary>
    private static void CheckPolynomial(Matrix<double> a, Complex[] roots)
    {
        int n = a.RowCount;
        var pencil = new ExactPolynomial[n, n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                pencil[i, j] = ExactPolynomial.FromDoubles(-a[i, j], i == j ? 1 : 0);
            }
        }

        var exact = ExactPolynomial.Determinant(pencil);
        Complex[] computed = [Complex.One];
        foreach (var root in roots)
        {
            computed = [.. Enumerable.Range(0, computed.Length + 1).Select(
                i => (i > 0 ? computed[i - 1] : 0) - (i < computed.Length ? root * computed[i] : 0))];
        }

        double binomial = 1;
        for (int k = 1; k <= n; k++)
        {
            binomial *= (n - k + 1.0) / k;
            double allowed = 8 * ScaledAssert.Epsilon * n * k * binomial * Math.Pow(Math.Max(1, a.FrobeniusNorm()), k);
            ScaledAssert.Small(Complex.Abs(computed[n - k] - exact[n - k].ToDouble()), allowed, $"coefficient {k} of {a.ToMatrixString()}");
        }
    }

    private static Complex[] Times(Matrix<double> a, Complex[] x)
        => [.. Enumerable.Range(0, a.RowCount).Select(i => x.Select((c, j) => a[i, j] * c).Aggregate(Complex.Add))];

    private static double Norm(Complex[] v) => Math.Sqrt(v.Sum(c => (c.Real * c.Real) + (c.Imaginary * c.Imaginary)));
}
