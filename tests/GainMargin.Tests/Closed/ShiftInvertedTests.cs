using System.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

public sealed class ShiftInvertedTests
{
    [Theory]
    [InlineData(1, 0.1, 1, 0, 2, 0)]
    [InlineData(1, -0.1, 1, 2, 0, 0)]
    [InlineData(1, 0, 1, 0, 0, 2)]
    [InlineData(1, 0.1, -1, 1, 1, 0)]
    [InlineData(1, 3, 1, 0, 2, 0)]
    [InlineData(-1, 0.1, 1, 1, 1, 0)]
    [InlineData(0, 0.1, 1, 0, 1, 1)]
    [InlineData(0, -0.1, 1, 1, 0, 1)]
    [InlineData(0, 0, 1, 0, 0, 2)]
    [InlineData(1, 1e-12, 1, 0, 2, 0)]
    public void Count_OneOscillator_IsThatOfTheQuadratic(double mass, double damping, double stiffness, int growing, int decaying, int undecided)
        => Assert.Equal(new ShiftedCount(growing, decaying, undecided, 0), ShiftInverted.Count(Pencil(mass, damping, stiffness)));

    [Theory]
    [InlineData(1, 2, 0, 0, 1, 1)]
    [InlineData(1, -2, 0, 1, 0, 1)]
    [InlineData(1, 0, 0, 0, 0, 2)]
    [InlineData(0, 2, 0, 0, 0, 2)]
    public void Count_WithoutStiffness_LeavesZeroRootsUndecidedAtAPositiveShift(
        double mass, double damping, double stiffness, int growing, int decaying, int undecided)
    {
        var count = ShiftInverted.Count(Pencil(mass, damping, stiffness));
        Assert.Equal((growing, decaying, undecided), (count?.Growing, count?.Decaying, count?.Undecided));
        Assert.True(count?.Shift > 0);
    }

    [Theory]
    [InlineData(2)]
    [InlineData(7)]
    [InlineData(12)]
    public void Count_LosslessChain_IsUndecided(int n)
        => Assert.Equal(new ShiftedCount(0, 0, 2 * n, 0), Count(Systems.Open(Systems.Of(DenseMatrix.CreateIdentity(n), new DenseMatrix(n, n), Chain(n)))));

    [Theory]
    [InlineData(0.4)]
    [InlineData(0.6)]
    public void Count_CirculatoryPair_GrowsBeyondCoalescenceOnly(double coupling)
    {
        var count = Count(Systems.Open(Systems.OfStiffness(new[,] { { 1, coupling }, { -coupling, 2 } })));
        Assert.Equal(coupling > 0.5 ? new ShiftedCount(2, 2, 0, 0) : new ShiftedCount(0, 0, 4, 0), count);
    }

    [Fact]
    public void Count_FreeChain_LeavesItsTwoZeroRootsUndecided()
    {
        var stiffness = Chain(6);
        stiffness[0, 0] = 1;
        var count = Count(Systems.Open(Systems.Of(DenseMatrix.CreateIdentity(6), 0.01 * stiffness, stiffness)));
        Assert.Equal((0, 10, 2), (count?.Growing, count?.Decaying, count?.Undecided));
    }

    [Fact]
    public void Count_RandomLoops_AgreesWithTheSpectrum()
    {
        int open = 0;
        for (int seed = 1; seed <= 200; seed++)
        {
            var closed = RandomLoop(seed);
            var spectrum = ClosedLoopAnalysis.Spectrum(closed);
            var expected = spectrum.Count;
            var count = Count(closed);
            Assert.True(
                count is not null && count.Growing + count.Decaying + count.Undecided == expected.Total
                && count.Growing <= expected.Growing + expected.Undecided && count.Decaying <= expected.Decaying + expected.Undecided,
                $"seed {seed}: {count} but {expected}: {string.Join("; ", spectrum.Roots)}");
            open += count.Growing < expected.Growing || count.Decaying < expected.Decaying ? 1 : 0;
        }

        Assert.InRange(open, 0, 2);
    }

    [Fact]
    public void Count_RandomIntegerPencils_NeverContradictsExactArithmetic()
    {
        int seeds = Seeds.Count(3000);
        int open = 0;
        for (int seed = 1; seed <= seeds; seed++)
        {
            var pencil = RandomPencil(new Random(seed));
            var determinant = Determinant(pencil);
            var count = ShiftInverted.Count(pencil);
            if (determinant.IsZero)
            {
                Assert.True(count is null or { Growing: 0, Decaying: 0 }, $"seed {seed}: {count} but every number is a root");
                continue;
            }

            var exact = HalfPlaneCount.Of(determinant);
            Assert.True(
                count is not null && count.Growing <= exact.Unstable && count.Decaying <= exact.Stable
                && count.Growing + count.Decaying + count.Undecided == 2 * pencil.Order,
                $"seed {seed}: {count} but {exact}");
            open += count.Growing < exact.Unstable || count.Decaying < exact.Stable ? 1 : 0;
        }

        Assert.InRange(open, 0, seeds / 50);
    }

    [Fact]
    public void Count_MasslessDofs_AgreesWithTheCondensedSystem()
    {
        var random = new Random(301);
        for (int trial = 0; trial < 100; trial++)
        {
            int heavy = random.Next(1, 7);
            int light = random.Next(1, 4);
            int n = heavy + light;
            var s = Systems.Uniform(random, n, n);
            var full = Systems.Random(random, n, skew: 0).Stiffness.ToMatrix() + (0.3 * random.NextDouble() * (s - s.Transpose()));
            var inner = Systems.Random(random, heavy, damping: 0.1);
            var k12 = full.SubMatrix(0, heavy, heavy, light);
            var k21 = full.SubMatrix(heavy, light, 0, heavy);
            var condensed = full.SubMatrix(0, heavy, 0, heavy) - (k12 * full.SubMatrix(heavy, light, heavy, light).Solve(k21));
            var expected = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Of(inner.Mass.ToMatrix(), inner.Damping.ToMatrix(), condensed))).Count;
            var count = ShiftInverted.Count(new QuadraticPencil(Extended(inner.Mass), Extended(inner.Damping), full));
            Assert.Equal(new ShiftedCount(expected.Growing, expected.Decaying, expected.Undecided + (2 * light), 0), count);

            Matrix<double> Extended(NamedMatrix a) => DenseMatrix.Create(n, n, (i, j) => i < heavy && j < heavy ? a[i, j] : 0);
        }
    }

    [Theory]
    [InlineData(1, false)]
    [InlineData(1e-4, false)]
    [InlineData(1e-8, false)]
    [InlineData(1e-12, false)]
    [InlineData(1, true)]
    [InlineData(1e-4, true)]
    [InlineData(1e-8, true)]
    [InlineData(1e-12, true)]
    public void Root_ChainWithTinyTipMass_LowRootsKeepThirteenDigits(double tip, bool free)
    {
        const int N = 6;
        const double Beta = 1.0 / 64;
        var stiffness = Chain(N);
        stiffness[0, 0] = free ? 1 : 2;
        var mass = DenseMatrix.CreateIdentity(N);
        mass[N - 1, N - 1] = tip;
        var closed = Systems.Open(Systems.Of(mass, Beta * stiffness, stiffness));
        var squares = Determinant(new QuadraticPencil(new DenseMatrix(N, N), -mass, stiffness)).Roots().Select(r => r.ToDouble()).Where(z => z > 0).ToArray();
        var model = new NormalisedModel(closed.Pencil);
        var roots = Assert.IsType<ShiftInverted>(ShiftInverted.Solve(model.Even.At(closed.Gains)));
        Complex[] actual = [.. Enumerable.Range(0, 2 * N).Select(i => roots.Root(i) * model.Rate)];
        foreach (double square in squares.SkipLast(1))
        {
            var root = new Complex(-Beta * square / 2, Math.Sqrt(square - (Beta * square * Beta * square / 4)));
            foreach (var exact in new[] { root, Complex.Conjugate(root) })
            {
                ScaledAssert.Small(actual.Min(s => Complex.Abs(s - exact)), 1e-13 * root.Magnitude, $"error of {exact}");
            }
        }

        var count = Count(closed);
        Assert.Equal((0, free ? (2 * N) - 2 : 2 * N, free ? 2 : 0), (count?.Growing, count?.Decaying, count?.Undecided));
    }

    [Fact]
    public void Count_MatrixNotFinite_IsNull() => Assert.Null(ShiftInverted.Count(Pencil(1, double.NaN, 1)));

    [Fact]
    public void Count_EveryNumberIsARoot_IsNull()
    {
        var dependent = DenseMatrix.OfArray(new double[,] { { 1, 3 }, { 1, 3 } });
        Assert.Null(ShiftInverted.Count(new QuadraticPencil(dependent, dependent, dependent)));
    }

    [Theory]
    [InlineData(1e-200)]
    [InlineData(1e200)]
    public void Count_UnitsNearTheEndsOfTheDoubles_ChangeNothing(double unit)
    {
        Matrix<double> a = DenseMatrix.OfArray(new double[,] { { 3, 1 }, { -1, 2 } });
        Assert.Equal(new ShiftedCount(0, 4, 0, 0), ShiftInverted.Count(new QuadraticPencil(unit * a, unit * 0.1 * a, unit * a)));
    }

    private static ShiftedCount? Count(ClosedLoop closed) => ShiftInverted.Count(new NormalisedModel(closed.Pencil).Even.At(closed.Gains));

    private static QuadraticPencil Pencil(double mass, double damping, double stiffness)
        => new(DenseMatrix.Create(1, 1, mass), DenseMatrix.Create(1, 1, damping), DenseMatrix.Create(1, 1, stiffness));

    /// <summary>Unit springs from ground through all masses, the last one free.</summary>
    private static DenseMatrix Chain(int n)
        => DenseMatrix.Create(n, n, (i, j) => i == j ? (i == n - 1 ? 1 : 2) : Math.Abs(i - j) == 1 ? -1 : 0);

    /// <summary>Plain, with up to three rigid motions, gyroscopic, or circulatory; half of them with acceleration feedback.</summary>
    private static ClosedLoop RandomLoop(int seed)
    {
        var random = new Random(seed);
        int n = random.Next(1, 13);
        int kind = random.Next(4);
        var plain = Systems.Random(random, n, damping: 0.05, skew: kind == 3 ? random.NextDouble() : 0);
        var damping = plain.Damping.ToMatrix();
        var stiffness = plain.Stiffness.ToMatrix();
        var s = Systems.Uniform(random, n, n);
        if (kind == 1 && n > 1)
        {
            var springs = Systems.Uniform(random, n - random.Next(1, Math.Min(n, 4)), n);
            stiffness = springs.TransposeThisAndMultiply(springs);
            damping = random.Next(2) == 0 ? 0.1 * stiffness : damping;
        }
        else if (kind == 2)
        {
            damping += s - s.Transpose();
        }

        return Systems.Closed(
            Systems.Of(plain.Mass.ToMatrix(), damping, stiffness), (2 * random.NextDouble()) - 1,
            Systems.Loop(
                Systems.AnyDof(random, n), Systems.AnyDof(random, n), random.NextDouble(), 0.3 * random.NextDouble(),
                random.Next(2) * 0.5 * random.NextDouble()));
    }

    /// <summary>Small integers, often defective, with massless degrees of freedom and masses down to 2⁻⁴⁴ of the others.</summary>
    private static QuadraticPencil RandomPencil(Random random)
    {
        int n = random.Next(1, 5);
        int size = random.Next(1, 4);
        Matrix<double> Integers(int most) => DenseMatrix.Create(n, n, (_, _) => random.Next(-most, most + 1));
        Matrix<double> Gram(Matrix<double> a) => a * a.Transpose();
        var mass = Integers(size);
        mass = random.Next(2) == 0 ? Gram(mass) : mass;
        var damping = Integers(random.Next(0, size + 1));
        damping = random.Next(3) == 0 ? damping - damping.Transpose() : damping;
        var stiffness = Integers(size);
        stiffness = random.Next(3) == 0 ? Gram(stiffness) : stiffness;
        double tip = random.Next(3) == 0 ? 0 : random.Next(3) == 0 ? Math.ScaleB(1, -random.Next(45)) : 1;
        return new QuadraticPencil(
            DenseMatrix.Create(n, n, (i, j) => mass[i, j] * (i == n - 1 || (j == n - 1 && tip > 0) ? tip : 1)), damping, stiffness);
    }

    private static ExactPolynomial Determinant(QuadraticPencil pencil)
    {
        int n = pencil.Order;
        var entries = new ExactPolynomial[n, n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                entries[i, j] = ExactPolynomial.FromDoubles(pencil.Stiffness[i, j], pencil.Damping[i, j], pencil.Mass[i, j]);
            }
        }

        return ExactPolynomial.Determinant(entries);
    }
}
