using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

public sealed class SecularRootsTests
{
    private const double Epsilon = ScaledAssert.Epsilon;

    [Theory]
    [InlineData(1, 0, 0, 3)]
    [InlineData(1, 0, 0, -30)]
    [InlineData(0, 1, 0, 0.7)]
    [InlineData(0, 1, 0, -0.7)]
    [InlineData(0, 1, 0, 1e6)]
    [InlineData(0, 0, 1, 4)]
    [InlineData(0.5, -0.25, 0.125, 2)]
    public void Find_OneOscillator_IsTheClosedForm(double p, double v, double a, double delta)
    {
        const double D = 0.125, Kappa = 9, F = 2;
        var solution = Solve(Oscillators([(0, F, D, Kappa)], p, v, a), delta);
        double mass = 1 + (delta * a * F);
        var expected = Quadratic((D + (delta * v * F)) / mass, (Kappa + (delta * p * F)) / mass);
        ScaledAssert.Roots(expected, solution.Roots, [.. solution.Roots.Select(z => 32 * Epsilon * Complex.Abs(z))]);
        CheckUseful(solution, 1e4);
    }

    [Fact]
    public void Find_OneRealPole_MovesByGainTimesResidue()
    {
        var solution = Solve(new SecularTerms([], [], [], [], [-3], [0.5]), 4);
        Assert.Equal([new Complex(-5, 0)], solution.Roots);
        ScaledAssert.Small(solution.Uncertainty[0], 64 * Epsilon * 5);
    }

    [Fact]
    public void Find_Constant_DividesTheResidues()
    {
        var solution = Solve(new SecularTerms([], [], [], [], [-3], [0.5], Constant: 0.75), 4);
        ScaledAssert.Roots([new Complex(-3.5, 0)], solution.Roots, 8 * Epsilon);
    }

    [Fact]
    public void Find_ZeroGain_ReturnsThePoles()
    {
        var terms = new SecularTerms([0, 1, 0, 3], [1, 2, 1, 4], [0.5, 0, 2, 2], [4, 0, 1, 0.75], [-7, 0], [1, -4]);
        var solution = Solve(terms, 0);
        double omega = Math.Sqrt(4 - 0.0625);
        Complex[] expected = [new(-0.25, omega), new(-0.25, -omega), 0, 0, -1, -1, -1.5, -0.5, -7, 0];
        ScaledAssert.Roots(expected, solution.Roots, 4 * Epsilon);
        CheckOrder(solution);
        Assert.Equal(3, solution.Roots.Zip(solution.Uncertainty).Count(r => r.First == 0 && r.Second == 0));
    }

    [Fact]
    public void Find_NoTerms_ReturnsNoRoots() => Assert.Empty(Solve(new SecularTerms([], [], [], [], [], []), 3).Roots);

    [Theory]
    [InlineData(1, 4, 1, 1, 1e-9)]
    [InlineData(1, 4, 1, 1, 1)]
    [InlineData(1, 4, 1, 1, 1e8)]
    [InlineData(1, 4, 1, 1, -1e8)]
    [InlineData(1, 4, 1, -1, 0.5)]
    [InlineData(1, 4, 1, -1, 0.74)]
    [InlineData(1, 4, 1, -1, 0.76)]
    [InlineData(1, 4, 1, -1, 1e6)]
    [InlineData(1, 1e8, 1, -1, 0.5)]
    public void Find_TwoUndampedOscillators_IsTheClosedForm(double kappa1, double kappa2, double f1, double f2, double delta)
    {
        var solution = Solve(Oscillators([(0, f1, 0, kappa1), (0, f2, 0, kappa2)]), delta);
        var squares = Quadratic(kappa1 + kappa2 + (delta * (f1 + f2)), (kappa1 * kappa2) + (delta * ((f1 * kappa2) + (f2 * kappa1))));
        ScaledAssert.Roots([.. squares.SelectMany(PlusMinusRoot)], solution.Roots, solution.Uncertainty);
        CheckOrder(solution);
        CheckUseful(solution, 1e5);
    }

    [Fact]
    public void Find_UndampedOscillatorsAtTheirCoalescence_StatesTheUncertaintyOfADoubleRoot()
    {
        var solution = Solve(Oscillators([(0, 1, 0, 1), (0, -1, 0, 4)]), 0.75);
        var root = new Complex(0, Math.Sqrt(2.5));
        ScaledAssert.Roots([root, Complex.Conjugate(root), root, Complex.Conjugate(root)], solution.Roots, solution.Uncertainty);
        CheckOrder(solution);
        Assert.All(solution.Uncertainty, u => Assert.InRange(u, Math.Sqrt(Epsilon), 100 * Math.Sqrt(Epsilon)));
    }

    [Fact]
    public void Find_CriticalDamping_StatesTheUncertaintyOfADoubleRoot()
    {
        var solution = Solve(Oscillators([(0, 1, 0.5, 1)], position: 0, rate: 1), 1.5);
        ScaledAssert.Roots([-1, -1], solution.Roots, solution.Uncertainty);
        Assert.All(solution.Uncertainty, u => Assert.InRange(u, Math.Sqrt(Epsilon), 100 * Math.Sqrt(Epsilon)));
    }

    [Theory]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(4)]
    public void Find_MultipleRealRoot_IsCoveredByTheUncertainty(int multiplicity)
    {
        Complex[] roots = [.. Enumerable.Range(0, 4).Select(k => new Complex(k < multiplicity ? -2 : 5, 0))];
        var solution = Solve(WithRoots([-1, 0, 1, 3], roots), 1);
        ScaledAssert.Roots(roots, solution.Roots, solution.Uncertainty);
        Assert.All(solution.Uncertainty, u => ScaledAssert.Small(u, 100 * Math.Pow(Epsilon, 1.0 / multiplicity), "uncertainty"));
    }

    [Fact]
    public void Find_RandomIntegerPolesAndRoots_AreCoveredByTheUncertainty()
    {
        var random = new Random(31);
        for (int trial = 0; trial < Seeds.Count(2000); trial++)
        {
            int n = random.Next(1, 9);
            double[] poles = [.. Enumerable.Range(-20, 41).OrderBy(_ => random.Next()).Take(n).Select(k => (double)k)];
            var roots = new List<Complex>();
            while (roots.Count < n)
            {
                var z = new Complex(random.Next(-20, 21) + 0.5, random.Next(0, 9));
                if (roots.Contains(z) || (z.Imaginary > 0 && roots.Count == n - 1))
                {
                    continue;
                }

                roots.AddRange(z.Imaginary > 0 ? [z, Complex.Conjugate(z)] : [z]);
            }

            var solution = Checked(SecularRoots.Find(WithRoots(poles, [.. roots]), 1));
            ScaledAssert.Roots(roots, solution.Roots, solution.Uncertainty);
            CheckOrder(solution);
        }
    }

    [Fact]
    public void Find_RandomTerms_AgreesWithTheStateMatrix()
    {
        double[] gains = [1e-9, 1e-3, 0.3, -2, 25, -1e4];
        for (int seed = 0; seed < Seeds.Count(150); seed++)
        {
            var random = new Random(seed);
            var terms = RandomTerms(random, random.Next(1, 21));
            foreach (double gain in gains)
            {
                double delta = terms.Acceleration == 0 ? gain : 0.1 * gain / (1 + Math.Abs(gain));
                var solution = Solve(terms, delta);
                var system = RealEigen.Solve(StateMatrix(terms, delta));
                double worst = system.Uncertainty.Max();
                ScaledAssert.Roots(system.Values, solution.Roots, [.. solution.Uncertainty.Select(u => u + worst)]);
                CheckOrder(solution);
            }
        }
    }

    [Fact]
    public void Find_FromNearbyRoots_IsTheSameAsFromPoles()
    {
        for (int seed = 0; seed < Seeds.Count(40); seed++)
        {
            var random = new Random(seed);
            var terms = RandomTerms(random, random.Next(1, 13));
            double greatest = terms.Acceleration == 0 ? 50 : 0.1;
            Complex[]? start = null;
            for (int step = -40; step <= 40; step++)
            {
                double delta = greatest * step / 40;
                var warm = Checked(SecularRoots.Find(terms, delta, start));
                var cold = Solve(terms, delta);
                ScaledAssert.Roots(cold.Roots, warm.Roots, [.. warm.Uncertainty.Select(u => u + cold.Uncertainty.Max())]);
                CheckOrder(warm);
                start = warm.Roots;
            }
        }
    }

    [Fact]
    public void Find_SweepThroughCriticalDamping_SplitsAndJoinsThePair()
    {
        var terms = Oscillators([(0, 1, 0, 1), (0, 1, 0, 100)], position: 0, rate: 1);
        Complex[]? start = null;
        var counts = new List<int>();
        foreach (double delta in Enumerable.Range(0, 101).Concat(Enumerable.Range(0, 100).Reverse()).Select(k => 0.5 * k))
        {
            var solution = Checked(SecularRoots.Find(terms, delta, start));
            ScaledAssert.Roots(Solve(terms, delta).Roots, solution.Roots, [.. solution.Uncertainty.Select(u => 4 * u)]);
            counts.Add(solution.Roots.Count(z => z.Imaginary == 0));
            start = solution.Roots;
        }

        Assert.Contains(2, counts);
        Assert.Equal(0, counts[0]);
        Assert.Equal(2, counts[100]);
        Assert.Equal(counts, counts.AsEnumerable().Reverse());
    }

    [Fact]
    public void Find_TinyResidues_KeepsTheShiftOfEachPole()
    {
        const double Tiny = 1e-14;
        var terms = Oscillators([(0, 1, 0.25, 4), (0, Tiny, 0.5, 9), (0, -Tiny, 0, 16)], position: 0, rate: 1);
        var solution = Solve(terms, 0.5);
        var strong = Quadratic(0.75, 4);
        ScaledAssert.Roots(
            [.. strong, .. Quadratic(0.5, 9), .. Quadratic(0, 16)], solution.Roots, [.. solution.Uncertainty.Select(u => u + (4 * Tiny))]);
        CheckUseful(solution, 1e4);
        var still = solution.Roots.Single(z => Math.Abs(z.Imaginary - 4) < 1e-3);
        // δ·v·s·f/(2s) over the strong term's share of f.
        var share = 1 + (0.5 * new Complex(0, 4) / (new Complex(-12, 0) + (0.25 * new Complex(0, 4))));
        ScaledAssert.Relative((0.25 * Tiny / share).Real, still.Real, 1e-10);
    }

    [Fact]
    public void Find_ResiduesOfZero_LeavePolesExactly()
    {
        var terms = new SecularTerms([0, 0], [0, 1], [0.5, 0.25], [9, 4], [-2, -3], [0, 1]);
        var solution = Solve(terms, 0.7);
        Assert.Contains(new Complex(-2, 0), solution.Roots);
        Assert.Contains(new Complex(-0.25, Math.Sqrt(9 - 0.0625)), solution.Roots);
        CheckOrder(solution);
        var again = Checked(SecularRoots.Find(terms, 0.71, solution.Roots));
        ScaledAssert.Roots(Solve(terms, 0.71).Roots, again.Roots, again.Uncertainty);
    }

    [Theory]
    [InlineData(1e-12)]
    [InlineData(1e-3)]
    [InlineData(0.5)]
    [InlineData(1e5)]
    [InlineData(-1e-3)]
    public void Find_RigidBodyWithPosition_SplitsTheDoubleZero(double delta)
    {
        var solution = Solve(Oscillators([(0, 1, 0, 0)]), delta);
        ScaledAssert.Roots(PlusMinusRoot(-delta), solution.Roots, [.. solution.Roots.Select(z => 16 * Epsilon * Complex.Abs(z))]);
        CheckOrder(solution);
    }

    [Fact]
    public void Find_RigidBodyWithRate_KeepsOneZeroExactly()
    {
        var terms = Oscillators([(0, 1, 0, 0), (0, -0.5, 0.25, 4)], position: 0, rate: 1);
        var solution = Solve(terms, 0.25);
        Assert.Equal(0, Assert.Single(solution.Roots.Zip(solution.Uncertainty), r => r.First == 0).Second);
        ScaledAssert.Roots(
            RealEigen.Solve(StateMatrix(terms, 0.25)).Values, solution.Roots, [.. solution.Uncertainty.Select(u => u + 1e-14)]);
    }

    [Fact]
    public void Find_RigidBodyWithAcceleration_KeepsBothZerosExactly()
        => Assert.Equal(2, Solve(Oscillators([(0, 1, 0, 0), (0, 1, 0, 4)], position: 0, acceleration: 1), 0.5).Roots.Count(z => z == 0));

    [Theory]
    [InlineData(1e-6)]
    [InlineData(1)]
    [InlineData(-1)]
    [InlineData(1e6)]
    public void Find_OverdampedPoles_KeepsTheRelativeAccuracyOfTheSlowRoot(double delta)
    {
        const double Fast = -1e6, Slow = -1;
        var solution = Solve(new SecularTerms([], [], [], [], [Fast, Slow], [-0.5, 0.5]), delta);
        var expected = Quadratic(-Fast - Slow, (Fast * Slow) + (0.5 * delta * (Slow - Fast)));
        ScaledAssert.Roots(expected, solution.Roots, [.. solution.Roots.Select(z => 64 * Epsilon * Complex.Abs(z))]);
    }

    [Theory]
    [InlineData(1e8)]
    [InlineData(1e13)]
    [InlineData(-1e13)]
    public void Find_GreatGain_FindsRootsFarFromAllPoles(double delta)
    {
        var terms = new SecularTerms([0, 0], [1, 2], [0.25, 0.5], [1, 9], [-3, -1e4], [1, 2]);
        var solution = Solve(terms, delta);
        // 1/(−δL) = s/(3δ) + …: one root near −3δ, the others near the zeros of L.
        var far = solution.Roots.MaxBy(Complex.Abs);
        ScaledAssert.Relative(-3 * delta, far.Real, 1e-3);
        var system = RealEigen.Solve(StateMatrix(terms, delta));
        ScaledAssert.Roots(system.Values, solution.Roots, [.. solution.Uncertainty.Select(u => u + system.Uncertainty.Max())]);
        CheckOrder(solution);
        Assert.All(solution.Roots.Zip(solution.Uncertainty), r => ScaledAssert.Small(r.Second, 1e-9 * Complex.Abs(r.First), "uncertainty"));
    }

    [Theory]
    [InlineData(0.3)]
    [InlineData(-0.3)]
    [InlineData(1e-12)]
    [InlineData(-1e-12)]
    public void Find_NearlyEqualRealPoles_MayBecomeAPair(double delta)
    {
        // Poles −2 ± 2⁻²⁰.
        double kappa = 4 - Math.ScaleB(1, -40);
        var solution = Solve(Oscillators([(0, 1, 4, kappa)]), delta);
        double square = Math.ScaleB(1, -40) - delta;
        ScaledAssert.Roots([.. PlusMinusRoot(square).Select(z => z - 2)], solution.Roots, solution.Uncertainty);
        Assert.Equal(square > 0, solution.Roots.All(z => z.Imaginary == 0));
    }

    [Fact]
    public void Find_DampingOfRounding_KeepsTheRelativeAccuracyOfTheRealPart()
    {
        double[] omega = [1, 3, 7];
        double[] damping = [2e-16, 1e-16, 4e-17];
        double[] share = [1, -0.5, 0.25];
        var terms = Oscillators(
            [.. Enumerable.Range(0, 3).Select(k => (0.0, share[k], damping[k], omega[k] * omega[k]))], position: 0, rate: 1);
        var solution = Solve(terms, 1e-16);
        for (int k = 0; k < 3; k++)
        {
            var root = solution.Roots.Single(z => Math.Abs(z.Imaginary - omega[k]) < 0.1);
            ScaledAssert.Relative(-(damping[k] + (1e-16 * share[k])) / 2, root.Real, 1e-12);
        }
    }

    [Theory]
    [InlineData(0.01)]
    [InlineData(1)]
    [InlineData(300)]
    public void Find_UndampedCollocatedLoop_KeepsAllRootsOnTheAxis(double delta)
    {
        var random = new Random(8);
        var solution = Solve(
            Oscillators([.. Enumerable.Range(1, 60).Select(k => (0.0, Math.Pow(random.NextDouble(), 2), 0.0, (double)(k * k)))]), delta);
        for (int i = 0; i < solution.Roots.Length; i++)
        {
            ScaledAssert.Small(Math.Abs(solution.Roots[i].Real), solution.Uncertainty[i], $"real part of root {i}");
        }

        CheckOrder(solution);
        CheckUseful(solution, 1e4);
    }

    [Theory]
    [InlineData(0)]
    [InlineData(0.02)]
    public void Find_ThousandOscillators_FindsAllRootsFromPolesAndFromNearbyRoots(double zeta)
    {
        var random = new Random(9);
        var terms = Oscillators(
            [.. Enumerable.Range(1, 1000).Select(k => (0.0, (2 * random.NextDouble()) - 1, 2 * zeta * k, (double)k * k))], rate: 0.1);
        var near = Solve(terms, 20);
        var warm = Checked(SecularRoots.Find(terms, 20.5, near.Roots));
        var cold = Solve(terms, 20.5);
        CheckOrder(warm);
        Assert.Equal(2000, warm.Roots.Length);
        foreach (var (a, b) in Sorted(warm).Zip(Sorted(cold)))
        {
            ScaledAssert.Small(Complex.Abs(a.Root - b.Root), a.Uncertainty + b.Uncertainty, $"distance at {a.Root}");
        }
    }

    [Fact]
    public void Find_StartsThatSayNothing_StillFindsTheRoots()
    {
        var terms = new SecularTerms([0, 0], [1, 2], [0, 0.25], [0, 4], [-1, -2], [0.5, -0.25]);
        var expected = Solve(terms, 0.7);
        Complex[][] starts =
        [
            [], new Complex[6], [.. Enumerable.Repeat(new Complex(-1, 0), 6)],
            [.. Enumerable.Repeat(new Complex(-1, 1), 3), .. Enumerable.Repeat(new Complex(-1, -1), 3)],
            Solve(terms, 0).Roots, [.. Enumerable.Repeat(new Complex(double.NaN, 0), 6)],
            [.. Enumerable.Repeat(new Complex(double.NaN, double.NaN), 6)], [1e9, -1e9, 1e8, -1e8, 1e7, -1e7], expected.Roots,
        ];
        foreach (var start in starts)
        {
            var solution = Checked(SecularRoots.Find(terms, 0.7, start));
            ScaledAssert.Roots(expected.Roots, solution.Roots, [.. solution.Uncertainty.Select(u => 2 * u)]);
            CheckOrder(solution);
        }
    }

    [Fact]
    public void Find_OtherUnitOfTime_ScalesRootsExactly()
    {
        var terms = RandomTerms(new Random(4), 8);
        var plain = Solve(terms, 0.05);
        foreach (int k in new[] { -80, -3, 40, 90 })
        {
            double[] Scaled(double[] x, int power) => [.. x.Select(value => Math.ScaleB(value, power * k))];
            var scaled = Solve(
                terms with
                {
                    E = Scaled(terms.E, 1),
                    F = Scaled(terms.F, 2),
                    D = Scaled(terms.D, 1),
                    Kappa = Scaled(terms.Kappa, 2),
                    Root = Scaled(terms.Root, 1),
                    Residue = Scaled(terms.Residue, 1),
                    Rate = Math.ScaleB(terms.Rate, -k),
                    Acceleration = Math.ScaleB(terms.Acceleration, -2 * k),
                },
                0.05);
            Assert.Equal(plain.Roots, scaled.Roots.Select(z => new Complex(Math.ScaleB(z.Real, -k), Math.ScaleB(z.Imaginary, -k))));
            Assert.Equal(plain.Uncertainty, scaled.Uncertainty.Select(u => Math.ScaleB(u, -k)));
        }
    }

    [Fact]
    public void Find_CalledTwice_ReturnsTheSameBits()
    {
        var terms = RandomTerms(new Random(5), 12);
        Assert.Equal(Solve(terms, 0.3).Roots, Solve(terms, 0.3).Roots);
    }

    [Fact]
    public void Find_LeadingCoefficientOfZero_ReturnsNull()
        => Assert.Null(SecularRoots.Find(Oscillators([(0, 1, 0, 1)], position: 0, acceleration: 1), -1));

    [Fact]
    public void Find_MomentThatDoesNotVanish_WidensTheUncertainty()
    {
        var terms = Oscillators([(0.5, 1, 0.1, 4), (-0.5, 1, 0.1, 9)], position: 0, acceleration: 0.1);
        double[] excess = [0.5 + 1e-6, -0.5];
        var wide = Solve(terms with { E = excess }, 0.5).Uncertainty;
        Assert.All(wide.Zip(Solve(terms, 0.5).Uncertainty), u => Assert.InRange(u.First, 1e4 * u.Second, 1e-5));
    }

    [Fact]
    public void Find_DataThatAreNotFinite_ReturnsNull()
    {
        foreach (double bad in new[] { double.NaN, double.PositiveInfinity, double.NegativeInfinity })
        {
            var terms = new SecularTerms([0], [1], [0.5], [4], [-1], [1]);
            SecularTerms[] spoiled =
            [
                terms with { E = [bad] }, terms with { F = [bad] }, terms with { D = [bad] }, terms with { Kappa = [bad] },
                terms with { Root = [bad] }, terms with { Residue = [bad] }, terms with { Constant = bad }, terms with { Position = bad },
                terms with { Rate = bad }, terms with { Acceleration = bad },
            ];
            Assert.All(spoiled, t => Assert.Null(SecularRoots.Find(t, 0.5)));
            Assert.All(spoiled, t => Assert.Null(SecularRoots.Find(t, 0)));
            Assert.Null(SecularRoots.Find(terms, bad));
        }
    }

    private static SecularSolution Solve(SecularTerms terms, double delta) => Checked(SecularRoots.Find(terms, delta));

    private static SecularSolution Checked(SecularSolution? solution)
    {
        Assert.NotNull(solution);
        return solution;
    }

    private static void CheckOrder(SecularSolution solution)
    {
        Assert.Equal(solution.Roots.Length, solution.Uncertainty.Length);
        int pairs = solution.Roots.Count(z => z.Imaginary > 0);
        for (int i = 0; i < pairs; i++)
        {
            Assert.True(solution.Roots[2 * i].Imaginary > 0, $"{solution.Roots[2 * i]} stands at {2 * i}");
            Assert.Equal(Complex.Conjugate(solution.Roots[2 * i]), solution.Roots[(2 * i) + 1]);
            Assert.Equal(solution.Uncertainty[2 * i], solution.Uncertainty[(2 * i) + 1]);
        }

        Assert.All(solution.Roots.Skip(2 * pairs), z => Assert.Equal(0, z.Imaginary));
    }

    private static void CheckUseful(SecularSolution solution, double factor)
    {
        double scale = solution.Roots.Max(Complex.Abs);
        Assert.All(solution.Uncertainty, u => ScaledAssert.Small(u, factor * Epsilon * scale, "uncertainty"));
    }

    private static (Complex Root, double Uncertainty)[] Sorted(SecularSolution solution)
        => [.. solution.Roots.Zip(solution.Uncertainty).OrderBy(r => r.First.Imaginary).ThenBy(r => r.First.Real)];

    private static SecularTerms Oscillators(
        (double E, double F, double D, double Kappa)[] terms, double position = 1, double rate = 0, double acceleration = 0)
        => new(
            [.. terms.Select(t => t.E)], [.. terms.Select(t => t.F)], [.. terms.Select(t => t.D)], [.. terms.Select(t => t.Kappa)], [], [],
            Position: position, Rate: rate, Acceleration: acceleration);

    /// <summary>Partial fractions of <c>Π(s − root)/Π(s − pole)</c>.</summary>
    private static SecularTerms WithRoots(double[] poles, Complex[] roots)
    {
        double Residue(double pole)
            => roots.Aggregate(Complex.One, (product, z) => product * (pole - z)).Real
            / poles.Where(p => p != pole).Aggregate(1.0, (product, p) => product * (pole - p));
        return new SecularTerms([], [], [], [], poles, [.. poles.Select(Residue)]);
    }

    /// <summary>Modes with and without damping and rigid motion, overdamped poles, and a law of any kind; <c>Σe + Σr = 0</c>.</summary>
    private static SecularTerms RandomTerms(Random random, int count)
    {
        double Uniform() => (2 * random.NextDouble()) - 1;
        int overdamped = count > 1 ? random.Next(0, 1 + (count / 3)) : 0;
        int modes = count - overdamped;
        double zeta = new[] { 0, 1e-6, 0.02, 0.5 }[random.Next(4)];
        bool isRigid = modes > 1 && random.Next(3) == 0;
        bool hasVelocityResidues = random.Next(2) == 0;
        var (e, f, d, kappa) = (new double[modes], new double[modes], new double[modes], new double[modes]);
        for (int k = isRigid ? 1 : 0; k < modes; k++)
        {
            double omega = (k + 1) * (1 + (0.2 * Uniform()));
            (d[k], kappa[k]) = (2 * zeta * omega * (0.5 + random.NextDouble()), omega * omega);
            f[k] = Uniform() * (random.Next(6) == 0 ? 1e-14 : 1);
            e[k] = hasVelocityResidues && k > 0 ? 0.1 * Uniform() : 0;
        }

        f[0] = isRigid ? random.NextDouble() : f[0];
        e[modes - 1] -= e.Sum();
        var (root, residue) = (new double[2 * overdamped], new double[2 * overdamped]);
        for (int j = 0; j < overdamped; j++)
        {
            double slow = -10 * random.NextDouble();
            double fast = slow * Math.Pow(10, 0.2 + (2 * random.NextDouble()));
            double r = Uniform() / (slow - fast);
            (root[2 * j], root[(2 * j) + 1], residue[2 * j], residue[(2 * j) + 1]) = (slow, fast, r, -r);
        }

        var (p, v, a) = random.Next(4) switch
        {
            0 => (1.0, 0.0, 0.0),
            1 => (0.0, 1.0, 0.0),
            2 => (Uniform(), Uniform(), 0.0),
            _ => (Uniform(), Uniform(), Uniform()),
        };
        return new SecularTerms(e, f, d, kappa, root, residue, 0, p, v, a);
    }

    /// <summary>State matrix of the closed loop, <c>A − B·C·δ/(1 + δ·D)</c>, with companion blocks for the terms.</summary>
    private static Matrix<double> StateMatrix(SecularTerms terms, double delta)
    {
        int modes = terms.D.Length;
        int order = (2 * modes) + terms.Root.Length;
        Matrix<double> a = new DenseMatrix(order, order);
        var (b, g) = (new DenseVector(order), new DenseVector(order));
        for (int k = 0; k < modes; k++)
        {
            a[2 * k, (2 * k) + 1] = 1;
            (a[(2 * k) + 1, 2 * k], a[(2 * k) + 1, (2 * k) + 1]) = (-terms.Kappa[k], -terms.D[k]);
            b[(2 * k) + 1] = 1;
            (g[2 * k], g[(2 * k) + 1]) = (terms.F[k], terms.E[k]);
        }

        for (int j = 0; j < terms.Root.Length; j++)
        {
            int at = (2 * modes) + j;
            (a[at, at], b[at], g[at]) = (terms.Root[j], 1, terms.Residue[j]);
        }

        var rate = a.TransposeThisAndMultiply(g);
        var acceleration = a.TransposeThisAndMultiply(rate);
        var c = (terms.Position * g) + (terms.Rate * rate) + (terms.Acceleration * acceleration);
        double through = (terms.Position * terms.Constant) + (terms.Acceleration * rate.DotProduct(b));
        return a - (delta / (1 + (delta * through)) * b.OuterProduct(c));
    }

    /// <summary>Roots of <c>s² + b·s + c</c>.</summary>
    private static Complex[] Quadratic(double b, double c)
    {
        double discriminant = (b * b / 4) - c;
        if (discriminant < 0)
        {
            var root = new Complex(-b / 2, Math.Sqrt(-discriminant));
            return [root, Complex.Conjugate(root)];
        }

        double larger = (-b / 2) - Math.CopySign(Math.Sqrt(discriminant), b);
        return larger == 0 ? [0, 0] : [larger, c / larger];
    }

    private static Complex[] PlusMinusRoot(double square) => PlusMinusRoot(new Complex(square, 0));

    private static Complex[] PlusMinusRoot(Complex square)
    {
        var root = square.Imaginary != 0 ? Complex.Sqrt(square)
            : square.Real < 0 ? new Complex(0, Math.Sqrt(-square.Real)) : Math.Sqrt(square.Real);
        return [root, -root];
    }
}
