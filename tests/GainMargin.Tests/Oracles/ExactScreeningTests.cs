namespace GainMargin.Tests.Oracles;

public class ExactScreeningTests
{
    [Theory]
    [InlineData(new double[] { 5 }, 0, 0, 0)]
    [InlineData(new double[] { 0, 0, 1 }, 0, 2, 0)]
    [InlineData(new double[] { 1, 0, 1 }, 0, 2, 0)]
    [InlineData(new double[] { 1, 0, 2, 0, 1 }, 0, 4, 0)]
    [InlineData(new double[] { -1, 0, 1 }, 1, 0, 1)]
    [InlineData(new double[] { 1, 0, 0, 0, 1 }, 2, 0, 2)]
    [InlineData(new double[] { 2, 2, 1, 1, 0, 0 }, 0, 2, 1)]
    [InlineData(new double[] { 3, 2, 2, 1, 1 }, 2, 0, 2)]
    [InlineData(new double[] { -50, -25, 48, 24, 2, 1 }, 1, 2, 2)]
    public void HalfPlaneCount_SingularRouthArray_IsExact(double[] coefficients, int unstable, int axis, int stable) =>
        Assert.Equal(new(unstable, axis, stable), HalfPlaneCount.Of(ExactPolynomial.FromDoubles(coefficients)));

    [Fact]
    public void HalfPlaneCount_ProductsOfKnownFactors_AddsTheirCounts()
    {
        var random = new Random(20240817);
        for (var trial = 0; trial < 300; trial++)
        {
            var (polynomial, expected) = RandomProduct(random, 9);
            Assert.Equal(expected, HalfPlaneCount.Of(polynomial));
        }
    }

    [Fact]
    public void UnstableCount_ThreeMassChainOfKnownRoots_MatchesFactors()
    {
        var random = new Random(4711);
        for (var trial = 0; trial < 200; trial++)
        {
            var (polynomial, expected) = RandomProduct(random, 6);
            var coefficients = Enumerable.Range(0, 6).Select(k => (polynomial[k] / polynomial.LeadingCoefficient).ToDouble()).ToArray();
            var screening = Chain(coefficients, new double[6]);
            Assert.Equal(expected.Unstable, screening.UnstableCount(1));
            Assert.Equal(expected.Axis, screening.AxisCount(1) + screening.PermanentZeros);
        }
    }

    [Fact]
    public void Onsets_NegativeDamping_FlutterAtZero()
    {
        var onset = Assert.Single(Scalar([1, 0], [0, 1], [1, 0]).Onsets(-1, 1));
        AssertOnset(onset, ExactOnsetKind.Flutter, 0, 1, 2, 0);
        Assert.Equal(onset.Low, onset.High);
    }

    [Fact]
    public void Onsets_TwoMassesOneDashpot_FlutterAtClosedForm()
    {
        const double c = 0.05;
        var screening = new ExactScreening(2, [1, 0, 0, 1], new double[4], [c, -c, -c, c], [0, 1, 0, 0], [1, -1, -1, 1], new double[4]);
        Assert.Equal(1, screening.PermanentZeros);
        Assert.Equal(3, screening.Degree);

        var exactC = Rational.FromDouble(c);
        var gain = 4 * exactC / (1 - 2 * exactC * exactC);
        Assert.Equal(0.2010050251, gain.ToDouble(), 10);
        var omega = Math.Sqrt(gain.ToDouble() / (2 * c));
        AssertOnset(Assert.Single(screening.Onsets(0, 1)), ExactOnsetKind.Flutter, gain.ToDouble(), omega, 0, 2);
        Assert.Equal(2, screening.AxisCount(gain));
        AssertOnset(screening.Onsets(-1, 1)[0], ExactOnsetKind.Divergence, 0, double.NaN, 1, 0);
    }

    [Fact]
    public void Onsets_CrossStiffness_DivergenceExactlyAtOne()
    {
        const double w2 = 1.7, f2 = 0.9;
        var screening = new ExactScreening(
            2, [1, 0, 0, 1], new double[4], [0.3, 0, 0, 0.2], new double[4], [w2, 0, -f2, f2], [0, -w2, 0, 0]);
        AssertOnset(Assert.Single(screening.Onsets(0, 2)), ExactOnsetKind.Divergence, 1, double.NaN, 0, 1);
        Assert.Equal(1, screening.AxisCount(1));
    }

    [Fact]
    public void Onsets_LeadingCoefficientVanishes_RootThroughInfinity()
    {
        var screening = Scalar([1, 1], [0.1, 0], [1, 0]);
        AssertOnset(Assert.Single(screening.Onsets(-3, 3)), ExactOnsetKind.ThroughInfinity, -1, double.NaN, 1, 0);
        Assert.Equal(0, screening.UnstableCount(-1));
        Assert.Empty(screening.Onsets(-1, 3));
    }

    [Fact]
    public void Onsets_IrrationalFlutter_GainAndFrequencyRefined()
    {
        // (s + 1)(s^3 + g s^2 + g s + 2)
        var screening = Chain([2, 2, 0, 1], [0, 1, 2, 1]);
        AssertOnset(Assert.Single(screening.Onsets(0, 10)), ExactOnsetKind.Flutter, Math.Sqrt(2), Math.Pow(2, 0.25), 2, 0);
    }

    [Fact]
    public void Onsets_SymmetricRealPair_IsNotAnOnset()
    {
        // (s - 1)(s + 1 + g)(s + 2)(s + 3)
        var screening = Chain([-6, -5, 5, 5], [-6, 1, 4, 1]);
        Assert.Empty(screening.Onsets(-0.5, 0.5));
        Assert.Equal(1, screening.UnstableCount(0));
    }

    [Theory]
    [InlineData(1.0, 4.0, new[] { 1.0, 2.0 })]
    [InlineData(1.0, 1.0, new[] { 1.0 })]
    public void Onsets_UncoupledOscillators_OneOnsetWithDistinctFrequencies(double k1, double k2, double[] frequencies)
    {
        var screening = new ExactScreening(2, [1, 0, 0, 1], new double[4], new double[4], [1, 0, 0, 1], [k1, 0, 0, k2], new double[4]);
        var onset = Assert.Single(screening.Onsets(-1, 3));
        AssertOnset(onset, ExactOnsetKind.Flutter, 0, 1, 4, 0);
        Assert.Equal(frequencies, onset.Frequencies);
        Assert.Equal(4, screening.AxisCount(0));
    }

    [Fact]
    public void Onsets_DivergenceAndFlutterAtOneGain_AreOneOnset()
    {
        // (s^2 + s + g)(s^2 + g s + 1)
        var onset = Assert.Single(
            new ExactScreening(2, [1, 0, 0, 1], new double[4], [1, 0, 0, 0], [0, 0, 0, 1], [0, 0, 0, 1], [1, 0, 0, 0]).Onsets(-1, 1));
        AssertOnset(onset, ExactOnsetKind.Divergence | ExactOnsetKind.Flutter, 0, 1, 3, 0);
    }

    [Fact]
    public void Onsets_LosslessSystem_ThrowsNotSupported() =>
        Assert.Throws<NotSupportedException>(() => Scalar([1, 0], [0, 0], [1, 1]).Onsets(-1, 1));

    [Fact]
    public void Onsets_PencilSingularAtOneGain_ThrowsNotSupported()
    {
        var screening = Scalar([0, 1], [0, 1], [0, 1]);
        Assert.Throws<NotSupportedException>(() => screening.Onsets(-1, 1));
        Assert.Throws<NotSupportedException>(() => screening.AxisCount(0));
        Assert.Empty(screening.Onsets(1, 2));
    }

    private static void AssertOnset(ExactOnset onset, ExactOnsetKind kind, double gain, double omega, int below, int above)
    {
        Assert.Equal((kind, gain, below, above), (onset.Kind, onset.Gain, onset.UnstableBelow, onset.UnstableAbove));
        Assert.Equal(omega, onset.Omega, 1e-14);
    }

    /// <summary>One degree of freedom; each pair is the constant part and the factor of the gain.</summary>
    private static ExactScreening Scalar(double[] m, double[] d, double[] k) => new(1, [m[0]], [m[1]], [d[0]], [d[1]], [k[0]], [k[1]]);

    /// <summary>System with the monic characteristic polynomial whose other coefficients are a + g b, in ascending powers.</summary>
    private static ExactScreening Chain(double[] a, double[] b)
    {
        var n = a.Length / 2;
        double[] mass = new double[n * n], stiffness = LastRow(a, 0);
        for (var i = 0; i < n; i++)
        {
            mass[i * n + i] = 1;
            if (i < n - 1)
                stiffness[i * n + i + 1] = -1;
        }
        return new(n, mass, new double[n * n], LastRow(a, 1), LastRow(b, 1), stiffness, LastRow(b, 0));

        double[] LastRow(double[] coefficients, int parity)
        {
            var matrix = new double[n * n];
            for (var j = 0; j < n; j++)
                matrix[(n - 1) * n + j] = coefficients[2 * j + parity];
            return matrix;
        }
    }

    /// <summary>Random product of the given degree, from real roots, complex and symmetric pairs, quadruples and axis pairs.</summary>
    private static (ExactPolynomial Polynomial, HalfPlaneCount Count) RandomProduct(Random random, int degree)
    {
        var (polynomial, count) = (ExactPolynomial.FromDoubles(random.Next(2) == 0 ? -0.75 : 1.5), default(HalfPlaneCount));
        while (polynomial.Degree < degree)
        {
            double a = random.Next(-8, 9) / 4.0, b = random.Next(1, 9) / 4.0;
            var pair = ExactPolynomial.FromDoubles(a * a + b * b, -2 * a, 1);
            var axisPair = ExactPolynomial.FromDoubles(b * b, 0, 1);
            var (factor, added) = random.Next(6) switch
            {
                0 => (ExactPolynomial.FromDoubles(-a, 1), Along(a, 1)),
                1 => (pair, Along(a, 2)),
                2 => (axisPair, Along(0, 2)),
                3 => (axisPair * axisPair, Along(0, 4)),
                4 => (ExactPolynomial.FromDoubles(-b * b, 0, 1), new(1, 0, 1)),
                _ => (pair * ExactPolynomial.FromDoubles(a * a + b * b, 2 * a, 1), a == 0 ? Along(0, 4) : new(2, 0, 2)),
            };
            if (polynomial.Degree + factor.Degree > degree)
                continue;
            polynomial *= factor;
            count = new(count.Unstable + added.Unstable, count.Axis + added.Axis, count.Stable + added.Stable);
        }
        return (polynomial, count);

        static HalfPlaneCount Along(double realPart, int roots) =>
            realPart > 0 ? new(roots, 0, 0) : realPart < 0 ? new(0, 0, roots) : new(0, roots, 0);
    }
}
