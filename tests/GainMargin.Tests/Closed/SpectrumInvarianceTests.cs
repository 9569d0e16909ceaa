using System.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>Units, order and nearly massless parts must not change what is found, beyond what the uncertainty admits.</summary>
public sealed class SpectrumInvarianceTests
{
    [Fact]
    public void Spectrum_DofsInMixedUnits_KeepsVerdictAndRoots()
    {
        var random = new Random(131);
        for (int trial = 0; trial < 200; trial++)
        {
            var closed = RandomLoop(random);
            double[] unit = [.. closed.Structure.Dofs.Select(_ => Math.Pow(10, (12 * random.NextDouble()) - 6))];
            var scaled = Systems.InUnits(closed, unit);
            CheckSame(ClosedLoopAnalysis.Spectrum(closed), ClosedLoopAnalysis.Spectrum(scaled), 1, 1e-9, $"trial {trial}");
        }
    }

    [Theory]
    [InlineData(1e3)]
    [InlineData(1e-3)]
    public void Spectrum_OtherUnitOfTime_ScalesTheRoots(double unit)
    {
        var random = new Random(132);
        for (int trial = 0; trial < 50; trial++)
        {
            var closed = RandomLoop(random);
            var scaled = Systems.InTime(closed, unit);
            CheckSame(ClosedLoopAnalysis.Spectrum(closed), ClosedLoopAnalysis.Spectrum(scaled), unit, 1e-11, $"trial {trial}");
        }
    }

    [Theory]
    [InlineData(1024)]
    [InlineData(1.0 / 1024)]
    public void Spectrum_UnitOfTimeByAPowerOfTwo_ScalesRootsAndUncertaintiesBitForBit(double unit)
    {
        var closed = RandomLoop(new Random(137));
        var plain = ClosedLoopAnalysis.Spectrum(closed).Roots;
        var scaled = ClosedLoopAnalysis.Spectrum(Systems.InTime(closed, unit)).Roots;
        Assert.Equal(
            plain.Select(r => (r.Value * unit, r.Uncertainty * unit, r.Verdict)), scaled.Select(r => (r.Value, r.Uncertainty, r.Verdict)));
        Assert.Equal(plain.Select(r => r.BackwardError), scaled.Select(r => r.BackwardError));
    }

    [Fact]
    public void Spectrum_DofsInOtherOrder_KeepsRootsAndModes()
    {
        var random = new Random(133);
        for (int trial = 0; trial < 50; trial++)
        {
            var closed = RandomLoop(random);
            int[] order = [.. Enumerable.Range(0, closed.Structure.Dofs.Count)];
            random.Shuffle(order);
            Matrix<double> Reordered(NamedMatrix a) => DenseMatrix.Create(order.Length, order.Length, (i, j) => a[order[i], order[j]]);
            var s = closed.Structure;
            var reordered = ClosedLoop.Create(
                Systems.Of(DofNames.Of([.. order.Select(i => s.Dofs[i])]), Reordered(s.Mass), Reordered(s.Damping), Reordered(s.Stiffness)),
                closed.Law);
            var plain = ClosedLoopAnalysis.Spectrum(closed);
            var other = ClosedLoopAnalysis.Spectrum(reordered);
            CheckSame(plain, other, 1, 1e-11, $"trial {trial}");
            foreach (var root in plain.Roots)
            {
                // Each is scaled to one at its largest component, so compare the shares of one degree of freedom in the other.
                var same = other.Roots.MinBy(r => Complex.Abs(r.Value - root.Value))!;
                var cross = s.Dofs.SelectMany(a => s.Dofs.Select(
                    b => Complex.Abs((root.RightMode[a] * same.RightMode[b]) - (root.RightMode[b] * same.RightMode[a])))).Max();
                ScaledAssert.Small(cross, 1e-9, $"trial {trial}: turn of the mode at {root.Value}");
            }
        }
    }

    [Theory]
    [InlineData(1e-6)]
    [InlineData(1e-12)]
    public void Spectrum_TinyTipMass_RootsStayWithinTheirUncertainty(double tip)
    {
        var random = new Random(134);
        for (int trial = 0; trial < 50; trial++)
        {
            (double base1, double spring1, double spring2) = (1 + random.NextDouble(), 1 + random.NextDouble(), 1 + random.NextDouble());
            CheckAgainstExactFrequencies(Systems.Of(
                new[,] { { base1, 0 }, { 0, tip * (1 + random.NextDouble()) } }, new double[2, 2],
                new[,] { { spring1 + spring2, -spring2 }, { -spring2, spring2 } }));
        }
    }

    [Fact]
    public void Spectrum_TinyTipMass_LowRootIsThatOfTheMasslessLimit()
    {
        // Springs 2 and 2 with a tip of 1e-12: the tip follows, the first mass stays on the first spring, ω² = 2 − O(1e-12).
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(
            Systems.Of(new[,] { { 1, 0 }, { 0, 1e-12 } }, new double[2, 2], new double[,] { { 4, -2 }, { -2, 2 } })));
        ScaledAssert.Relative(Math.Sqrt(2), spectrum.Roots[0].Frequency.Radians, 1e-12);
    }

    [Theory]
    [InlineData(-4)]
    [InlineData(-10)]
    [InlineData(-20)]
    [InlineData(-30)]
    public void Spectrum_NearlyDependentInertia_RootsStayWithinTheirUncertainty(int exponent)
    {
        // Stiffness nearly proportional to a nearly singular mass: the normalised matrices hide how much the factorisation lost.
        var random = new Random(135);
        for (int trial = 0; trial < 50; trial++)
        {
            double correlation = 1 - Math.ScaleB(0.5 + random.NextDouble(), exponent);
            (double m1, double m2) = (0.5 + random.NextDouble(), 0.5 + random.NextDouble());
            double m12 = correlation * Math.Sqrt(m1 * m2);
            CheckAgainstExactFrequencies(Systems.Of(
                new[,] { { m1, m12 }, { m12, m2 } }, new double[2, 2],
                new[,] { { (4 + (0.1 * random.NextDouble())) * m1, 4 * m12 }, { 4 * m12, 4 * m2 } }));
        }
    }

    [Fact]
    public void Spectrum_NearlyDependentInertiaWithProportionalDamping_IsNeverCalledUnstable()
    {
        // K = 4M and D = δM with a small positive δ: every root decays, whatever M is.
        var random = new Random(136);
        for (int trial = 0; trial < 100; trial++)
        {
            var q = Systems.Uniform(random, 4, 4).QR().Q;
            double[] small = [Math.ScaleB(1 + random.NextDouble(), -20), Math.ScaleB(1 + random.NextDouble(), -20)];
            var inertia = DenseMatrix.OfDiagonalArray([.. small, 1, 2]);
            var mass = q * inertia * q.Transpose();
            mass = (mass + mass.Transpose()) / 2;
            var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Of(mass, mass * Math.ScaleB(1, -40), mass * 4)));
            Assert.True(spectrum.Count.Growing == 0, $"trial {trial}: {spectrum}; {string.Join("; ", spectrum.Roots)}");
        }
    }

    private static ClosedLoop RandomLoop(Random random)
    {
        int n = random.Next(2, 8);
        return Systems.Closed(
            Systems.Random(random, n, damping: 0.1), (4 * random.NextDouble()) - 2,
            Systems.Loop(Systems.AnyDof(random, n), Systems.AnyDof(random, n),
                random.NextDouble(), 0.2 * random.NextDouble(), 0.1 * random.NextDouble()));
    }

    private static void CheckSame(Spectrum plain, Spectrum other, double factor, double relative, string what)
    {
        Assert.True(plain.Verdict == other.Verdict, $"{what}: {plain} became {other}");
        Assert.Equal(plain.Count, other.Count);
        ScaledAssert.Roots(
            [.. plain.Roots.Select(r => r.Value * factor)], [.. other.Roots.Select(r => r.Value)],
            [.. other.Roots.Select(r => relative * r.Value.Magnitude)]);
    }

    /// <summary>Frequencies of an undamped symmetric pair from <c>det(K − ω²M) = 0</c> in rational arithmetic.</summary>
    private static void CheckAgainstExactFrequencies(ElasticStructure structure)
    {
        ExactPolynomial Entry(int i, int j) => ExactPolynomial.FromDoubles(structure.Stiffness[i, j], -structure.Mass[i, j]);
        var squares = ((Entry(0, 0) * Entry(1, 1)) - (Entry(0, 1) * Entry(1, 0))).Roots();
        Complex[] exact = [.. squares.Select(z => Math.Sqrt(z.ToDouble())).SelectMany(w => new Complex[] { new(0, w), new(0, -w) })];
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(structure));
        // The reference is rounded to doubles too.
        ScaledAssert.Roots(
            exact, [.. spectrum.Roots.Select(r => r.Value)],
            [.. spectrum.Roots.Select(r => r.Uncertainty + (4 * ScaledAssert.Epsilon * r.Value.Magnitude))]);
    }
}
