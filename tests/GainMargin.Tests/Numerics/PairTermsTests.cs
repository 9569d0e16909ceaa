using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Numerics;

public sealed class PairTermsTests
{
    private static readonly AxisTerm[] Kinds =
    [
        AxisTerm.Second(0, 1, 0.04, 1),
        AxisTerm.Second(0.3, -2, 0.5, 2.3),
        AxisTerm.Second(0, 1.5, 0, 2),
        AxisTerm.Second(-0.7, 1.5, 0, 2),
        AxisTerm.Second(0, -2.5, 0, 0),
        AxisTerm.Second(0.4, -2.5, 0, 0),
        AxisTerm.Second(0, 0.8, 2, 1),
        AxisTerm.Second(0.2, 0.8, 2 + 1e-9, 1),
        AxisTerm.Second(0.2, 0.8, 2.1, 1),
        AxisTerm.Second(0.1, 0.7, 1e-12, 3),
        AxisTerm.Second(0.1, 0.7, -0.3, 3),
        AxisTerm.Second(0.1, 0.7, -1e-12, 3),
        AxisTerm.First(1.3, -0.6),
        AxisTerm.First(1.3, 0.6),
        AxisTerm.First(-0.8, 0),
        AxisTerm.Pair(new Complex(0.2, -0.5), new Complex(-0.1, 1.2)),
        AxisTerm.Pair(new Complex(0.2, -0.5), new Complex(0.1, 1.2)),
        AxisTerm.Pair(new Complex(0.2, -0.5), new Complex(-1e-12, 1.2)),
        AxisTerm.Pair(new Complex(0.2, -0.5), new Complex(0, 1.2)),
        AxisTerm.Pair(new Complex(0.2, -0.5), new Complex(-1.2, 1e-5)),
    ];

    public static TheoryData<int> KindIndices => [.. Enumerable.Range(0, Kinds.Length)];

    [Theory]
    [MemberData(nameof(KindIndices))]
    public void Over_OneTerm_EqualsComplexEvaluation(int kind)
    {
        var (term, constant) = (Kinds[kind], 0.375);
        var terms = AxisTerm.Of([term], constant);
        foreach (double omega in (double[])[1e-3, 0.2, 0.7, 0.99, 1.1, 1.31, 1.6, 2.2, 30, 1e4])
        {
            double z = omega * omega;
            var expected = term.Direct(new Complex(0, omega)) + constant;
            var pair = terms.Over(z, 0);
            double nearness = terms.Over(0, z, 0, -1).Nearness;
            double size = Complex.Abs(expected) + constant;
            double allowed = 1e-13 * size * (1 + (nearness * z));
            ScaledAssert.Within(expected.Real, pair.Real.Value, allowed, $"real part of {term.Kind} at {omega}");
            ScaledAssert.Within(expected.Imaginary / omega, pair.Imaginary.Value, allowed / omega, $"imaginary part of {term.Kind} at {omega}");
        }
    }

    [Theory]
    [MemberData(nameof(KindIndices))]
    public void Over_OneTerm_SlopesEqualDifferenceQuotients(int kind)
    {
        var term = Kinds[kind];
        var terms = AxisTerm.Of([term]);
        double center = Math.Abs(terms.CenterOf(0));
        foreach (double z in (double[])[0.1, 0.75 * center, center + 0.125, 1.25 * center, 3, 100])
        {
            if (z <= 0)
            {
                continue;
            }

            var pair = terms.Over(z, 0);
            var (at, step) = (Rational.FromDouble(z), Rational.FromDouble(Math.ScaleB(z, -40)));
            double real = Quotient(term.Exact.Real, at, step);
            double imaginary = Quotient(term.Exact.Imaginary, at, step);
            double near = terms.Over(0, z, 0, -1).Nearness;
            ScaledAssert.Within(real, pair.Real.Slope, pair.Real.SlopeRounding + (1e-12 * pair.Real.First * (1 + (near * z))), $"R′ of {term.Kind} at {z}");
            ScaledAssert.Within(
                imaginary, pair.Imaginary.Slope, pair.Imaginary.SlopeRounding + (1e-12 * pair.Imaginary.First * (1 + (near * z))), $"I′ of {term.Kind} at {z}");
        }

        static double Quotient(Func<Rational, Rational> f, Rational at, Rational step) => ((f(at + step) - f(at - step)) / (2 * step)).ToDouble();
    }

    [Theory]
    [MemberData(nameof(KindIndices))]
    public void Over_CellsOfEveryWidth_BoundsHoldInside(int kind)
    {
        var terms = AxisTerm.Of([Kinds[kind]], -0.2);
        double center = Math.Max(0, terms.CenterOf(0));
        double width = Math.Sqrt(Math.Abs(terms.SquareOf(0)));
        double[] offsets = [-0.5 * center, -3 * width, -width, 0, 0.3 * width, width, 5 * width, 0.1, 1, 20];
        double[] radii = [1e-3 * width, 0.3 * width, width, 10 * width, 0.01, 0.3, 2];
        foreach (double offset in offsets)
        {
            foreach (double radius in radii.Where(r => r > 0))
            {
                CheckBounds(terms, center, offset, radius, Kinds[kind].Kind);
            }
        }
    }

    [Fact]
    public void Over_RandomSumsAndCells_BoundsHoldInside()
    {
        var random = new Random(21);
        for (int trial = 0; trial < 300; trial++)
        {
            var set = Enumerable.Range(0, random.Next(1, 10)).Select(_ => AxisTerm.Any(random)).ToArray();
            var terms = AxisTerm.Of(set, random.NextDouble());
            double origin = Math.Max(0, terms.CenterOf(random.Next(terms.Count)));
            double radius = Math.Pow(10, (6 * random.NextDouble()) - 5);
            CheckBounds(terms, origin, ((4 * random.NextDouble()) - 2) * radius, radius, $"trial {trial}");
        }
    }

    [Fact]
    public void Over_RandomSums_RoundingBoundsTheErrorOfTheTermsAsKept()
    {
        var random = new Random(22);
        for (int trial = 0; trial < 400; trial++)
        {
            var set = Enumerable.Range(0, random.Next(1, 10)).Select(_ => AxisTerm.Any(random)).ToArray();
            var terms = AxisTerm.Of(set, random.NextDouble());
            double origin = random.Next(2) == 0 ? 0 : Math.Max(0, terms.CenterOf(random.Next(terms.Count)));
            double offset = origin == 0 ? 10 * random.NextDouble() : (random.NextDouble() - 0.5) * Math.Pow(10, -8 * random.NextDouble());
            CheckRounding(terms, origin, offset, $"trial {trial}");
        }
    }

    // Slopes at the very centre of a resonance: the value is zero there, its slope is not.
    [Theory]
    [InlineData(0)]
    [InlineData(1e-12)]
    [InlineData(1e-5)]
    public void Over_BesideTheCentreOfAPole_RoundingBoundsTheError(double offset)
    {
        for (int n = 1; n <= 9; n++)
        {
            var terms = AxisTerm.Of(Enumerable.Range(0, n).Select(k => AxisTerm.Second(0, 1.0 + (0.1 * k), 0.03 + (0.001 * k), 1)));
            CheckRounding(terms, terms.CenterOf(n / 2), offset, $"{n} terms");
        }
    }

    [Fact]
    public void Over_DataAsGiven_RoundingBoundsTheErrorIfPolesAreKnownToRounding()
    {
        var random = new Random(23);
        for (int trial = 0; trial < 400; trial++)
        {
            double kappa = 0.2 + random.NextDouble();
            double d = Math.Pow(10, -12 * random.NextDouble());
            var term = AxisTerm.Second(random.NextDouble() - 0.5, random.NextDouble() - 0.5, d, kappa, Tolerances.Epsilon * Math.Sqrt(kappa));
            double offset = (random.NextDouble() - 0.5) * Math.Pow(10, -12 * random.NextDouble());
            var terms = AxisTerm.Of([term]);
            var pair = terms.Over(terms.CenterOf(0), offset, 0, -1).Pair;
            var z = Rational.FromDouble(terms.CenterOf(0)) + Rational.FromDouble(offset);
            NoMore(Error(term.Exact.Real(z), pair.Real.Value), pair.Real.Rounding, $"trial {trial}: error of R of {term.Kind} at {offset}");
            NoMore(Error(term.Exact.Imaginary(z), pair.Imaginary.Value), pair.Imaginary.Rounding, $"trial {trial}: error of I of {term.Kind} at {offset}");
        }
    }

    [Fact]
    public void Over_PoleMovedByItsUncertainty_StaysWithinTheRounding()
    {
        var random = new Random(24);
        for (int trial = 0; trial < 2000; trial++)
        {
            double uncertainty = Math.Pow(10, -4 - (4 * random.NextDouble()));
            var pole = Complex.FromPolarCoordinates(1, Math.PI * (0.5 + (0.5 * random.NextDouble())));
            pole = random.Next(3) == 0 ? new Complex(-uncertainty * (20 + random.NextDouble()), 1) : pole;
            pole = Math.Abs(pole.Imaginary) < 100 * uncertainty ? pole.Real : pole;
            var residue = Complex.FromPolarCoordinates(1, 2 * Math.PI * random.NextDouble());
            var shift = Complex.FromPolarCoordinates(uncertainty, 2 * Math.PI * random.NextDouble());
            var (terms, moved) = pole.Imaginary == 0
                ? (Of(AxisTerm.First(residue.Real, pole.Real, uncertainty)), Of(AxisTerm.First(residue.Real, pole.Real + uncertainty)))
                : (Of(AxisTerm.Pair(residue, pole, uncertainty)), Of(AxisTerm.Pair(residue, pole + shift)));
            double z = random.Next(2) == 0 ? 4 * random.NextDouble() : 1 + ((random.NextDouble() - 0.5) * 40 * uncertainty);
            var (before, after) = (terms.Over(z, 0), moved.Over(z, 0));
            ScaledAssert.Within(before.Real.Value, after.Real.Value, before.Real.Rounding, $"trial {trial}: R at {z}, pole {pole}");
            ScaledAssert.Within(before.Imaginary.Value, after.Imaginary.Value, before.Imaginary.Rounding, $"trial {trial}: I at {z}, pole {pole}");
        }

        static PairTerms Of(AxisTerm term) => AxisTerm.Of([term]);
    }

    [Fact]
    public void Over_Without_LeavesOutThatTermAlone()
    {
        var random = new Random(25);
        for (int n = 1; n <= 9; n++)
        {
            var set = Apart(random, n).OrderBy(t => t.Term.Center).ToArray();
            for (int without = 0; without < n; without++)
            {
                var kept = set.Where((_, k) => k != without);
                var (left, right) = (AxisTerm.Of(set, 0.5).Over(0.3, 0.4, 0.01, without), AxisTerm.Of(kept, 0.5).Over(0.3, 0.4, 0.01, -1));
                SameBounds(right.Pair, left.Pair, $"{n} without {without}");
                ScaledAssert.Within(right.Nearness, left.Nearness, 1e-40 + (1e-15 * right.Nearness), $"nearness of {n} without {without}");
            }
        }
    }

    [Fact]
    public void Over_WithoutTheTermAtWhosePoleTheCellLies_IsFinite()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0, 1, 0, 2), AxisTerm.Second(0, 1, 0.1, 5)]);
        var (pair, nearness) = terms.Over(2, 0, 0.5, 0);
        SameBounds(AxisTerm.Of([AxisTerm.Second(0, 1, 0.1, 5)]).Over(2, 0.5), pair, "the other term");
        Assert.InRange(nearness, 0.3, 0.5);
    }

    // Lanes beyond the last term hold a pole far away.
    [Fact]
    public void Over_OneToNineTerms_IsTheSumOfEach()
    {
        var random = new Random(26);
        for (int n = 1; n <= 9; n++)
        {
            var set = Apart(random, n);
            var parts = set.Select(t => AxisTerm.Of([t]).Over(0.4, 0.01)).ToArray();
            SameBounds(parts.Aggregate((a, b) => a + b), AxisTerm.Of(set).Over(0.4, 0.01), $"{n} terms");
        }
    }

    [Fact]
    public void Expand_RandomSums_PolynomialAndRestEncloseTheFunction()
    {
        var random = new Random(27);
        int small = 0;
        for (int trial = 0; trial < 300; trial++)
        {
            var set = Enumerable.Range(0, random.Next(1, 10)).Select(_ => AxisTerm.Any(random)).ToArray();
            var terms = AxisTerm.Of(set, random.NextDouble() - 0.5);
            double origin = Math.Max(0, terms.CenterOf(random.Next(terms.Count)));
            double offset = (random.NextDouble() - 0.2) * Math.Max(1, origin);
            double radius = (0.05 + (0.44 * random.NextDouble())) / terms.Over(origin, offset, 0, -1).Nearness;
            int order = random.Next(2, 17);
            double[] real = new double[order];
            double[] imaginary = new double[order];
            var rest = terms.Expand(origin, offset, radius, real, imaginary);
            var here = terms.Over(origin, offset, 0, -1).Pair;
            small += rest.Real < 1e-3 * here.Real.First * radius ? 1 : 0;
            for (int k = -12; k <= 12; k++)
            {
                double x = radius * k / 12;
                var pair = terms.Over(origin, offset + x, 0, -1).Pair;
                ScaledAssert.Within(
                    pair.Real.Value, Polynomial(real, x), (rest.Real * (1 + 1e-10)) + (4 * (here.Real.Rounding + pair.Real.Rounding)), $"trial {trial}: R at {k}");
                ScaledAssert.Within(
                    pair.Imaginary.Value, Polynomial(imaginary, x),
                    (rest.Imaginary * (1 + 1e-10)) + (4 * (here.Imaginary.Rounding + pair.Imaginary.Rounding)), $"trial {trial}: I at {k}");
            }
        }

        Assert.InRange(small, 100, 300);
    }

    // With a pole inside the radius the series diverges, and no bound of what it leaves out is finite.
    [Fact]
    public void Expand_PoleWithinTheRadius_BoundsNothing()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0.1, 1, 0.01, 2), AxisTerm.First(1, -3)]);
        var rest = terms.Expand(0, 1.8, 0.5, new double[16], new double[16]);
        Assert.Equal((double.PositiveInfinity, double.PositiveInfinity), rest);
    }

    [Fact]
    public void GreatestBeyond_RandomSums_BoundsTheModulus()
    {
        var random = new Random(28);
        for (int trial = 0; trial < 300; trial++)
        {
            var set = Enumerable.Range(0, random.Next(1, 10)).Select(_ => AxisTerm.Any(random)).ToArray();
            var terms = AxisTerm.Of(set, random.NextDouble() - 0.5);
            double from = Enumerable.Range(0, terms.Count).Max(terms.ReachOf) * (1 + Math.Pow(10, (4 * random.NextDouble()) - 3));
            double bound = terms.GreatestBeyond(from);
            Assert.True(double.IsFinite(bound));
            for (double z = from; z < 1e6 * from; z *= 1.3)
            {
                var pair = terms.Over(z, 0);
                double modulus = Math.Sqrt((pair.Real.Value * pair.Real.Value) + (z * pair.Imaginary.Value * pair.Imaginary.Value));
                ScaledAssert.Small(modulus, bound * (1 + 1e-12), $"trial {trial}: modulus at {z} beyond {from}");
            }
        }
    }

    [Fact]
    public void GreatestBeyond_PoleBeyond_IsInfinite()
    {
        Assert.Equal(double.PositiveInfinity, AxisTerm.Of([AxisTerm.Second(0, 1, 0, 2)]).GreatestBeyond(1.5));
        Assert.Equal(double.PositiveInfinity, AxisTerm.Of([AxisTerm.Second(0, 1, 0, 2)]).GreatestBeyond(2));
        Assert.Equal(double.PositiveInfinity, AxisTerm.Of([AxisTerm.First(1, 0)]).GreatestBeyond(0));
    }

    [Fact]
    public void GreatestBeyond_Ratios_IsThePositionUnlessARateOrAnAccelerationIsThere()
    {
        Assert.Equal(3, new RatioFactor(-3, 0, 0).GreatestBeyond(5));
        Assert.Equal(double.PositiveInfinity, new RatioFactor(-3, 1, 0).GreatestBeyond(5));
        Assert.Equal(double.PositiveInfinity, new RatioFactor(-3, 0, 1).GreatestBeyond(5));
    }

    [Fact]
    public void Of_TermsInAnyOrder_SortsThemByCentre()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0, 1, 0, 3), AxisTerm.First(1, -2), AxisTerm.Second(0, 1, 0, 1)]);
        Assert.Equal([-4, 1, 3], Enumerable.Range(0, terms.Count).Select(terms.CenterOf));
    }

    [Fact]
    public void Of_TermsWithOneSimplePole_AddsThemUp()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0.5, 1, 0, 4), AxisTerm.First(1, 2), AxisTerm.Second(0.25, -3, 0, 4), AxisTerm.First(0.5, -2)]);
        Assert.Equal(2, terms.Count);
        Assert.Equal((0, -1, 0, -1.5), terms.NumeratorsOf(0));
        Assert.Equal((0, 2, 0, -0.75), terms.NumeratorsOf(1));
    }

    [Fact]
    public void Of_EqualCentresWithDamping_KeepsThemApart()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0, 1, 1e-12, 4), AxisTerm.Second(0, 2, 0, 4), AxisTerm.Second(0, 1, 2e-12, 4), AxisTerm.Second(0, 1, 0, 4)]);
        Assert.Equal([4, 4, 4], Enumerable.Range(0, terms.Count).Select(terms.CenterOf));
        Assert.Equal(-3, Enumerable.Range(0, terms.Count).Where(k => terms.SquareOf(k) == 0).Sum(k => terms.NumeratorsOf(k).Real1));
    }

    [Theory]
    [MemberData(nameof(KindIndices))]
    public void ReachOf_EachKind_IsNoLessThanTheModulusOfItsPolesSquared(int kind)
    {
        var terms = AxisTerm.Of([Kinds[kind]]);
        double farthest = Ends(terms, 0).Max(Complex.Abs);
        ScaledAssert.Small(farthest, terms.ReachOf(0) * (1 + 1e-15), "distance of a pole");
    }

    /// <summary>Terms with different centres.</summary>
    private static AxisTerm[] Apart(Random random, int count)
    {
        var set = new Dictionary<double, AxisTerm>();
        while (set.Count < count)
        {
            var term = AxisTerm.Any(random);
            set[term.Term.Center] = term;
        }

        return [.. set.Values];
    }

    private static void CheckBounds(PairTerms terms, double origin, double offset, double radius, string what)
    {
        const int points = 40;
        var pair = terms.Over(origin, offset, radius, -1).Pair;
        for (int k = -points; k <= points; k++)
        {
            double x = offset + (radius * k / points);
            var (real, imaginary) = Derivatives(terms, origin, x);
            Within(real.First, pair.Real.First, $"R′ of {what}");
            Within(real.Second, pair.Real.Second, $"R″ of {what}");
            Within(imaginary.First, pair.Imaginary.First, $"I′ of {what}");
            Within(imaginary.Second, pair.Imaginary.Second, $"I″ of {what}");

            void Within(double derivative, double bound, string name)
            {
                // Where the cell holds a pole there is no bound.
                if (double.IsFinite(bound))
                {
                    ScaledAssert.Small(Math.Abs(derivative), bound * (1 + 1e-9), $"{name} at {origin} + {x}, radius {radius}");
                }
            }
        }
    }

    /// <summary>First and second derivatives through the roots of the denominators.</summary>
    private static ((double First, double Second) Real, (double First, double Second) Imaginary) Derivatives(PairTerms terms, double origin, double offset)
    {
        var (r1, r2, i1, i2) = (0.0, 0.0, 0.0, 0.0);
        for (int k = 0; k < terms.Count; k++)
        {
            double t = origin - terms.CenterOf(k) + offset;
            var half = Complex.Sqrt(-terms.SquareOf(k));
            var (a, b) = (1 / (t - half), 1 / (t + half));
            var inverse = (First: -a * b * (a + b), Second: 2 * a * b * ((a * a) + (a * b) + (b * b)));
            var ratio = (First: -0.5 * ((a * a) + (b * b)), Second: (a * a * a) + (b * b * b));
            var n = terms.NumeratorsOf(k);
            r1 += ((n.Real0 * inverse.First) + (n.Real1 * ratio.First)).Real;
            r2 += ((n.Real0 * inverse.Second) + (n.Real1 * ratio.Second)).Real;
            i1 += ((n.Imaginary0 * inverse.First) + (n.Imaginary1 * ratio.First)).Real;
            i2 += ((n.Imaginary0 * inverse.Second) + (n.Imaginary1 * ratio.Second)).Real;
        }

        return ((r1, r2), (i1, i2));
    }

    private static void CheckRounding(PairTerms terms, double origin, double offset, string what)
    {
        var pair = terms.Over(origin, offset, 0, -1).Pair;
        var (real, imaginary) = Kept(terms, origin, offset);
        NoMore(Error(real.Value, pair.Real.Value), pair.Real.Rounding, $"{what}: error of R at {origin} + {offset}");
        NoMore(Error(imaginary.Value, pair.Imaginary.Value), pair.Imaginary.Rounding, $"{what}: error of I at {origin} + {offset}");
        NoMore(Error(real.Slope, pair.Real.Slope), pair.Real.SlopeRounding, $"{what}: error of R′ at {origin} + {offset}");
        NoMore(Error(imaginary.Slope, pair.Imaginary.Slope), pair.Imaginary.SlopeRounding, $"{what}: error of I′ at {origin} + {offset}");
    }

    /// <summary>Values and slopes in exact arithmetic, from the numbers that the terms hold.</summary>
    private static ((Rational Value, Rational Slope) Real, (Rational Value, Rational Slope) Imaginary) Kept(PairTerms terms, double origin, double offset)
    {
        var (r, rs, i, s) = (Rational.FromDouble(terms.Constant), (Rational)0, (Rational)0, (Rational)0);
        var at = Rational.FromDouble(origin) + Rational.FromDouble(offset);
        for (int k = 0; k < terms.Count; k++)
        {
            var n = terms.NumeratorsOf(k);
            var t = at - Rational.FromDouble(terms.CenterOf(k));
            var p = (t * t) + Rational.FromDouble(terms.SquareOf(k));
            var (r0, r1, i0, i1) = (Rational.FromDouble(n.Real0), Rational.FromDouble(n.Real1), Rational.FromDouble(n.Imaginary0), Rational.FromDouble(n.Imaginary1));
            r += (r0 + (r1 * t)) / p;
            i += (i0 + (i1 * t)) / p;
            rs += ((r1 * p) - (2 * t * (r0 + (r1 * t)))) / (p * p);
            s += ((i1 * p) - (2 * t * (i0 + (i1 * t)))) / (p * p);
        }

        return ((r, rs), (i, s));
    }

    private static Complex[] Ends(PairTerms terms, int k)
    {
        var half = Complex.Sqrt(-terms.SquareOf(k));
        return [terms.CenterOf(k) - half, terms.CenterOf(k) + half];
    }

    private static double Polynomial(double[] coefficients, double x)
    {
        double sum = 0;
        for (int k = coefficients.Length - 1; k >= 0; k--)
        {
            sum = (sum * x) + coefficients[k];
        }

        return sum;
    }

    private static void SameBounds(RealPair expected, RealPair actual, string what)
    {
        foreach (var (a, b, part) in new[] { (expected.Real, actual.Real, "R"), (expected.Imaginary, actual.Imaginary, "I") })
        {
            double slack = 16 * (a.Rounding + b.Rounding);
            ScaledAssert.Within(a.Value, b.Value, slack, $"{part} of {what}");
            ScaledAssert.Within(a.Slope, b.Slope, 16 * (a.SlopeRounding + b.SlopeRounding), $"{part}′ of {what}");
            ScaledAssert.Relative(a.First, b.First, 1e-13, $"bound of {part}′ of {what}");
            ScaledAssert.Relative(a.Second, b.Second, 1e-13, $"bound of {part}″ of {what}");
            ScaledAssert.Relative(a.Rounding, b.Rounding, 1e-13, $"rounding of {part} of {what}");
            ScaledAssert.Relative(a.SlopeRounding, b.SlopeRounding, 1e-13, $"rounding of {part}′ of {what}");
        }
    }

    private static Rational Error(Rational exact, double value) => Rational.Abs(exact - Rational.FromDouble(value));

    private static void NoMore(Rational value, double bound, string what)
    {
        if (!(double.IsFinite(bound) && value <= Rational.FromDouble(bound)))
        {
            Assert.Fail($"{what} is {value.ToDouble():G17}, bounded by {bound:G17}");
        }
    }
}
