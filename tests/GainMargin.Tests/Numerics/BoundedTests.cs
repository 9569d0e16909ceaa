using GainMargin.Numerics;
using GainMargin.Tests.Oracles;

namespace GainMargin.Tests.Numerics;

/// <summary>Bounds over a cell against the same polynomial in exact arithmetic, as a function of the distance from the middle.</summary>
public sealed class BoundedTests
{
    private const int Cells = 400;
    private const int Points = 16;

    [Fact]
    public void Linear_RandomCells_EnclosesTheFunction() => CheckAll(1, (random, radius) => Linear(random, radius));

    [Fact]
    public void Parabola_RandomCells_EnclosesTheFunction() => CheckAll(2, (random, radius) => Parabola(random, radius));

    [Fact]
    public void Sum_RandomCells_EnclosesTheFunction()
        => CheckAll(3, (random, radius) => Sum(Parabola(random, radius), Linear(random, radius)));

    [Fact]
    public void Difference_RandomCells_EnclosesTheFunction()
        => CheckAll(4, (random, radius) => Difference(Parabola(random, radius), Parabola(random, radius)));

    [Fact]
    public void Product_RandomCells_EnclosesTheFunction()
        => CheckAll(5, (random, radius) => Product(Parabola(random, radius), Linear(random, radius)));

    [Fact]
    public void Product_OfSumsOfProducts_EnclosesTheFunction() => CheckAll(6, (random, radius) => Any(random, radius, 3));

    [Fact]
    public void Product_FactorsOffByTheirRounding_StaysWithinItsOwn()
    {
        var random = new Random(9);
        for (int trial = 0; trial < 1000; trial++)
        {
            var (a, b) = (Known(random), Known(random));
            var (trueA, trueB) = (Off(random, a), Off(random, b));
            var product = a * b;

            // Products of two errors are left out.
            double value = Math.Abs((trueA.Value * trueB.Value) - product.Value);
            double slope = Math.Abs((trueA.Slope * trueB.Value) + (trueA.Value * trueB.Slope) - product.Slope);
            Assert.InRange(value, 0, product.Rounding + (2 * a.Rounding * b.Rounding));
            Assert.InRange(slope, 0, product.SlopeRounding + (2 * a.Rounding * b.SlopeRounding) + (2 * a.SlopeRounding * b.Rounding));
        }

        static Bounded Known(Random random)
            => new(Signed(random), Signed(random), 0, 0, 0, 1e-6 * random.NextDouble(), 1e-6 * random.NextDouble());

        static (double Value, double Slope) Off(Random random, Bounded a)
            => (a.Value + (a.Rounding * Side(random)), a.Slope + (a.SlopeRounding * Side(random)));

        static int Side(Random random) => random.Next(2) == 0 ? 1 : -1;
    }

    [Fact]
    public void HasNoZero_RandomCells_IsNeverClaimedOfACellWithARoot()
    {
        var random = new Random(7);
        int claims = 0;
        int roots = 0;
        for (int cell = 0; cell < Cells; cell++)
        {
            double radius = Radius(random);
            var (bounds, exact) = Any(random, radius, 2);
            int inside = Roots(exact, radius);
            Assert.False(bounds.HasNoZero && inside > 0, $"cell {cell}: {inside} roots inside {bounds}");
            claims += bounds.HasNoZero ? 1 : 0;
            roots += inside > 0 ? 1 : 0;
        }

        Assert.InRange(claims, Cells / 10, Cells);
        Assert.InRange(roots, Cells / 10, Cells);
    }

    [Fact]
    public void IsMonotone_RandomCells_IsNeverClaimedOfACellWithATurningPoint()
    {
        var random = new Random(8);
        int claims = 0;
        int turns = 0;
        for (int cell = 0; cell < Cells; cell++)
        {
            double radius = Radius(random);
            var (bounds, exact) = Any(random, radius, 2);
            int inside = Roots(exact.Derivative(), radius);
            Assert.False(bounds.IsMonotone && inside > 0, $"cell {cell}: {inside} turning points inside {bounds}");
            claims += bounds.IsMonotone ? 1 : 0;
            turns += inside > 0 ? 1 : 0;
        }

        Assert.InRange(claims, Cells / 10, Cells);
        Assert.InRange(turns, Cells / 10, Cells);
    }

    [Theory]
    [InlineData(1, true)]
    [InlineData(0.999, false)]
    public void HasNoZero_RootNearTheEndOfTheCell_DependsOnItsSide(double root, bool outside)
        => Assert.Equal(outside, Bounded.Linear(-root, 1, 0, 0.9995).HasNoZero);

    [Fact]
    public void IsMonotone_VertexNearTheEndOfTheCell_DependsOnItsSide()
    {
        Assert.True(Bounded.Parabola(1, -3, 0.9995).IsMonotone);
        Assert.False(Bounded.Parabola(1, -3, 1.0005).IsMonotone);
    }

    [Fact]
    public void IsLostInRounding_OnlyRoundingIsLeft_IsTrue()
    {
        var zero = Bounded.Linear(0.1, 0, 1, 0.5) - Bounded.Linear(0.1, 0, 1, 0.5);
        Assert.True(zero.IsLostInRounding);
        Assert.False(zero.HasNoZero);
        Assert.False(zero.IsMonotone);
    }

    [Fact]
    public void IsLostInRounding_IdenticallyZero_IsTrue() => Assert.True(default(Bounded).IsLostInRounding);

    [Fact]
    public void IsLostInRounding_ValueThatRoundingDoesNotExplain_IsFalse()
    {
        Assert.False(Bounded.Linear(0.1, 0, 1, 0.5).IsLostInRounding);
        Assert.False(Bounded.Linear(-1, 1, 1, 1e-12).IsLostInRounding);
    }

    [Fact]
    public void Bounds_NotANumber_ClaimNothing()
    {
        var bounds = new Bounded(1, 1, double.NaN, double.NaN, 1, 0, 0);
        Assert.False(bounds.HasNoZero || bounds.IsMonotone || bounds.IsLostInRounding);
    }

    private static void CheckAll(int seed, Func<Random, double, (Bounded Bounds, ExactPolynomial Exact)> make)
    {
        var random = new Random(seed);
        for (int cell = 0; cell < Cells; cell++)
        {
            double radius = Radius(random);
            var (bounds, exact) = make(random, radius);
            Check(bounds, exact, radius, $"seed {seed}, cell {cell}");
        }
    }

    private static void Check(Bounded bounds, ExactPolynomial exact, double radius, string what)
    {
        var (slope, curvature) = (exact.Derivative(), exact.Derivative().Derivative());
        Assert.Equal(radius, bounds.Radius);
        NoMore(Rational.Abs(exact.Evaluate(0) - Rational.FromDouble(bounds.Value)), bounds.Rounding, $"{what}: error of the value");
        NoMore(Rational.Abs(slope.Evaluate(0) - Rational.FromDouble(bounds.Slope)), bounds.SlopeRounding, $"{what}: error of the slope");

        // The bounds themselves are computed with a few roundings.
        double slack = 1 + (64 * Tolerances.Epsilon);
        for (int k = -Points; k <= Points; k++)
        {
            var x = Rational.FromDouble(radius * k / Points);
            var value = exact.Evaluate(x);
            double spread = 64 * Tolerances.Epsilon * bounds.First * radius;
            NoMore(Rational.Abs(value), (bounds.Greatest * slack) + bounds.Rounding, $"{what}: |f| at {k}");
            NoMore(Rational.Abs(slope.Evaluate(x)), bounds.First * slack, $"{what}: |f′| at {k}");
            NoMore(Rational.Abs(curvature.Evaluate(x)), bounds.Second * slack, $"{what}: |f″| at {k}");
            NoMore(value, bounds.High + spread, $"{what}: f at {k}");
            NoMore(-value, spread - bounds.Low, $"{what}: −f at {k}");
        }
    }

    private static void NoMore(Rational value, double bound, string what)
    {
        if (!(double.IsFinite(bound) && value <= Rational.FromDouble(bound)))
        {
            Assert.Fail($"{what} is {value.ToDouble():G17}, bounded by {bound:G17}");
        }
    }

    private static int Roots(ExactPolynomial exact, double radius)
        => exact.IsZero ? 1 : exact.Degree == 0 ? 0 : exact.CountRoots(Rational.FromDouble(-radius), Rational.FromDouble(radius));

    private static (Bounded Bounds, ExactPolynomial Exact) Any(Random random, double radius, int depth)
    {
        if (depth == 0)
        {
            return random.Next(2) == 0 ? Linear(random, radius) : Parabola(random, radius);
        }

        var (a, b) = (Any(random, radius, depth - 1), Any(random, radius, depth - 1));
        return random.Next(4) switch { 0 => Sum(a, b), 1 => Difference(a, b), _ => Product(a, b) };
    }

    private static (Bounded Bounds, ExactPolynomial Exact) Linear(Random random, double radius)
    {
        var (constant, slope, z) = (Signed(random), random.Next(5) == 0 ? 0 : Signed(random), Signed(random));
        var at = Rational.FromDouble(z);
        var exact = ExactPolynomial.Create(Rational.FromDouble(constant) + (Rational.FromDouble(slope) * at), Rational.FromDouble(slope));
        return (Bounded.Linear(constant, slope, z, radius), exact);
    }

    private static (Bounded Bounds, ExactPolynomial Exact) Parabola(Random random, double radius)
    {
        var (t, h) = (Signed(random), random.Next(4) == 0 ? 0 : Signed(random));
        var at = Rational.FromDouble(t);
        return (Bounded.Parabola(t, h, radius), ExactPolynomial.Create((at * at) + Rational.FromDouble(h), 2 * at, 1));
    }

    private static (Bounded Bounds, ExactPolynomial Exact) Sum((Bounded Bounds, ExactPolynomial Exact) a, (Bounded Bounds, ExactPolynomial Exact) b)
        => (a.Bounds + b.Bounds, a.Exact + b.Exact);

    private static (Bounded Bounds, ExactPolynomial Exact) Difference((Bounded Bounds, ExactPolynomial Exact) a, (Bounded Bounds, ExactPolynomial Exact) b)
        => (a.Bounds - b.Bounds, a.Exact - b.Exact);

    private static (Bounded Bounds, ExactPolynomial Exact) Product((Bounded Bounds, ExactPolynomial Exact) a, (Bounded Bounds, ExactPolynomial Exact) b)
        => (a.Bounds * b.Bounds, a.Exact * b.Exact);

    private static double Signed(Random random) => ((2 * random.NextDouble()) - 1) * Math.Pow(10, (3 * random.NextDouble()) - 2);

    private static double Radius(Random random) => Math.Pow(10, (5 * random.NextDouble()) - 4);
}
