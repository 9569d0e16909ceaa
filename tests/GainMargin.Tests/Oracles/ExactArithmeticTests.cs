using System.Numerics;

namespace GainMargin.Tests.Oracles;

public class ExactArithmeticTests
{
    [Theory]
    [InlineData(0.1)]
    [InlineData(-3.5)]
    [InlineData(double.Epsilon)]
    [InlineData(double.MaxValue)]
    [InlineData(0.0)]
    public void FromDouble_FiniteValue_RoundTrips(double value) => Assert.Equal(value, Rational.FromDouble(value).ToDouble());

    [Theory]
    [InlineData(double.NaN)]
    [InlineData(double.NegativeInfinity)]
    public void FromDouble_NotFinite_Throws(double value) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => Rational.FromDouble(value));

    [Fact]
    public void FromDouble_OneTenth_IsTheDyadicNeighbour() =>
        Assert.Equal(new Rational(3602879701896397, BigInteger.One << 55), Rational.FromDouble(0.1));

    [Fact]
    public void ToDouble_PartsBeyondDoubleRange_IsCorrectlyRounded()
    {
        var huge = BigInteger.Pow(7, 2000);
        Assert.Equal(-1.0 / 3.0, new Rational(-huge, 3 * huge + 1).ToDouble());
        Assert.Equal(0.0, new Rational(1, huge).ToDouble());
        Assert.Equal(double.PositiveInfinity, new Rational(huge, 1).ToDouble());
    }

    [Fact]
    public void Arithmetic_MixedSigns_NormalisesAndCompares()
    {
        var half = new Rational(-2, -4);
        Assert.Equal("1/2", half.ToString());
        Assert.Equal(new Rational(-1, 6), half - new Rational(2, 3));
        Assert.Equal(new Rational(-3, 4), half / new Rational(2, -3));
        Assert.True(new Rational(1, -3) < default(Rational) && half > new Rational(1, 3));
        Assert.Throws<DivideByZeroException>(() => half / 0);
    }

    [Fact]
    public void DivRem_NegativeLeadingCoefficient_SatisfiesIdentity()
    {
        var dividend = ExactPolynomial.FromDoubles(0.1, -2, 0, 3.5, 1);
        var divisor = ExactPolynomial.FromDoubles(1, 0.3, -0.7);
        var (quotient, remainder) = dividend.DivRem(divisor);
        Assert.True((quotient * divisor + remainder - dividend).IsZero);
        Assert.Equal(1, remainder.Degree);
        Assert.Throws<ArithmeticException>(() => dividend.ExactDivide(divisor));
    }

    [Fact]
    public void Gcd_CommonFactors_IsTheirProduct()
    {
        var common = FromRoots(1, -2);
        Assert.True((ExactPolynomial.Gcd(FromRoots(3, 1, -2), -common * FromRoots(5, 5)) - common).IsZero);
        Assert.Equal(0, ExactPolynomial.Gcd(FromRoots(1, 2), FromRoots(3, 4)).Degree);
    }

    [Fact]
    public void SignedRemainders_SparsePolynomials_ArePositiveMultiplesOfNegatedRemainders()
    {
        var random = new Random(99);
        for (var trial = 0; trial < 200; trial++)
        {
            var chain = ExactPolynomial.SignedRemainders(Sparse(random.Next(5, 10)), Sparse(random.Next(2, 6)));
            for (var i = 2; i < chain.Count; i++)
            {
                var expected = -(chain[i - 2] % chain[i - 1]);
                var factor = chain[i].LeadingCoefficient / expected.LeadingCoefficient;
                Assert.True(factor > 0 && (factor * expected - chain[i]).IsZero);
            }
            Assert.True((chain[^2] % chain[^1]).IsZero);
        }

        ExactPolynomial Sparse(int degree)
        {
            var coefficients = new double[degree + 1];
            for (var i = 0; i < degree; i++)
                coefficients[i] = random.Next(3) == 0 ? random.Next(-9, 10) : 0;
            coefficients[degree] = random.Next(2) == 0 ? -random.Next(1, 5) : random.Next(1, 5);
            return ExactPolynomial.FromDoubles(coefficients);
        }
    }

    [Fact]
    public void SquareFreePart_RepeatedFactors_KeepsEachOnce() =>
        Assert.True((FromRoots(1, 1, 1, -2, -2, 5).SquareFreePart() - FromRoots(1, -2, 5)).IsZero);

    [Fact]
    public void Determinant_SingularAndRegularMatrices_IsExact()
    {
        ExactPolynomial x = ExactPolynomial.FromDoubles(0, 1), one = ExactPolynomial.One;
        Assert.True((ExactPolynomial.Determinant(new[,] { { one, x }, { x, one } }) - (one - x * x)).IsZero);
        Assert.True(ExactPolynomial.Determinant(new[,] { { one, x }, { x, x * x } }).IsZero);
    }

    [Theory]
    [InlineData(-10, 10, 4, 4)]
    [InlineData(-2, 3, 2, 3)]
    [InlineData(-1, 1, 1, 2)]
    [InlineData(1, 3, 0, 1)]
    [InlineData(4, 9, 0, 0)]
    public void CountRoots_KnownProduct_CountsDistinctRootsAndEnds(int from, int to, int open, int halfOpen)
    {
        var polynomial = FromRoots(-2, 0, 0, 1, 3, 3, 3) * ExactPolynomial.FromDoubles(1, 0, 1);
        Assert.Equal(open, polynomial.CountRoots(from, to));
        Assert.Equal(halfOpen, polynomial.CountRootsHalfOpen(from, to));
        Assert.Equal(4, polynomial.CountRoots());
        Assert.Equal(7, polynomial.CountRootsWithMultiplicity());
        Assert.Equal(open, polynomial.Roots(from, to).Count);
    }

    [Fact]
    public void Roots_CloseAndIrrational_AreIsolatedAndRefined()
    {
        var close = 1 + Math.ScaleB(1, -50);
        var polynomial = ExactPolynomial.FromDoubles(-2, 0, 1) * FromRoots(0) * FromRoots(1) * ExactPolynomial.FromDoubles(-close, 1);
        Assert.Equal([-Math.Sqrt(2), 0.0, 1.0, close, Math.Sqrt(2)], polynomial.Roots().Select(r => r.ToDouble()));
        var bracket = polynomial.Roots(new Rational(5, 4), 2).Single().Refine(200);
        Assert.True(bracket.Low * bracket.Low < 2 && bracket.High * bracket.High > 2);
        Assert.True(bracket.High - bracket.Low < new Rational(1, BigInteger.One << 199));
    }

    [Fact]
    public void SignOf_PolynomialAtIrrationalRoot_IsExact()
    {
        var root = ExactPolynomial.FromDoubles(-2, 0, 1).Roots(1, 2).Single();
        Assert.Equal(0, root.SignOf(ExactPolynomial.FromDoubles(-4, 0, 0, 0, 1)));
        Assert.Equal(1, root.SignOf(ExactPolynomial.FromDoubles(-Math.BitDecrement(Math.Sqrt(2)), 1)));
        Assert.Equal(-1, root.SignOf(ExactPolynomial.FromDoubles(-Math.BitIncrement(Math.Sqrt(2)), 1)));
    }

    private static ExactPolynomial FromRoots(params int[] roots) =>
        roots.Aggregate(ExactPolynomial.One, (p, root) => p * ExactPolynomial.Create(-root, 1));
}
