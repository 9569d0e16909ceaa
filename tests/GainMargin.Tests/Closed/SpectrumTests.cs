using System.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>Closed forms and verdicts.</summary>
public sealed class SpectrumTests
{
    [Theory]
    [InlineData(2, 0.4, 8)]
    [InlineData(1e-6, 1e-7, 5)]
    [InlineData(3, -0.1, 7)]
    public void Spectrum_UnderdampedOscillator_HasTheTextbookPair(double mass, double damping, double stiffness)
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(mass, damping, stiffness)));
        double rate = -damping / (2 * mass);
        double frequency = Math.Sqrt((stiffness / mass) - (rate * rate));
        ScaledAssert.Roots([new(rate, frequency), new(rate, -frequency)], Values(spectrum), [.. spectrum.Roots.Select(r => r.Uncertainty)]);
        Assert.Equal(damping > 0 ? StabilityVerdict.Stable : StabilityVerdict.Unstable, spectrum.Verdict);
        var upper = spectrum.Roots[0];
        double ratio = damping / (2 * Math.Sqrt(mass * stiffness));
        ScaledAssert.Relative(frequency, upper.Frequency.Radians, 1e-14, "frequency");
        ScaledAssert.Within(ratio, upper.DampingRatio!.Value, 1e-14, "damping ratio");
        ScaledAssert.Within(2 * Math.PI * ratio / Math.Sqrt(1 - (ratio * ratio)), upper.LogarithmicDecrement!.Value, 1e-13, "decrement");
    }

    [Fact]
    public void Spectrum_OverdampedOscillator_HasTwoRealRoots()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(2, 10, 8)));
        ScaledAssert.Roots([-1, -4], Values(spectrum), 1e-14);
        Assert.Equal(StabilityVerdict.Stable, spectrum.Verdict);
        Assert.All(spectrum.Roots, r => Assert.Null(r.LogarithmicDecrement));
        Assert.All(spectrum.Roots, r => Assert.Equal(1, r.DampingRatio));
        Assert.All(spectrum.Roots, r => Assert.Equal(0, r.Frequency.Radians));
    }

    [Theory]
    [InlineData(1, 2, 1)]
    [InlineData(2, 8, 8)]
    [InlineData(0.25, 5, 25)]
    public void Spectrum_CriticallyDampedOscillator_IsStableByItsRoots(double mass, double damping, double stiffness)
    {
        Assert.Equal(4 * mass * stiffness, damping * damping);
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(mass, damping, stiffness)));
        Assert.Equal(StabilityVerdict.Stable, spectrum.Verdict);
        Assert.Equal(new RootCount(0, 2, 0, 0), spectrum.Count);
        Complex twice = -damping / (2 * mass);
        ScaledAssert.Roots([twice, twice], Values(spectrum), [.. spectrum.Roots.Select(r => r.Uncertainty)]);
        // A defective double root is known to about √ε, no better and not much worse.
        Assert.All(spectrum.Roots, r => ScaledAssert.Small(r.Uncertainty, 1e-6 * twice.Magnitude, "uncertainty"));
    }

    [Fact]
    public void Spectrum_FreeMassWithoutDamper_HasTwoExactZeroRoots()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(3, 0, 0)));
        Assert.Equal([Complex.Zero, Complex.Zero], Values(spectrum));
        Assert.All(spectrum.Roots, r => Assert.Equal((0, StabilityVerdict.Marginal), (r.Uncertainty, r.Verdict)));
        Assert.All(spectrum.Roots, r => Assert.Null(r.DampingRatio));
        Assert.All(spectrum.Roots, r => Assert.Null(r.LogarithmicDecrement));
        Assert.Equal(StabilityVerdict.Marginal, spectrum.Verdict);
    }

    [Fact]
    public void Spectrum_FreeMassOnADamper_DriftsAndDecays()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(4, 2, 0)));
        ScaledAssert.Roots([0, -0.5], Values(spectrum), 1e-15);
        Assert.Equal(new RootCount(0, 1, 1, 0), spectrum.Count);
    }

    [Theory]
    [InlineData(0, 2)]
    [InlineData(0.3, 1)]
    public void Spectrum_FreeChain_ZeroRootsAreExactAndMarginal(double groundDamper, int zeroRoots)
    {
        // Three equal masses on two springs: ω² = 0, 1, 3; all dampers proportional to the springs but one to the ground.
        double[,] stiffness = { { 1, -1, 0 }, { -1, 2, -1 }, { 0, -1, 1 } };
        var damping = (0.1 * DenseMatrix.OfArray(stiffness)) + (groundDamper * DenseMatrix.CreateIdentity(3));
        var spectrum = ClosedLoopAnalysis.Spectrum(
            Systems.Open(Systems.Of(DenseMatrix.CreateIdentity(3), damping, DenseMatrix.OfArray(stiffness))));
        var rigid = spectrum.Roots.Where(r => r.Verdict == StabilityVerdict.Marginal).ToArray();
        Assert.Equal(zeroRoots, rigid.Length);
        Assert.All(rigid, r => Assert.Equal((Complex.Zero, 0), (r.Value, r.Uncertainty)));
        Assert.All(rigid, r => Assert.All(r.RightMode.Values, v => ScaledAssert.Within(1, v.Real, 1e-14, "rigid mode")));
        Assert.Equal(new RootCount(0, 6 - zeroRoots, zeroRoots, 0), spectrum.Count);
        Assert.Equal(StabilityVerdict.Marginal, spectrum.Verdict);
        Complex[] drift = groundDamper == 0 ? [0, 0] : [0, -groundDamper];
        Complex[] elastic = [.. new[] { 1.0, 3.0 }.SelectMany(square => Pair(square, (0.1 * square) + groundDamper))];
        ScaledAssert.Roots([.. drift, .. elastic], Values(spectrum), 1e-14);

        static Complex[] Pair(double square, double damping)
        {
            var upper = new Complex(-damping / 2, Math.Sqrt(square - (damping * damping / 4)));
            return [upper, Complex.Conjugate(upper)];
        }
    }

    [Fact]
    public void Spectrum_UndampedChain_IsMarginalByTheorem()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.OfStiffness(new double[,] { { 2, -1 }, { -1, 2 } })));
        Assert.Equal(new RootCount(0, 0, 0, 4), spectrum.Count);
        Assert.Equal(StabilityVerdict.Marginal, spectrum.Verdict);
        Assert.Equal("Lagrange–Dirichlet", Assert.Single(spectrum.Facts).Name);
        double high = Math.Sqrt(3);
        ScaledAssert.Roots([new(0, 1), new(0, -1), new(0, high), new(0, -high)], Values(spectrum), 1e-15);
    }

    [Fact]
    public void Spectrum_NegativeStiffness_IsUnstable()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(1, 0, -4)));
        ScaledAssert.Roots([2, -2], Values(spectrum), 1e-14);
        Assert.Equal((StabilityVerdict.Unstable, new RootCount(1, 1, 0, 0)), (spectrum.Verdict, spectrum.Count));
    }

    [Fact]
    public void Spectrum_CirculatoryStiffnessBeyondCoalescence_IsUnstable()
    {
        // μ = −λ² = 1.5 ± i·√(0.36 − 0.25).
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.OfStiffness(new[,] { { 1, 0.6 }, { -0.6, 2 } })));
        var root = Complex.Sqrt(-new Complex(1.5, Math.Sqrt(0.11)));
        ScaledAssert.Roots([root, -root, Complex.Conjugate(root), -Complex.Conjugate(root)], Values(spectrum), 1e-14);
        Assert.Equal((StabilityVerdict.Unstable, new RootCount(2, 2, 0, 0)), (spectrum.Verdict, spectrum.Count));
    }

    [Fact]
    public void Spectrum_CirculatoryStiffnessBelowCoalescence_StaysUndecided()
    {
        // All roots are imaginary, but no theorem of the list covers it and rounding cannot show it.
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.OfStiffness(new[,] { { 1, 0.4 }, { -0.4, 2 } })));
        Assert.Equal((StabilityVerdict.Undecided, new RootCount(0, 0, 0, 4)), (spectrum.Verdict, spectrum.Count));
        Assert.Empty(spectrum.Facts);
        ScaledAssert.Roots(
            [.. new[] { 1.2, 1.8 }.SelectMany(square => new Complex[] { new(0, Math.Sqrt(square)), new(0, -Math.Sqrt(square)) })],
            Values(spectrum), 1e-14);
    }

    [Fact]
    public void Spectrum_DampingBelowRoundingWithCirculatoryStiffness_StaysUndecided()
    {
        var damping = DenseMatrix.OfDiagonalArray([2e-17, 2e-17]);
        var stiffness = DenseMatrix.OfArray(new[,] { { 1, 0.4 }, { -0.4, 2 } });
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Of(DenseMatrix.CreateIdentity(2), damping, stiffness)));
        Assert.Equal(StabilityVerdict.Undecided, spectrum.Verdict);
        Assert.All(spectrum.Roots, r => Assert.Equal(StabilityVerdict.Undecided, r.Verdict));
    }

    [Fact]
    public void Spectrum_SmallButVisibleDamping_IsDecidedByTheRoots()
    {
        var damping = DenseMatrix.OfDiagonalArray([2e-13, 2e-13]);
        var stiffness = DenseMatrix.OfArray(new[,] { { 1, 0.4 }, { -0.4, 2 } });
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Of(DenseMatrix.CreateIdentity(2), damping, stiffness)));
        Assert.Equal((StabilityVerdict.Stable, new RootCount(0, 4, 0, 0)), (spectrum.Verdict, spectrum.Count));
    }

    [Theory]
    [InlineData(1e-170)]
    [InlineData(-1e-300)]
    [InlineData(1e160)]
    [InlineData(-1e300)]
    public void Spectrum_StiffnessWhoseSquareLeavesTheDoubles_IsNotMistakenForFreeMotion(double stiffness)
    {
        var closed = Systems.Open(Systems.One(1, 0, stiffness));
        if (Record.Exception(() => ClosedLoopAnalysis.Spectrum(closed)) is { } failure)
        {
            Assert.IsType<NumericalFailureException>(failure);
            return;
        }

        Complex root = Complex.Sqrt(-stiffness);
        ScaledAssert.Roots([root, -root], Values(ClosedLoopAnalysis.Spectrum(closed)), 1e-14 * root.Magnitude);
    }

    [Fact]
    public void Spectrum_AlreadyCancelled_Throws()
        => Assert.Throws<OperationCanceledException>(
            () => ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(1, 0, 1)), new CancellationToken(canceled: true)));

    [Fact]
    public void Spectrum_SingularClosedMass_ThrowsWithStage()
    {
        var closed = Systems.Closed(Systems.One(1, 0.1, 1), -1, Systems.Loop("q1", "q1", acceleration: 1));
        var failure = Assert.Throws<NumericalFailureException>(() => ClosedLoopAnalysis.Spectrum(closed));
        Assert.Equal("closed-loop mass", failure.Stage);
    }

    [Fact]
    public void Spectrum_SingularClosedMassOfSeveralDofs_ThrowsOrClaimsNothing()
    {
        // M(g) = diag(0, 5), but not once it is normalised by a rounded √2.
        double[,] mass = { { 2, 0 }, { 0, 5 } };
        var structure = Systems.Of(mass, new double[2, 2], new double[,] { { 6, -2 }, { -2, 4 } });
        var closed = Systems.Closed(structure, -2, Systems.Loop("q1", "q1", acceleration: 1));
        if (Record.Exception(() => ClosedLoopAnalysis.Spectrum(closed)) is { } failure)
        {
            Assert.Equal("closed-loop mass", Assert.IsType<NumericalFailureException>(failure).Stage);
            return;
        }

        var spectrum = ClosedLoopAnalysis.Spectrum(closed);
        Assert.True(spectrum.Count.Growing == 0, $"{spectrum}; {string.Join("; ", spectrum.Roots)}");
    }

    [Fact]
    public void Spectrum_ThirdZeroRootBesideFreeMotion_IsNotCalledDecaying()
    {
        // det Q = 7s²(6s² + 2)(10s² + 2s): three zero roots, of which the free motion of q1 explains two.
        var closed = Systems.Open(Systems.Of(
            new double[,] { { 7, 0, 0 }, { 0, 6, 0 }, { 0, 0, 10 } }, new double[,] { { 0, 0, -1 }, { 0, 0, 0 }, { 0, 0, 2 } },
            new double[,] { { 0, 1, 0 }, { 0, 2, 3 }, { 0, 0, 0 } }));
        var spectrum = ClosedLoopAnalysis.Spectrum(closed);
        Assert.True(spectrum.Count is { Growing: 0, Decaying: 1 }, $"{spectrum}; {string.Join("; ", spectrum.Roots)}");
    }

    [Fact]
    public void ToString_UndampedRoot_ShowsNoNegativeZero()
    {
        var root = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.One(1, 0, 4))).Roots[0];
        Assert.Equal("0 + 2i, damping ratio 0, undecided", root.ToString());
    }

    private static Complex[] Values(Spectrum spectrum) => [.. spectrum.Roots.Select(r => r.Value)];
}
