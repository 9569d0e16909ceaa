using GainMargin.Numerics;
using GainMargin.Tests.Oracles;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Numerics;

public sealed class AxisFunctionTests
{
    private const int Points = 6;

    private static readonly (double P, double V, double A)[] Laws =
        [(1, 0, 0), (0, 0.5, 0), (0, 0, 0.75), (0, 0, -2), (1, 0.25, 0), (-1.5, 0, 0.5), (0, 0.25, 2), (1, -0.5, 0.125)];

    /// <summary>No further factor, an actuator lag, a light resonance, and a resonance with a part that stays.</summary>
    private static readonly AxisTerm[][] Dynamics =
    [
        [],
        [AxisTerm.First(2, -2)],
        [AxisTerm.Second(0, 1, 0.0625, 1.5)],
        [AxisTerm.Second(0.125, -2, 0.5, 3), AxisTerm.First(0.5, -0.25)],
    ];

    [Fact]
    public void Over_Cells_EncloseBothParts()
    {
        int cells = 0;
        foreach (var c in Cases(31, 200))
        {
            double radius = Math.Pow(10, (5 * c.Random.NextDouble()) - 5);
            double offset = (c.Random.NextDouble() - 0.4) * Math.Max(0.5, c.Origin);
            offset = Math.Max(offset, radius - c.Origin);
            var cell = c.Function.Over(c.Anchor, offset, radius, clear: false);
            CheckEnclosed(c, cell, offset, radius);
            cells += double.IsFinite(cell.Sought.First) ? 1 : 0;
        }

        Assert.InRange(cells, 100, 200);
    }

    [Fact]
    public void Over_Cleared_IsDenominatorTimesTheUnclearedFunction()
    {
        int cells = 0;
        foreach (var c in Cases(32, 400).Where(c => c.Anchor >= 0))
        {
            double h = c.Function.Terms.SquareOf(c.Anchor);
            double radius = Math.Pow(10, (4 * c.Random.NextDouble()) - 5);
            double middle = (c.Random.NextDouble() - 0.5) * 3 * radius;
            var cleared = c.Function.Over(c.Anchor, middle, radius, clear: true).Sought;
            var here = c.Function.Over(c.Anchor, middle, 0, clear: true).Sought;
            Assert.Equal((here.Value, here.Slope, here.Rounding), (cleared.Value, cleared.Slope, cleared.Rounding));
            for (int k = -Points; k <= Points; k++)
            {
                double t = middle + (radius * k / Points);
                if (t == 0 || c.Origin + t <= 0)
                {
                    continue;
                }

                double denominator = h == 0 ? t : (t * t) + h;
                var plain = c.Function.Over(c.Anchor, t, 0, clear: false).Sought;
                double value = denominator * plain.Value;
                double rounding = (Math.Abs(denominator) * plain.Rounding * 2) + (2 * cleared.Rounding) + c.Function.Over(c.Anchor, t, 0, clear: true).Sought.Rounding;
                ScaledAssert.Within(value, c.Function.Over(c.Anchor, t, 0, clear: true).Sought.Value, rounding, $"{c.Name}: cleared at {t}");
                if (!double.IsFinite(cleared.First))
                {
                    continue;
                }

                CheckTaylor(cleared, radius * k / Points, value, rounding, $"{c.Name}: cleared at {t}");
            }

            cells++;
        }

        Assert.InRange(cells, 100, 400);
    }

    [Fact]
    public void Expanded_Cells_EncloseBothParts()
    {
        int cells = 0;
        int better = 0;
        foreach (var c in Cases(33, 300))
        {
            double offset = (c.Random.NextDouble() - 0.4) * Math.Max(0.5, c.Origin);
            double nearness = c.Function.Over(c.Anchor, offset, 0, clear: false).Nearness;
            double radius = Math.Min(c.Random.NextDouble() / (3.5 * nearness), c.Origin + offset);
            if (!(radius > 0))
            {
                continue;
            }

            var cell = c.Function.Over(c.Anchor, offset, radius, clear: false);
            if (!AxisFunction.CanExpand(cell, radius))
            {
                continue;
            }

            int before = c.Function.Evaluations;
            var expanded = c.Function.Expanded(c.Anchor, offset, radius);
            Assert.True(c.Function.Evaluations > before);
            CheckEnclosed(c, expanded, offset, radius);
            cells++;
            better += expanded.Sought.First < 0.99 * cell.Sought.First ? 1 : 0;
        }

        Assert.InRange(cells, 150, 300);
        Assert.InRange(better, cells / 3, cells);
    }

    // The pole of a further factor is no pole of the terms: only the factor itself can tell that the series does not converge.
    [Fact]
    public void Expanded_PoleOfAFurtherFactorInside_ClaimsNothing()
    {
        var function = new AxisFunction(
            AxisTerm.Of([AxisTerm.Second(0, 1, 0.1, 4)]), new RatioFactor(1, 0, 0), [AxisTerm.Of([AxisTerm.Second(0, 1, 0.002, 1)])]);
        var cell = function.Expanded(-1, 1.2, 0.5);
        Assert.False(cell.Sought.HasNoZero || cell.Sought.IsMonotone || cell.Sought.IsLostInRounding);
        Assert.Equal((double.NegativeInfinity, double.PositiveInfinity), (cell.RealLow, cell.RealHigh));
    }

    [Fact]
    public void Expanded_ResidualsOfManyTermsCancel_KeepsTheSmallSum()
    {
        // Residues alternate as binomial coefficients do, so the sum is of sixth order in their distance.
        double[] binomial = [1, -6, 15, -20, 15, -6, 1];
        var terms = AxisTerm.Of(binomial.Select((b, k) => AxisTerm.Second(0, b, 0.01, 1 + (0.1 * k))));
        var function = new AxisFunction(terms, new RatioFactor(1, 0, 0), []);
        var cell = function.Over(-1, 4, 0.1, clear: false);
        var expanded = function.Expanded(-1, 4, 0.1);
        Assert.False(cell.Sought.HasNoZero);
        Assert.True(expanded.Sought.HasNoZero);
        Assert.InRange(expanded.Sought.First, 0, 1e-3 * cell.Sought.First);
    }

    // A ratio that vanishes in the middle of a narrow cell leaves the rounding of the ratio itself.
    [Fact]
    public void Expanded_RatioVanishesInTheMiddle_RoundingOfTheRatioCounts()
    {
        var random = new Random(34);
        for (int trial = 0; trial < 200; trial++)
        {
            double z = 1 + random.NextDouble();
            double a = 0.1 + random.NextDouble();
            AxisTerm[] set = [AxisTerm.Second(0, 1, 0.25, 4)];
            var function = new AxisFunction(AxisTerm.Of(set), new RatioFactor(a * z, 0, a), []);
            var exact = AxisTerm.Exactly(set) * ExactTransfer.Ratios(a * z, 0, a);
            double radius = z * 1e-16;
            var cell = function.Expanded(-1, z, radius);
            double value = exact.Imaginary(Rational.FromDouble(z)).ToDouble();
            Assert.InRange(value, cell.Sought.Low, cell.Sought.High);
            Assert.InRange(exact.Real(Rational.FromDouble(z)).ToDouble(), cell.RealLow, cell.RealHigh);
        }
    }

    [Fact]
    public void RealAt_Points_IsTheRealPartWithinItsRounding()
    {
        foreach (var c in Cases(35, 200))
        {
            double offset = Math.Max((c.Random.NextDouble() - 0.4) * Math.Max(0.5, c.Origin), 0.01 - c.Origin);
            var real = c.Function.RealAt(c.Anchor, offset);
            var z = Rational.FromDouble(c.Origin) + Rational.FromDouble(offset);
            ScaledAssert.Within(c.Exact.Real(z).ToDouble(), real.Value, real.Rounding, $"{c.Name}: real part at {c.Origin} + {offset}");
            var step = Rational.FromDouble(1e-9);
            double slope = ((c.Exact.Real(z + step) - c.Exact.Real(z - step)) / (2 * step)).ToDouble();
            double near = c.Function.Over(c.Anchor, offset, 0, clear: false).Nearness;
            ScaledAssert.Within(slope, real.Slope, real.SlopeRounding + (1e-6 * (1 + near) * (Math.Abs(slope) + Math.Abs(real.Value))), $"{c.Name}: its slope");
        }
    }

    [Fact]
    public void TailBounds_EveryLawAndFactor_AreNeverLeft()
    {
        int finite = 0;
        foreach (var c in Cases(36, 400))
        {
            double from = c.Function.BeyondPoles() * (1 + Math.Pow(10, (4 * c.Random.NextDouble()) - 2));
            var (low, high) = c.Function.TailBounds(from);
            finite += double.IsFinite(low) && double.IsFinite(high) ? 1 : 0;
            for (double z = from; z < 1e12 * from; z *= 7)
            {
                double value = c.Exact.Real(Rational.FromDouble(z)).ToDouble();
                Assert.True(value >= low && value <= high, $"{c.Name}: R = {value:R} at {z:R} beyond {from:R} is not between {low:R} and {high:R}");
            }
        }

        Assert.InRange(finite, 200, 400);
    }

    [Fact]
    public void KeepsSign_EveryLaw_IsNeverClaimedWhereTheSignChanges()
    {
        int claims = 0;
        foreach (var c in Cases(37, 600).Where(c => c.Function.KeepsSign(c.From)))
        {
            claims++;
            int sign = c.Exact.Imaginary(Rational.FromDouble(c.From)).Sign;
            for (double z = c.From; z < 1e12 * c.From; z *= 3)
            {
                Assert.True(sign == c.Exact.Imaginary(Rational.FromDouble(z)).Sign, $"{c.Name}: the sign at {z} is not that at {c.From}");
            }
        }

        Assert.InRange(claims, 100, 600);
    }

    // I tends to v·c − (…)/z: the constant wins in the end, however small.
    [Fact]
    public void KeepsSign_SmallConstantOfTheOtherSign_IsNotClaimed()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0, 1, 0.1, 1)], 1e-4);
        Assert.False(new AxisFunction(terms, new RatioFactor(0, 1e-3, -1), []).KeepsSign(40));
        Assert.True(new AxisFunction(terms, new RatioFactor(0, 1e-3, 1), []).KeepsSign(40));
    }

    [Fact]
    public void TailBounds_AccelerationOfAConstant_AreInfinite()
    {
        var terms = AxisTerm.Of([AxisTerm.Second(0, 1, 0.1, 1)], 1e-4);
        Assert.Equal(double.PositiveInfinity, new AxisFunction(terms, new RatioFactor(0, 1e-3, -1), []).TailBounds(4).High);
        Assert.Equal(double.PositiveInfinity, new AxisFunction(terms, new RatioFactor(0, 1e-3, -1), [AxisTerm.Of([AxisTerm.First(2, -2)])]).TailBounds(4).High);
    }

    [Theory]
    [InlineData(1, 0, 0, 0, true)]
    [InlineData(1, 0, 2, 0, true)]
    [InlineData(0, 0, 1, 0, true)]
    [InlineData(1, 0.5, 0, 0, false)]
    [InlineData(1, 0, 0, 0.5, false)]
    public void IsSilent_UndampedTerm_DependsOnTheRateAndItsResidue(double position, double rate, double acceleration, double e, bool expected)
    {
        var terms = AxisTerm.Of([AxisTerm.Second(e, 1, 0, 1), AxisTerm.Second(0, 1, 0.1, 2)]);
        var law = new RatioFactor(position, rate, acceleration);
        Assert.Equal(expected, new AxisFunction(terms, law, []).IsSilent(0));
        Assert.False(new AxisFunction(terms, law, []).IsSilent(1));
        Assert.False(new AxisFunction(terms, law, []).IsSilent(-1));
        Assert.False(new AxisFunction(terms, law, [AxisTerm.Of([AxisTerm.First(2, -2)])]).IsSilent(0));
    }

    [Fact]
    public void BeyondPoles_AllPolesAtZero_IsTwo()
        => Assert.Equal(2, new AxisFunction(AxisTerm.Of([AxisTerm.Second(0, 1, 0, 0)]), new RatioFactor(1, 0, 0), []).BeyondPoles());

    private static void CheckEnclosed(Case c, AxisCell cell, double offset, double radius)
    {
        for (int k = -Points; k <= Points; k++)
        {
            double x = radius * k / Points;
            var z = Rational.FromDouble(c.Origin) + Rational.FromDouble(offset) + Rational.FromDouble(x);
            if (z.Sign <= 0)
            {
                continue;
            }

            double imaginary = (c.IsSquared ? c.Exact.Imaginary(z) / -z : c.Exact.Imaginary(z)).ToDouble();
            double real = c.Exact.Real(z).ToDouble();
            string what = $"{c.Name}: at {c.Origin} + {offset}, radius {radius}, point {k}";
            if (double.IsFinite(cell.Sought.First))
            {
                CheckTaylor(cell.Sought, x, imaginary, 0, what);
            }

            if (double.IsFinite(cell.RealLow) && double.IsFinite(cell.RealHigh))
            {
                double spread = 1e-14 * (cell.RealHigh - cell.RealLow);
                Assert.True(real >= cell.RealLow - spread && real <= cell.RealHigh + spread, $"{what}: {real} outside {cell.RealLow} … {cell.RealHigh}");
            }
        }
    }

    /// <summary>A value at distance <paramref name="x"/> from the middle is within what first and second derivative allow.</summary>
    private static void CheckTaylor(Bounded bounds, double x, double value, double rounding, string what)
    {
        double slack = rounding + bounds.Rounding + (1e-13 * bounds.First * bounds.Radius);
        ScaledAssert.Within(bounds.Value, value, (bounds.First * Math.Abs(x)) + slack, what + ", by the first derivative");
        ScaledAssert.Within(
            bounds.Value + (bounds.Slope * x), value, (0.5 * bounds.Second * x * x) + (bounds.SlopeRounding * Math.Abs(x)) + slack,
            what + ", by the second derivative");
    }

    private static IEnumerable<Case> Cases(int seed, int count)
    {
        var random = new Random(seed);
        for (int trial = 0; trial < count; trial++)
        {
            var law = Laws[random.Next(Laws.Length)];
            var set = Enumerable.Range(0, random.Next(1, 6)).Select(_ => AxisTerm.Any(random, law.A != 0)).ToArray();
            double constant = random.Next(3) == 0 ? (random.NextDouble() - 0.5) * Math.Pow(10, -4 * random.NextDouble()) : 0;
            var further = Dynamics[random.Next(2) * random.Next(Dynamics.Length)];
            double stays = random.Next(4) == 0 ? 0.5 : 0;
            var terms = AxisTerm.Of(set, constant);
            var exact = AxisTerm.Exactly(set, constant) * ExactTransfer.Ratios(law.P, law.V, law.A);
            IPairFactor[] factors = further.Length == 0 ? [] : [AxisTerm.Of(further, stays)];
            exact = further.Length == 0 ? exact : exact * AxisTerm.Exactly(further, stays);
            int anchor = random.Next(-1, terms.Count);
            anchor = anchor >= 0 && (terms.CenterOf(anchor) < 0 || terms.SquareOf(anchor) < 0) ? -1 : anchor;
            var function = new AxisFunction(terms, new RatioFactor(law.P, law.V, law.A), factors);
            yield return new Case(
                $"trial {trial}, {law}, {string.Join(" + ", set.Select(t => t.Kind))} + {constant}", random, function, exact, anchor,
                law.P == 0 && law.V == 0, function.BeyondPoles() * (1 + Math.Pow(10, (4 * random.NextDouble()) - 2)));
        }
    }

    private sealed record Case(string Name, Random Random, AxisFunction Function, ExactTransfer Exact, int Anchor, bool IsSquared, double From)
    {
        public double Origin => Function.OriginOf(Anchor);
    }
}
