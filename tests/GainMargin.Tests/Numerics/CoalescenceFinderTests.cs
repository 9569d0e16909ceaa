using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

public sealed class CoalescenceFinderTests
{
    private const int Plenty = 200_000;

    private static readonly (double P, double A)[] Laws = [(1, 0), (-0.75, 0), (0, 1), (0, -0.5), (1, 0.25), (1, -0.25), (-1, 0.375)];

    // K = [[2, −1 + g], [−1, 2]] with unit masses: (2 − z)² = 1 − g, so two roots meet at g = 1 and ω² = 2.
    [Fact]
    public void Run_TwoEqualMassesCoupledOneWay_MeetAtGainOne()
    {
        var finder = Found([Pole(1, -0.5), Pole(3, 0.5)], (1, 0), -10, 10);

        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Unresolved);
        var root = Assert.Single(finder.Roots);
        ScaledAssert.Within(2, root.Square, 1e-14);
        ScaledAssert.Within(-1, root.Real, 1e-14);
        ScaledAssert.Within(-2, root.Curvature, 1e-12);
        ScaledAssert.Small(root.RealUncertainty, 1e-13);
    }

    [Theory]
    [InlineData(-10, 0.999, 0)]
    [InlineData(-10, 1.001, 1)]
    [InlineData(0, 10, 1)]
    [InlineData(-10, 0, 0)]
    [InlineData(0, 0, 0)]
    public void Run_ReachOnOneSide_FindsWhatIsInIt(double least, double greatest, int expected)
        => Assert.Equal(expected, Found([Pole(1, -0.5), Pole(3, 0.5)], (1, 0), least, greatest).Roots.Count);

    [Theory]
    [InlineData(1, 0)]
    [InlineData(0, 1)]
    [InlineData(-1, 0)]
    [InlineData(0, -2)]
    public void Run_ResiduesOfOneSign_NothingMeets(double position, double acceleration)
    {
        var random = new Random(51);
        for (int trial = 0; trial < 100; trial++)
        {
            MirroredPole[] poles = [.. Enumerable.Range(0, random.Next(1, 12)).Select(k => Pole(k + random.NextDouble(), 0.1 + random.NextDouble()))];
            var finder = Found(poles, (position, acceleration), -1e3, 1e3);
            Assert.True(finder.CoveredAll);
            Assert.Empty(finder.Roots);
            Assert.Empty(finder.Unresolved);
        }
    }

    [Fact]
    public void Run_ManyModes_CostStaysSmall()
    {
        MirroredPole[] poles = [.. Enumerable.Range(1, 40).Select(k => Pole(k * k, (k % 3 == 1 ? -0.8 : 1) / (1 + (0.05 * k))))];
        var finder = Found(poles, (1, 0), -100, 100);

        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Unresolved);
        Assert.NotEmpty(finder.Roots);
        Assert.InRange(finder.Evaluations, 50, 2000);
    }

    [Fact]
    public void Run_RandomPoles_RootsAreThoseOfExactArithmetic()
    {
        var random = new Random(52);
        int found = 0;
        for (int trial = 0; trial < 150; trial++)
        {
            var law = Laws[random.Next(Laws.Length)];
            var poles = AnyPoles(random, random.Next(1, 7));
            double constant = random.Next(4) == 0 ? random.Next(-16, 17) / 64.0 : 0;
            var finder = Found(poles, law, -20, 20, constant);
            string what = $"trial {trial}, {law}, {string.Join(", ", poles.Select(p => $"{p.Residue}/(z - {p.Place})"))}, {constant}";
            Assert.True(finder.CoveredAll, what);
            Assert.True(finder.Unresolved.Count == 0, what);
            CheckRoots(finder, poles, constant, law, -20, 20, what);
            found += finder.Roots.Count;
        }

        Assert.InRange(found, 100, 5000);
    }

    [Fact]
    public void Run_RandomPoles_EachMeetingChangesTheNumberOfComplexRoots()
    {
        var random = new Random(53);
        int changes = 0;
        for (int trial = 0; trial < 150; trial++)
        {
            var law = Laws[random.Next(Laws.Length)];
            var poles = AnyPoles(random, random.Next(2, 6));
            var (top, bottom) = Fraction(poles, 0, law);
            foreach (var root in Found(poles, law, -5, 5).Roots)
            {
                double delta = -1 / root.Real;
                double beside = 1e-6 * Math.Abs(delta);
                int change = ComplexRoots(top, bottom, delta + beside) - ComplexRoots(top, bottom, delta - beside);
                Assert.True(change == -2 * Math.Sign(root.Curvature), $"trial {trial}: {change} more complex roots above {delta}, where two meet at {root.Square}");
                changes++;
            }
        }

        Assert.InRange(changes, 50, 2000);
    }

    [Fact]
    public void Run_RandomPoles_RootsAreTheSignChangesOfDenseSamples()
    {
        var random = new Random(54);
        int changes = 0;
        for (int trial = 0; trial < 100; trial++)
        {
            var law = Laws[random.Next(Laws.Length)];
            var poles = AnyPoles(random, random.Next(2, 6));
            var finder = Found(poles, law, -20, 20);
            const double step = 2e-3;
            double previous = 0;
            for (double z = 1e-3; z < 12; z += step)
            {
                var (real, slope) = Direct(poles, law, z);
                bool isChange = Math.Sign(slope) * Math.Sign(previous) < 0;
                previous = slope;
                double away = poles.Min(p => Complex.Abs(z - p.Place));
                if (isChange && Math.Abs(real) > 0.051 && away > 10 * step)
                {
                    int found = finder.Roots.Count(r => r.Square > z - step - 1e-12 && r.Square < z + 1e-12);
                    Assert.True(found == 1, $"trial {trial}: {found} roots before {z}, where the slope changes its sign");
                    changes++;
                }
            }
        }

        Assert.InRange(changes, 50, 2000);
    }

    // Cells of neighbouring poles end midway between them, and that is where their roots meet by symmetry.
    [Fact]
    public void Run_MeetingAtTheCommonEndOfTwoCells_IsFoundOnce()
    {
        var random = new Random(55);
        for (int trial = 0; trial < 300; trial++)
        {
            double low = random.NextDouble();
            double gap = Math.Pow(10, -6 * random.NextDouble());
            double residue = gap * (0.5 + random.NextDouble());
            var finder = Found([Pole(low, -residue), Pole(low + gap, residue)], (1, 0), -10, 10);
            Assert.True(finder.CoveredAll);
            Assert.Empty(finder.Unresolved);
            ScaledAssert.Within(low + (0.5 * gap), Assert.Single(finder.Roots).Square, 1e-15, $"trial {trial}");
        }
    }

    // The curvature nearly cancels there, so rounding leaves thousands of places open on both sides of the common end.
    [Fact]
    public void Run_FlatMeetingAtTheCommonEndOfTwoCells_IsFoundOnce()
    {
        var random = new Random(56);
        for (int trial = 0; trial < 300; trial++)
        {
            double middle = 3 + random.NextDouble();
            double flat = Math.Pow(10, -2 - (2 * random.NextDouble()));
            double outer = 8 * (1 - flat);
            var finder = Found([Pole(middle - 2, outer), Pole(middle - 1, -1), Pole(middle + 1, 1), Pole(middle + 2, -outer)], (1, 0), -10, 10);
            Assert.True(finder.CoveredAll);
            var near = finder.Roots.Where(r => Math.Abs(r.Square - middle) < 1e-6).ToArray();
            Assert.True(near.Length == 1, $"trial {trial}, {flat}: {string.Join("; ", near)}");
        }
    }

    // Three meetings within a hundredth of each other, where one has split in three.
    [Fact]
    public void Run_MeetingsNextToEachOther_AreToldApart()
    {
        var random = new Random(57);
        int several = 0;
        for (int trial = 0; trial < 60; trial++)
        {
            double middle = 3 + random.NextDouble();
            double flat = Math.Pow(10, -1 - (3 * random.NextDouble())) * (random.Next(2) == 0 ? 1 : -1);
            double outer = 8 * (1 - flat);
            MirroredPole[] poles = [Pole(middle - 2, outer), Pole(middle - 1.01, -1), Pole(middle + 1, 1), Pole(middle + 2, -outer)];
            var finder = Found(poles, (1, 0), -10, 10);
            Assert.True(finder.CoveredAll);
            Assert.Empty(finder.Unresolved);
            CheckRoots(finder, poles, 0, (1, 0), -10, 10, $"trial {trial}, {flat}");
            several += finder.Roots.Count > 2 ? 1 : 0;
        }

        Assert.InRange(several, 10, 60);
    }

    // R = −z·c − …: the slope keeps −a·c for good, so it changes its sign where the poles have become small against it.
    [Fact]
    public void Run_AccelerationAndSmallConstant_MeetingFarAboveThePolesIsFound()
    {
        MirroredPole[] poles = [Pole(1, -1)];
        var finder = Found(poles, (0, 1), -10, 10, -1e-4);

        Assert.True(finder.CoveredAll);
        ScaledAssert.Relative(101, Assert.Single(finder.Roots).Square, 1e-12);
        CheckRoots(finder, poles, -1e-4, (0, 1), -10, 10, "far meeting");
    }

    // The ratios vanish at the pole, so the pole is none of the loop's.
    [Theory]
    [InlineData(1, 1)]
    [InlineData(0.5, 0.25)]
    public void Run_RatiosVanishAtAPole_LeavesNothingOpen(double position, double acceleration)
    {
        MirroredPole[] poles = [Pole(0.25, 0.5), Pole(position / acceleration, 1), Pole(3, -0.75)];
        var finder = Found(poles, (position, acceleration), -100, 100);

        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Unresolved);
        CheckRoots(finder, poles, 0, (position, acceleration), -100, 100, "cancelled pole");
        Assert.InRange(finder.Evaluations, 1, 500);
    }

    [Fact]
    public void Run_PolesAtOnePlace_CountAsTheirSum()
    {
        var finder = Found([Pole(1, -0.25), Pole(1, -0.25), Pole(3, 0.25), Pole(3, 0.25)], (1, 0), -10, 10);

        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Unresolved);
        ScaledAssert.Within(2, Assert.Single(finder.Roots).Square, 1e-14);
    }

    [Fact]
    public void Run_PoleAtZero_IsNoObstacle()
    {
        MirroredPole[] poles = [Pole(0, -0.5), Pole(2, 0.75), Pole(5, -1)];
        var finder = Found(poles, (1, 0), -100, 100);

        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Unresolved);
        CheckRoots(finder, poles, 0, (1, 0), -100, 100, "pole at zero");
    }

    [Fact]
    public void Run_PolesThatCancel_NothingMeets()
    {
        var finder = Found([Pole(1, 0.5), Pole(1, -0.5)], (1, 0), -10, 10, 1);

        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Roots);
    }

    [Fact]
    public void Run_NoPoles_NothingMeets()
    {
        var finder = Found([], (1, 1), -10, 10, 0.5);
        Assert.True(finder.CoveredAll);
        Assert.Empty(finder.Roots);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(20)]
    public void Run_BudgetSpent_SaysThatItDidNotCoverAll(int budget)
    {
        MirroredPole[] poles = [.. Enumerable.Range(1, 40).Select(k => Pole(k * k, (k % 3 == 1 ? -0.8 : 1) / (1 + (0.05 * k))))];
        var finder = Found(poles, (1, 0), -100, 100, 0, budget);
        Assert.False(finder.CoveredAll);
        Assert.InRange(finder.Evaluations, budget, budget + 150);
    }

    [Fact]
    public void Run_Cancelled_Throws()
    {
        var finder = new CoalescenceFinder([Pole(1, -0.5), Pole(3, 0.5)], 0, new RatioFactor(1, 0, 0), -10, 10, Plenty, new CancellationToken(canceled: true));
        Assert.Throws<OperationCanceledException>(finder.Run);
        Assert.False(finder.CoveredAll);
    }

    private static void CheckRoots(
        CoalescenceFinder finder, MirroredPole[] poles, double constant, (double P, double A) law, double least, double greatest, string what)
    {
        var open = finder.Roots.ToList();
        var (top, bottom) = Fraction(poles, constant, law);
        var slope = (top.Derivative() * bottom) - (top * bottom.Derivative());
        foreach (var point in slope.IsZero ? [] : slope.Roots().Where(r => r.Low.Sign >= 0 && r.High.Sign > 0 && r.Refine(120).SignOf(bottom) != 0))
        {
            var z = Rational.Midpoint(point.Low, point.High);
            double real = (top.Evaluate(z) / bottom.Evaluate(z)).ToDouble();
            double delta = -1 / real;
            double square = point.ToDouble();
            int at = open.FindIndex(
                r => Math.Abs(r.Square - square) <= 1e-7 * square && Math.Abs(r.Real - real) <= r.RealUncertainty + (1e-13 * Math.Abs(real)));
            bool isInside = delta > least * (1 - 1e-9) && delta < greatest * (1 - 1e-9);
            Assert.True(at >= 0 || !isInside, $"{what}: the meeting at {square} with gain {delta} was not found");
            if (at >= 0)
            {
                Assert.InRange(delta, least * (1 + 1e-9), greatest * (1 + 1e-9));
                double curvature = (slope.Derivative().Evaluate(z) / (bottom.Evaluate(z) * bottom.Evaluate(z))).ToDouble();
                ScaledAssert.Within(
                    curvature, open[at].Curvature, (1e-6 * Math.Abs(curvature)) + (1e-9 * Math.Abs(real / (square * square))), $"{what}: curvature at {square}");
                open.RemoveAt(at);
            }
        }

        Assert.True(open.Count == 0, $"{what}: {string.Join("; ", open)} is no meeting");
    }

    /// <summary>Numerator and denominator of the loop as polynomials in <c>z</c>.</summary>
    private static (ExactPolynomial Top, ExactPolynomial Bottom) Fraction(MirroredPole[] poles, double constant, (double P, double A) law)
    {
        var (top, bottom) = (ExactPolynomial.FromDoubles(constant), ExactPolynomial.One);
        foreach (var pole in poles)
        {
            var (x, y) = (Rational.FromDouble(pole.Place.Real), Rational.FromDouble(pole.Place.Imaginary));
            var (u, v) = (Rational.FromDouble(pole.Residue.Real), Rational.FromDouble(pole.Residue.Imaginary));
            var (n, d) = pole.Place.Imaginary == 0
                ? (ExactPolynomial.Create(u), ExactPolynomial.Create(-x, 1))
                : (ExactPolynomial.Create(-2 * ((u * x) + (v * y)), 2 * u), ExactPolynomial.Create((x * x) + (y * y), -2 * x, 1));
            (top, bottom) = ((top * d) + (n * bottom), bottom * d);
        }

        return (top * ExactPolynomial.FromDoubles(law.P, -law.A), bottom);
    }

    /// <summary>Roots of <c>bottom + δ·top</c> off the real axis, from its companion matrix.</summary>
    private static int ComplexRoots(ExactPolynomial top, ExactPolynomial bottom, double delta)
    {
        var sum = bottom + (Rational.FromDouble(delta) * top);
        int n = sum.Degree;
        var companion = DenseMatrix.Create(n, n, (i, j) => j == n - 1 ? (-sum[i] / sum.LeadingCoefficient).ToDouble() : i == j + 1 ? 1 : 0);
        return RealEigen.Solve(companion).Values.Count(v => v.Imaginary != 0);
    }

    private static (double Real, double Slope) Direct(MirroredPole[] poles, (double P, double A) law, double z)
    {
        var (sum, slope) = (0.0, 0.0);
        foreach (var pole in poles)
        {
            var inverse = 1 / (z - pole.Place);
            sum += pole.Weight * (pole.Residue * inverse).Real;
            slope -= pole.Weight * (pole.Residue * inverse * inverse).Real;
        }

        return ((law.P - (law.A * z)) * sum, ((law.P - (law.A * z)) * slope) - (law.A * sum));
    }

    /// <summary>Real places of any sign and complex ones, with short numbers.</summary>
    private static MirroredPole[] AnyPoles(Random random, int count)
        => [.. Enumerable.Range(0, count).Select(k =>
        {
            double real = (k + (random.Next(16, 48) / 64.0)) * (random.Next(5) == 0 ? -1 : 1);
            double residue = random.Next(8, 128) / 64.0 * (random.Next(2) == 0 ? -1 : 1);
            return random.Next(4) == 0
                ? new MirroredPole(new Complex(real, random.Next(4, 128) / 64.0), new Complex(residue, random.Next(-64, 65) / 64.0), 0)
                : Pole(real, residue);
        })];

    private static MirroredPole Pole(double place, double residue) => new(place, residue, 0);

    private static CoalescenceFinder Found(
        IEnumerable<MirroredPole> poles, (double P, double A) law, double least, double greatest, double constant = 0, int budget = Plenty)
    {
        var finder = new CoalescenceFinder(poles, constant, new RatioFactor(law.P, 0, law.A), least, greatest, budget, CancellationToken.None);
        finder.Run();
        return finder;
    }
}
