using System.Collections.Immutable;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>Each theorem against root counts in exact arithmetic.</summary>
public sealed class DecidingFactTests
{
    private static readonly double[,] _unit = { { 1, 0 }, { 0, 1 } };
    private static readonly double[,] _zero = { { 0, 0 }, { 0, 0 } };

    [Fact]
    public void Facts_DampedGyroscopicWithPositiveStiffness_StableByKelvinTaitChetaev()
        => CheckFact(
            Systems.Of(_unit, new double[,] { { 1, 5 }, { -5, 2 } }, new double[,] { { 2, 1 }, { 1, 2 } }),
            "Kelvin–Tait–Chetaev", StabilityVerdict.Stable);

    [Fact]
    public void Facts_GyroscopicallyHeldButDamped_UnstableByKelvinTaitChetaev()
    {
        // Without the damping the gyroscopic terms hold this top up.
        double[,] stiffness = { { -1, 0 }, { 0, -2 } };
        var undamped = Systems.Open(Systems.Of(_unit, new double[,] { { 0, 10 }, { -10, 0 } }, stiffness));
        Assert.Equal(StabilityVerdict.Marginal, ExactCount.Verdict(ExactCount.Of(undamped)));
        Assert.Empty(ClosedLoopAnalysis.Split(undamped).Facts);
        var damped = Systems.Of(_unit, new double[,] { { 0.01, 10 }, { -10, 0.01 } }, stiffness);
        CheckFact(damped, "Kelvin–Tait–Chetaev", StabilityVerdict.Unstable);
    }

    [Fact]
    public void Facts_UndampedWithPositiveStiffness_MarginalByLagrangeDirichlet()
        => CheckFact(
            Systems.Of(_unit, new double[,] { { 0, 3 }, { -3, 0 } }, new double[,] { { 2, 1 }, { 1, 2 } }),
            "Lagrange–Dirichlet", StabilityVerdict.Marginal);

    [Fact]
    public void Facts_OneNegativeEigenvalueOfAnUnsymmetricStiffness_UnstableByItsDeterminant()
        => CheckFact(
            Systems.Of(_unit, _unit, new double[,] { { 1, 4 }, { 1, 2 } }),
            "negative stiffness determinant", StabilityVerdict.Unstable);

    [Fact]
    public void Facts_DampingThatFeedsMoreThanItTakes_UnstableByItsTrace()
        => CheckFact(
            Systems.Of(_unit, new double[,] { { 1, 0 }, { 0, -2 } }, new double[,] { { 3, 1 }, { 1, 2 } }),
            "negative total damping", StabilityVerdict.Unstable);

    [Fact]
    public void Facts_EqualFrequenciesWithCirculatoryStiffness_UnstableByMerkin()
        => CheckFact(Systems.OfStiffness(new[,] { { 1, 0.001 }, { -0.001, 1 } }), "Merkin", StabilityVerdict.Unstable);

    [Fact]
    public void Facts_EqualFrequenciesThroughTheMass_UnstableByMerkin()
        => CheckFact(
            Systems.Of(new double[,] { { 2, 1 }, { 1, 3 } }, _zero, new double[,] { { 8, 5 }, { 3, 12 } }),
            "Merkin", StabilityVerdict.Unstable);

    [Fact]
    public void Facts_NothingToGoBy_AreEmpty()
    {
        // Semidefinite damping and circulatory stiffness: no theorem of the list applies.
        var closed = Systems.Open(Systems.Of(_unit, new double[,] { { 1, 0 }, { 0, 0 } }, new[,] { { 1, 0.1 }, { -0.1, 2 } }));
        Assert.Empty(ClosedLoopAnalysis.Split(closed).Facts);
        Assert.Equal(ExactCount.Verdict(ExactCount.Of(closed)), ClosedLoopAnalysis.Spectrum(closed).Verdict);
    }

    [Fact]
    public void Facts_SkewMass_AreEmpty()
    {
        var structure = Systems.Of(_unit, _unit, _unit);
        Assert.NotEmpty(ClosedLoopAnalysis.Split(Systems.Open(structure)).Facts);
        Assert.Empty(ClosedLoopAnalysis.Split(Systems.Closed(structure, 0.1, Systems.Loop("q1", "q2", acceleration: 1))).Facts);
    }

    [Fact]
    public void Facts_CirculatoryStiffnessBelowTheRoundingOfTheFrequencies_AreNotClaimed()
    {
        // The frequencies differ by one unit in the last place, far more than the circulatory term: the exact roots stay on the axis.
        var closed = Systems.Open(Systems.OfStiffness(new[,] { { 1, 1e-20 }, { -1e-20, 1 + ScaledAssert.Epsilon } }));
        Assert.Equal(StabilityVerdict.Marginal, ExactCount.Verdict(ExactCount.Of(closed)));
        Assert.Empty(ClosedLoopAnalysis.Split(closed).Facts);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(3)]
    [InlineData(6)]
    [InlineData(11)]
    public void Facts_LoopThatCancelsTheStiffnessExactly_ClaimNothingByRounding(double mass)
    {
        var closed = Systems.Closed(Systems.One(mass, 1, 2), -2, Systems.Loop("q1", "q1", position: 1));
        Assert.Equal(0, closed.Stiffness[0, 0]);
        Assert.Empty(ClosedLoopAnalysis.Split(closed).Facts);
        Assert.NotEqual(StabilityVerdict.Stable, ClosedLoopAnalysis.Spectrum(closed).Verdict);
        Assert.NotEqual(StabilityVerdict.Unstable, ClosedLoopAnalysis.Spectrum(closed).Verdict);
    }

    [Theory]
    [InlineData(2.1, 0, 3.6, 1, 0)]
    [InlineData(8, 2, 3, 0, 1)]
    [InlineData(7, 2, 3, 1, 1)]
    public void Facts_LoopThatTakesAwayAWholeTerm_ContradictNothing(double mass, double damping, double stiffness, double position, double rate)
    {
        double gain = position > 0 ? -stiffness : -damping;
        var closed = Systems.Closed(Systems.One(mass, damping, stiffness), gain, Systems.Loop("q1", "q1", position, rate));
        CheckNoContradiction(closed, "cancelled term");
    }

    [Theory]
    [InlineData(3e-15)]
    [InlineData(-3e-15)]
    [InlineData(1e-13)]
    public void Facts_StiffnessNearRounding_AgreeWithADecidedCount(double soft)
    {
        var closed = Systems.Open(Systems.Of(_unit, _unit, new[,] { { 1, 0 }, { 0, soft } }));
        CheckNoContradiction(closed, "one soft direction");
    }

    [Fact]
    public void Facts_ThousandSmallIntegerSystems_NeverContradictExactOrDecidedCounts()
    {
        var random = new Random(111);
        var seen = new HashSet<string>();
        for (int trial = 0; trial < 1000; trial++)
        {
            var closed = Systems.Open(RandomIntegers(random));
            foreach (var fact in CheckNoContradiction(closed, $"trial {trial}"))
            {
                seen.Add($"{fact.Name}, {fact.Verdict}");
            }
        }

        Assert.Equal(6, seen.Count);
    }

    [Fact]
    public void Facts_ThousandRandomLoops_NeverContradictExactOrDecidedCounts()
    {
        var random = new Random(112);
        for (int trial = 0; trial < 1000; trial++)
        {
            int n = random.Next(1, 4);
            var structure = Systems.Random(random, n, damping: random.Next(3) * 0.1, skew: random.Next(2) * random.NextDouble());
            var loop = Systems.Loop(Systems.AnyDof(random, n), Systems.AnyDof(random, n), random.Next(-1, 2), 1, 0.1 * random.Next(2));
            CheckNoContradiction(Systems.Closed(structure, (10 * random.NextDouble()) - 5, loop), $"trial {trial}");
        }
    }

    [Fact]
    public void Facts_ThousandIntegerLoops_NeverContradictExactOrDecidedCounts()
    {
        // Integer gains on integer matrices cancel whole terms now and then, but not in mass-normalised coordinates.
        var random = new Random(113);
        for (int trial = 0; trial < 1000; trial++)
        {
            int n = random.Next(1, 4);
            var s = DenseMatrix.Create(n, n, (_, _) => random.Next(-1, 2));
            var mass = DenseMatrix.OfDiagonalArray([.. Enumerable.Range(0, n).Select(_ => (double)random.Next(3, 12))]);
            var springs = DenseMatrix.OfDiagonalArray([.. Enumerable.Range(0, n).Select(_ => (double)random.Next(0, 4))]);
            var stiffness = springs + (random.Next(2) * s);
            var damping = random.Next(0, 3) * DenseMatrix.CreateIdentity(n);
            var loop = Systems.Loop(Systems.AnyDof(random, n), Systems.AnyDof(random, n), random.Next(-1, 2), rate: 1, random.Next(2));
            var closed = Systems.Closed(Systems.Of(mass, damping, stiffness), random.Next(-4, 5), loop);
            if (ExactCount.Characteristic(closed).Degree == 2 * n)
            {
                CheckNoContradiction(closed, $"trial {trial}");
            }
        }
    }

    private static ElasticStructure RandomIntegers(Random random)
    {
        int n = random.Next(1, 4);
        var identity = DenseMatrix.CreateIdentity(n);
        var s = DenseMatrix.Create(n, n, (_, _) => random.Next(-1, 2));
        var symmetric = DenseMatrix.Create(n, n, (i, j) => s[Math.Min(i, j), Math.Max(i, j)]);
        var skew = DenseMatrix.Create(n, n, (i, j) => i == j ? 0 : Math.Sign(j - i) * s[Math.Max(i, j), Math.Min(i, j)]);
        var mass = random.Next(2) == 0 ? identity : (n * identity) + (0.5 * symmetric);
        var damping = (random.Next(3) * identity) + (random.Next(-1, 2) * symmetric) + (random.Next(2) * skew);
        var stiffness = (random.Next(0, 4) * mass) + (random.Next(2) * symmetric) + (random.Next(2) * skew);
        return Systems.Of(mass, random.Next(3) == 0 ? 0 * identity : damping, stiffness);
    }

    private static void CheckFact(ElasticStructure structure, string name, StabilityVerdict verdict)
    {
        var closed = Systems.Open(structure);
        var fact = Assert.Single(ClosedLoopAnalysis.Split(closed).Facts, f => f.Name == name);
        Assert.Equal(verdict, fact.Verdict);
        Assert.Equal(verdict, ExactCount.Verdict(ExactCount.Of(closed)));
        Assert.Equal(verdict, ClosedLoopAnalysis.Spectrum(closed).Verdict);
        Assert.Contains(fact, ClosedLoopAnalysis.Spectrum(closed).Facts);
        Assert.StartsWith($"{name}: {verdict.ToString().ToLowerInvariant()} (", fact.ToString(), StringComparison.Ordinal);
        Assert.False(string.IsNullOrWhiteSpace(fact.Source));
    }

    private static ImmutableArray<DecidingFact> CheckNoContradiction(ClosedLoop closed, string what)
    {
        var exact = ExactCount.Of(closed);
        var spectrum = ClosedLoopAnalysis.Spectrum(closed);
        string state = $"{what}: {spectrum}, exactly {exact}, stiffness\n{closed.Stiffness}\ndamping\n{closed.Damping}\nmass\n{closed.Mass}";
        foreach (var fact in spectrum.Facts)
        {
            Assert.True(fact.Verdict == ExactCount.Verdict(exact), $"{fact} is wrong; {state}");
            Assert.True(
                spectrum.Count.Verdict == StabilityVerdict.Undecided || spectrum.Count.Verdict == fact.Verdict,
                $"{fact} against the count; {state}");
        }

        Assert.True(
            spectrum.Verdict == StabilityVerdict.Undecided || spectrum.Verdict == ExactCount.Verdict(exact), $"wrong verdict; {state}");
        Assert.True(
            spectrum.Count.Growing <= exact.Unstable && spectrum.Count.Decaying <= exact.Stable && spectrum.Count.Marginal <= exact.Axis,
            $"wrong count; {state}");
        return spectrum.Facts;
    }
}
