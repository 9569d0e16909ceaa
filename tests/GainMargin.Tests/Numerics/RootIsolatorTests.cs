using GainMargin.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Numerics;

public sealed class RootIsolatorTests
{
    private const int Plenty = 1_000_000;

    private static readonly (double P, double V, double A)[] Laws =
        [(1, 0, 0), (0, 0.5, 0), (0, 0, 0.75), (0, 0, -2), (1, 0.25, 0), (-1.5, 0, 0.5), (0, 0.25, 2), (1, -0.5, 0.125)];

    // Bounds through the moduli of complex residues would grow like 1/ζ, and the cost with them.
    [Theory]
    [InlineData(1e-2)]
    [InlineData(1e-4)]
    [InlineData(1e-6)]
    [InlineData(1e-8)]
    [InlineData(1e-10)]
    [InlineData(1e-12)]
    [InlineData(1e-14)]
    [InlineData(1e-16)]
    public void Run_DampingFalls_CostStaysTheSame(double zeta)
    {
        var run = Isolated(Modes(20, zeta), (1, 0, 0), -10, 10);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Unresolved);
        Assert.Equal(6, run.Isolator.Roots.Count);
        Assert.InRange(run.Evaluations, 100, 1000);
    }

    // A double zero is nobody's root, but its pole grows beyond all bounds in the first cell; so does a resonance in its own.
    [Theory]
    [InlineData(0, 0, 1)]
    [InlineData(1, 0, 0)]
    [InlineData(1, 0.01, 0)]
    public void Run_RigidBodyWithModes_CostStaysSmall(double position, double rate, double acceleration)
    {
        var run = Isolated([AxisTerm.Second(0, 0.5, 0, 0), .. Modes(20, 1e-2)], (position, rate, acceleration), -10, 10);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Unresolved);
        Assert.InRange(run.Evaluations, 100, 1000);
    }

    // Roots as near to the pole as its damping, 1e-13, where z itself has no digits left.
    [Fact]
    public void Run_NearlyUndampedNearlyInvisibleMode_GainsBesideItAreRight()
    {
        const double kappa = 1.7;
        AxisTerm[] set =
        [
            AxisTerm.Second(0, 1, 2e-3, 1),
            AxisTerm.Second(0, -1e-14, 2e-13 * Math.Sqrt(kappa), kappa),
            AxisTerm.Second(0, 1, 4e-3, 4),
        ];
        var isolator = Isolated(set, (1, 0, 0), -10, 10).Isolator;
        var exact = AxisTerm.Exactly(set);
        var expected = exact.RealPoints().Select(r => -1 / exact.RealAt(r)).Where(delta => Math.Abs(delta) <= 10).ToArray();

        Assert.True(isolator.CoveredAll);
        Assert.Empty(isolator.Unresolved);
        Assert.Equal(2, expected.Length);
        Assert.Equal(expected.Length, isolator.Roots.Count);
        for (int k = 0; k < expected.Length; k++)
        {
            var root = isolator.Roots[k];
            ScaledAssert.Relative(expected[k], -1 / root.Real, 1e-9, $"gain of root {k}");
            ScaledAssert.Small(root.RealUncertainty, 1e-9 * Math.Abs(root.Real), $"uncertainty of root {k}");
            Assert.InRange(Math.Abs(root.Offset), 1e-16, 1e-11);
        }
    }

    // From end to end of a chain the residues alternate and their moments cancel: only the Taylor polynomials keep what is left.
    [Fact]
    public void Run_EndsOfAChainOf40Masses_CostStaysSmallUpToGreatGains()
    {
        var run = Isolated(Chain(40), (1, 0, 0), -1e6, 1e6);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Unresolved);
        Assert.Equal(36, run.Isolator.Roots.Count);
        Assert.InRange(run.Evaluations, 100, 5000);
    }

    [Fact]
    public void Run_EndsOfAShortChain_RootsAreTheExactOnes()
    {
        var chain = Chain(9);
        var run = Isolated(chain, (1, 0, 0), -1e6, 1e6);

        Assert.Equal(8, run.Isolator.Roots.Count);
        CheckRoots(run.Isolator, AxisTerm.Exactly(chain), -1e6, 1e6, "chain");
    }

    [Fact]
    public void Run_ImaginaryPartVanishesIdentically_IsUnresolvedAtOnce()
    {
        var run = Isolated(Modes(5, 0), (1, 0, 0), -10, 10);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Roots);
        var band = Assert.Single(run.Isolator.Unresolved);
        Assert.True(band is { From: 0, To: >= 25 });
        Assert.False(band.RealLow > -1 || band.RealHigh < 1);
        Assert.InRange(run.Evaluations, 1, 50);
    }

    // An acceleration keeps the loop in reach however high the frequency: with no sign to keep there is no end of the search.
    [Theory]
    [InlineData(0, 1)]
    [InlineData(1, 0.5)]
    public void Run_VanishesIdenticallyAndStaysInReach_SaysThatItDidNotCoverAll(double position, double acceleration)
        => Assert.False(Isolated(Modes(5, 0), (position, 0, acceleration), -10, 10).Isolator.CoveredAll);

    // The imaginary part knows nothing of the undamped mode; cleared, its pole would be a root at which the loop is infinite.
    [Theory]
    [InlineData(1, 0)]
    [InlineData(0, 1)]
    [InlineData(1, 0.125)]
    public void Run_OneUndampedModeAmongDampedOnes_ItsPoleIsNoRoot(double position, double acceleration)
    {
        AxisTerm[] set = [AxisTerm.Second(0, 0.5, 0.02, 0.5), AxisTerm.Second(0, 1, 0, 1.25), AxisTerm.Second(0, -0.75, 0.02, 4)];
        var run = Isolated(set, (position, 0, acceleration), -10, 10);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Unresolved);
        Assert.Single(run.Isolator.Roots);
        CheckRoots(run.Isolator, AxisTerm.Exactly(set) * ExactTransfer.Ratios(position, 0, acceleration), -10, 10, "one undamped");
    }

    [Theory]
    [InlineData(1)]
    [InlineData(20)]
    [InlineData(100)]
    public void Run_BudgetSpent_SaysThatItDidNotCoverAll(int budget)
    {
        var run = Isolated(Modes(20, 1e-2), (1, 0, 0), -10, 10, budget);

        Assert.False(run.Isolator.CoveredAll);
        Assert.InRange(run.Evaluations, budget, budget + 150);
    }

    [Fact]
    public void Run_NoTailBound_SaysThatItDidNotCoverAll()
    {
        // The pole is so far away that no doubling stays finite.
        var run = Isolated([AxisTerm.Second(0, 1e200, 1e90, 1e300)], (1, 0, 1), -10, 10);

        Assert.False(run.Isolator.CoveredAll);
    }

    [Fact]
    public void Run_OneSidedReach_LeavesOutRootsOfTheOtherSide()
    {
        var both = Isolated(Modes(9, 1e-2), (1, 0, 0), -10, 10).Isolator.Roots.Select(r => -1 / r.Real).ToArray();
        double[] positive = [.. both.Where(delta => delta > 0)];
        double[] negative = [.. both.Where(delta => delta < 0)];

        Assert.NotEmpty(positive);
        Assert.NotEmpty(negative);
        Assert.Equal(positive, Gains(0, 10));
        Assert.Equal(negative, Gains(-10, 0));
        double between = 0.5 * (positive.Order().First() + positive.Order().Skip(1).First());
        Assert.Equal([.. both.Where(delta => delta < between)], Gains(-10, between));
        Assert.Empty(Gains(0, 0));

        static double[] Gains(double least, double greatest)
            => [.. Isolated(Modes(9, 1e-2), (1, 0, 0), least, greatest).Isolator.Roots.Select(r => -1 / r.Real)];
    }

    [Fact]
    public void Run_Cancelled_Throws()
    {
        var function = new AxisFunction(AxisTerm.Of(Modes(5, 1e-2)), new RatioFactor(1, 0, 0), []);
        var isolator = new RootIsolator(function, -10, 10, Plenty, new CancellationToken(canceled: true));

        Assert.Throws<OperationCanceledException>(isolator.Run);
        Assert.False(isolator.CoveredAll);
    }

    [Fact]
    public void Run_NoTerms_HasNoRoots()
    {
        var run = Isolated([], (1, 1, 1), -10, 10);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Roots);
        Assert.Empty(run.Isolator.Unresolved);
    }

    [Fact]
    public void Run_RandomTerms_RootsAreThoseOfExactArithmetic()
    {
        var random = new Random(41);
        int roots = 0;
        for (int trial = 0; trial < 200; trial++)
        {
            var law = Laws[random.Next(Laws.Length)];
            var set = Enumerable.Range(0, random.Next(1, 9)).Select(_ => AxisTerm.Any(random, law.A != 0)).ToArray();
            double constant = random.Next(4) == 0 ? random.Next(-8, 9) / 64.0 : 0;
            AxisTerm[] lag = random.Next(4) == 0 ? [AxisTerm.First(2, -2)] : [];
            var exact = AxisTerm.Exactly(set, constant) * ExactTransfer.Ratios(law.P, law.V, law.A);
            exact = lag.Length == 0 ? exact : exact * lag[0].Exact;
            string what = $"trial {trial}, {law}, {string.Join(" + ", set.Select(t => t.Kind))} + {constant}, {lag.Length} lag";
            bool vanishes = exact.ImaginaryTop.IsZero;
            var run = Isolated(set, law, -10, 10, constant: constant, dynamics: [.. lag.Select(l => AxisTerm.Of([l]))]);
            if (vanishes)
            {
                Assert.True(run.Isolator.Unresolved.Count > 0 || !run.Isolator.CoveredAll, what);
                continue;
            }

            // Where a constant is differentiated and lagged the loop may stay in reach for good.
            Assert.True(run.Isolator.CoveredAll || (constant != 0 && lag.Length > 0 && (law.A != 0 || law.V != 0)), what);
            if (run.Isolator.CoveredAll)
            {
                CheckRoots(run.Isolator, exact, -10, 10, what);
                roots += run.Isolator.Roots.Count;
            }
        }

        Assert.InRange(roots, 200, 5000);
    }

    // Sign changes seen by dense sampling where no pole and no end of the reach is near; independent of polynomials.
    [Fact]
    public void Run_RandomDampedModes_RootsAreTheSignChangesOfDenseSamples()
    {
        var random = new Random(42);
        int changes = 0;
        for (int trial = 0; trial < 200; trial++)
        {
            double[] kappa = [.. Enumerable.Range(1, random.Next(1, 9)).Select(k => k + (0.5 * random.NextDouble()))];
            AxisTerm[] set = [.. kappa.Select(k => AxisTerm.Second(0, random.NextDouble() - 0.5, 0.02 + (0.05 * random.NextDouble()), k))];
            var law = Laws[random.Next(Laws.Length)];
            var run = Isolated(set, law, -20, 20);
            Assert.True(run.Isolator.CoveredAll);

            const double step = 1e-3;
            double previous = 0;
            for (double z = 0.01; z < 12; z += step)
            {
                var (real, imaginary) = Direct(set, law, z);
                bool isChange = Math.Sign(imaginary) * Math.Sign(previous) < 0;
                previous = imaginary;
                if (!isChange)
                {
                    continue;
                }

                double away = kappa.Min(k => Math.Abs(z - k));
                bool inReach = Math.Abs(real) > 0.05 * (1 + (10 * step / away));
                int found = run.Isolator.Roots.Count(r => r.Square > z - step - 1e-12 && r.Square < z + 1e-12);
                Assert.True(found == 1 || !inReach || away < 10 * step, $"trial {trial}: {found} roots before {z}, where the sign changes");
                changes += inReach ? 1 : 0;
            }
        }

        Assert.InRange(changes, 200, 2000);
    }

    // By symmetry midway between two centres, where their cells meet and each rounds in its own way.
    [Fact]
    public void Run_RootAtTheCommonEndOfTwoCells_IsFoundOnce()
    {
        var random = new Random(43);
        for (int trial = 0; trial < 500; trial++)
        {
            double middle = 5 + random.NextDouble();
            double half = 1 + random.NextDouble();
            double far = 3 + random.NextDouble();
            double square = random.NextDouble();
            var terms = PairTerms.Of([Resonance(middle - far, 1), Resonance(middle - half, 1), Resonance(middle + half, -1), Resonance(middle + far, -1)], 0);
            var isolator = new RootIsolator(new AxisFunction(terms, new RatioFactor(1, 0, 0), []), -1, 1, Plenty, CancellationToken.None);
            isolator.Run();
            Assert.True(isolator.CoveredAll);
            Assert.Empty(isolator.Unresolved);
            Assert.True(isolator.Roots.Count == 1, $"trial {trial}, {middle}, {half}, {square}: {string.Join("; ", isolator.Roots)}");
            ScaledAssert.Within(middle, isolator.Roots[0].Square, isolator.Roots[0].SquareUncertainty + 4e-15, $"trial {trial}");

            PairTerm Resonance(double center, int sign) => new(center, square, 0, sign, sign, 0, center, 0);
        }
    }

    // x″ + 2ζωx′ + ω²x = u, T·u′ + u = −g·x: of third order, so g_max = 2ζω(1/T + 2ζω + ω²T) by Routh's criterion.
    [Theory]
    [Trait("Published", "P24")]
    [InlineData(0.02, 1, 0.5, 0.1016, 1.0392304845413265)]
    [InlineData(0.02, 1, 5, double.NaN, double.NaN)]
    [InlineData(0.001, 3, 0.01, double.NaN, double.NaN)]
    [InlineData(0.3, 0.2, 40, double.NaN, double.NaN)]
    public void Run_PositionThroughAnActuatorLag_IsRouthsLimit(double zeta, double omega, double lag, double gain, double frequency)
    {
        double expected = 2 * zeta * omega * ((1 / lag) + (2 * zeta * omega) + (omega * omega * lag));
        double at = Math.Sqrt((omega * omega) + (2 * zeta * omega / lag));
        var run = Isolated(
            [AxisTerm.Second(0, 1, 2 * zeta * omega, omega * omega)], (1, 0, 0), 0, 2 * expected,
            dynamics: [AxisTerm.Of([AxisTerm.First(1 / lag, -1 / lag)])]);

        Assert.True(run.Isolator.CoveredAll);
        var root = Assert.Single(run.Isolator.Roots);
        ScaledAssert.Relative(expected, -1 / root.Real, 1e-10, "gain");
        ScaledAssert.Relative(at, Math.Sqrt(root.Square), 1e-10, "frequency");
        Assert.True(root.ImaginarySlope > 0, "the pair grows above the limit");
        if (!double.IsNaN(gain))
        {
            ScaledAssert.Within(gain, -1 / root.Real, 1e-10);
            ScaledAssert.Within(frequency, Math.Sqrt(root.Square), 1e-10);
        }
    }

    // A resonance of the actuator is no pole of the terms, and no cell is made around it.
    [Theory]
    [InlineData(0.2)]
    [InlineData(1e-3)]
    [InlineData(1e-6)]
    public void Run_LightlyDampedActuator_RootsAreTheExactOnes(double damping)
    {
        AxisTerm[] set = [AxisTerm.Second(0, 1, 0.04, 4), AxisTerm.Second(0, -0.5, 0.04, 9)];
        var actuator = AxisTerm.Second(0, 1, damping, 1);
        var run = Isolated(set, (1, 0, 0), -100, 100, dynamics: [AxisTerm.Of([actuator])]);

        Assert.True(run.Isolator.CoveredAll);
        CheckRoots(run.Isolator, AxisTerm.Exactly(set) * actuator.Exact, -100, 100, "actuator");
        Assert.NotEmpty(run.Isolator.Roots);
    }

    // Beside its pole the bounds of the real part are no numbers; the band must not pass for one without values.
    [Fact]
    public void Run_UndampedActuator_LeavesItsPoleOpenForEveryGain()
    {
        AxisTerm[] set = [AxisTerm.Second(0, 1, 0.04, 4), AxisTerm.Second(0, -0.5, 0.04, 9)];
        var run = Isolated(set, (1, 0, 0), -10, 10, dynamics: [AxisTerm.Of([AxisTerm.Second(0, 1, 0, 1)])]);

        Assert.True(run.Isolator.CoveredAll);
        var band = Assert.Single(run.Isolator.Unresolved);
        Assert.True(band is { From: < 1 and > 0.999, To: > 1 and < 1.001, RealLow: < -1e10, RealHigh: > 1e10 }, $"{band}");
        Assert.InRange(run.Evaluations, 1, 5000);
    }

    [Fact]
    public void Run_IntegratingActuator_LeavesOnlyZeroOpen()
    {
        AxisTerm[] set = [AxisTerm.Second(0, 1, 0.04, 4), AxisTerm.Second(0, -0.5, 0.04, 9)];
        var integrator = AxisTerm.First(1, 0);
        var run = Isolated(set, (1, 0, 0), -10, 10, dynamics: [AxisTerm.Of([integrator])]);

        Assert.True(run.Isolator.CoveredAll);
        Assert.True(Assert.Single(run.Isolator.Unresolved) is { From: 0, To: < 1e-50 });
        CheckRoots(run.Isolator, AxisTerm.Exactly(set) * integrator.Exact, -10, 10, "integrator");
        Assert.Equal(2, run.Isolator.Roots.Count);
        Assert.InRange(run.Evaluations, 1, 5000);
    }

    // Only one pole is cleared, so several at one place must count as one.
    [Theory]
    [InlineData(0, 0)]
    [InlineData(1e-14, 0)]
    [InlineData(1e-14, 1e-15)]
    public void Run_SeveralPolesAtOnePlace_CostStaysSmall(double damping, double other)
    {
        AxisTerm[] set =
        [
            AxisTerm.Second(0, 0.25, damping, 2), AxisTerm.Second(0, 0.5, other, 2), AxisTerm.Second(0, 0.75, 0.04, 1), AxisTerm.Second(0, -1, 0.04, 4),
        ];
        var run = Isolated(set, (1, 0.125, 0), -10, 10);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Empty(run.Isolator.Unresolved);
        CheckRoots(run.Isolator, AxisTerm.Exactly(set) * ExactTransfer.Ratios(1, 0.125, 0), -10, 10, "several at one place");
        Assert.InRange(run.Evaluations, 1, 2000);
    }

    [Fact]
    public void Run_OnlyFurtherFactorsHavePoles_RootsAreTheExactOnes()
    {
        var run = Isolated([], (1, 0, 0), -100, 100, constant: 0.5, dynamics: [AxisTerm.Of([AxisTerm.First(2, -2)]), AxisTerm.Of([AxisTerm.Second(0, 1, 0.5, 1)])]);

        Assert.True(run.Isolator.CoveredAll);
        Assert.Single(run.Isolator.Roots);
        CheckRoots(
            run.Isolator, ExactTransfer.Constant(0.5) * ExactTransfer.First(2, -2) * ExactTransfer.Second(0, 1, 0.5, 1), -100, 100, "factors alone");
    }

    // The constant outweighs the mode only a thousand times above it, where an acceleration has become large.
    [Fact]
    public void Run_RootFarAboveAllPoles_IsFound()
    {
        AxisTerm[] set = [AxisTerm.Second(0, 1, 0.1, 1)];
        const double constant = 1e-4;
        var exact = AxisTerm.Exactly(set, constant) * ExactTransfer.Ratios(0, 1e-3, -1);
        var run = Isolated(set, (0, 1e-3, -1), -0.1, 0, constant: constant);

        Assert.True(run.Isolator.CoveredAll);
        Assert.InRange(Assert.Single(run.Isolator.Roots).Square, 1e6, 1.1e6);
        CheckRoots(run.Isolator, exact, -0.1, 0, "far root");
    }

    /// <summary>The roots in reach, their values and slopes are those of exact arithmetic; whatever is left open lies in a band.</summary>
    private static void CheckRoots(RootIsolator isolator, ExactTransfer exact, double least, double greatest, string what)
    {
        var open = isolator.Roots.ToList();
        foreach (var point in exact.RealPoints())
        {
            double real = exact.RealAt(point);
            double delta = -1 / real;
            double square = point.ToDouble();
            int at = open.FindIndex(
                r => Math.Abs(r.Square - square) <= r.SquareUncertainty + (1e-14 * square) && Math.Abs(r.Real - real) <= r.RealUncertainty + (1e-13 * Math.Abs(real)));
            bool isInside = delta > least * (1 - 1e-9) && delta < greatest * (1 - 1e-9);
            bool isBand = isolator.Unresolved.Any(b => b.From <= square && square <= b.To);
            Assert.True(at >= 0 || !isInside || isBand, $"{what}: the root at {square} with gain {delta} was not found");
            if (at >= 0)
            {
                CheckSlope(open[at], exact, point, what);
                open.RemoveAt(at);
            }
        }

        Assert.True(open.Count == 0, $"{what}: {string.Join("; ", open)} is no root");
        Assert.All(isolator.Roots, r => Assert.InRange(-1 / r.Real, least - 1e-9, greatest + 1e-9));
    }

    private static void CheckSlope(AxisRoot root, ExactTransfer exact, ExactRoot point, string what)
    {
        var z = Rational.Midpoint(point.Low, point.High);
        var step = Rational.FromDouble(Math.ScaleB(root.Square, -60));
        double imaginary = ((exact.Imaginary(z + step) - exact.Imaginary(z - step)) / (2 * step)).ToDouble();
        double real = ((exact.Real(z + step) - exact.Real(z - step)) / (2 * step)).ToDouble();
        ScaledAssert.Relative(imaginary, root.ImaginarySlope, 1e-6, $"{what}: I′ at {root.Square}");
        ScaledAssert.Within(real, root.RealSlope, 1e-6 * (Math.Abs(real) + Math.Abs(root.Real / root.Square)), $"{what}: R′ at {root.Square}");
    }

    private static (double Real, double Imaginary) Direct(AxisTerm[] set, (double P, double V, double A) law, double z)
    {
        var s = new System.Numerics.Complex(0, Math.Sqrt(z));
        var sum = System.Numerics.Complex.Zero;
        foreach (var term in set)
        {
            sum += term.Direct(s);
        }

        var loop = sum * (law.P + (s * (law.V + (s * law.A))));
        return (loop.Real, loop.Imaginary);
    }

    private static (RootIsolator Isolator, int Evaluations) Isolated(
        IEnumerable<AxisTerm> terms, (double P, double V, double A) law, double least, double greatest, int budget = Plenty, double constant = 0,
        IPairFactor[]? dynamics = null)
    {
        var function = new AxisFunction(AxisTerm.Of(terms, constant), new RatioFactor(law.P, law.V, law.A), dynamics ?? []);
        var isolator = new RootIsolator(function, least, greatest, budget, CancellationToken.None);
        isolator.Run();
        return (isolator, function.Evaluations);
    }

    /// <summary>Modes with frequencies 1, 2, … and residues of changing sign.</summary>
    private static AxisTerm[] Modes(int count, double zeta)
        => [.. Enumerable.Range(1, count).Select(k => AxisTerm.Second(0, (k % 3 == 1 ? -0.8 : 1) / (1 + (0.05 * k)), 2 * zeta * k, k * k))];

    /// <summary>Unit masses and springs fixed at one end, damping proportional to stiffness, from the first mass to the last.</summary>
    private static AxisTerm[] Chain(int n)
        => [.. Enumerable.Range(1, n).Select(k =>
        {
            double angle = ((2 * k) - 1) * Math.PI / ((2 * n) + 1);
            double kappa = 4 * Math.Pow(Math.Sin(0.5 * angle), 2);
            return AxisTerm.Second(0, 4.0 / ((2 * n) + 1) * Math.Sin(angle) * Math.Sin(n * angle), 0.02 * kappa, kappa);
        })];
}
