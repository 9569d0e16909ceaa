using FsCheck;
using FsCheck.Fluent;
using GainMargin.Numerics;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Numerics;

public sealed class CubicHermiteTests
{
    [Fact]
    public void At_DataOfACubic_ReproducesIt()
        => Seeded.Check(41, Prop.ForAll(Coefficients, Widths, (c, width) =>
        {
            var hermite = Through(c, width);
            double scale = c.Select((x, k) => Math.Abs(x) * Math.Pow(width, k)).Sum();
            for (int i = 0; i <= 8; i++)
            {
                double t = i / 8.0;
                ScaledAssert.Within(Value(c, t * width), hermite.At(t), 32 * ScaledAssert.Epsilon * scale, $"value at {t} of {hermite}");
            }
        }));

    [Fact]
    public void Departure_Parabola_IsExactlyZero()
        => Seeded.Check(42, Prop.ForAll(Coefficients, Widths, (c, width) => Through([c[0], c[1], c[2], 0], width).Departure == 0));

    [Fact]
    public void Departure_Cubic_IsHalfItsCubicTerm()
        => Seeded.Check(43, Prop.ForAll(
            Coefficients, Widths, (c, width) => Through(c, width).Departure == Math.Abs(c[3]) * width * width * width / 2));

    [Fact]
    public void Extrema_DerivativeWithKnownRoots_AreThoseInside()
    {
        // p′ = 12(x − a)(x − b); roots in eighths of the width.
        for (int a = -2; a <= 10; a++)
        {
            for (int b = a + 1; b <= 10; b++)
            {
                foreach (double width in (double[])[0.25, 1, 8])
                {
                    (double left, double right) = (a * width / 8, b * width / 8);
                    var extrema = Through([1, 12 * left * right, -6 * (left + right), 4], width).Extrema().Order().ToArray();
                    double[] expected = [.. new[] { a, b }.Where(r => r is > 0 and < 8).Select(r => r / 8.0)];
                    Assert.True(expected.Length == extrema.Length, $"roots {a}/8 and {b}/8: {extrema.Length} extrema inside");
                    for (int i = 0; i < expected.Length; i++)
                    {
                        ScaledAssert.Within(expected[i], extrema[i], 64 * ScaledAssert.Epsilon, $"extremum {i} for roots {a}/8 and {b}/8");
                    }
                }
            }
        }
    }

    [Theory]
    [InlineData(0, 1, 0, -1, 0.5)]
    [InlineData(0, -3, -2, -1, double.NaN)]
    public void Extrema_Parabola_IsItsVertexIfInside(double from, double slopeFrom, double to, double slopeTo, double vertex)
        => Assert.Equal(double.IsNaN(vertex) ? [] : [vertex], new CubicHermite(from, slopeFrom, to, slopeTo, 1).Extrema());

    [Fact]
    public void Extrema_StraightOrConstant_AreNone()
    {
        Assert.Empty(new CubicHermite(3, 0, 3, 0, 2).Extrema());
        Assert.Empty(new CubicHermite(1, 2, 5, 2, 2).Extrema());
        Assert.Equal((3, 3), new CubicHermite(3, 0, 3, 0, 2).Range());
    }

    [Fact]
    public void Range_AnyCubic_HoldsAllSamplesAndIsReached()
        => Seeded.Check(44, Prop.ForAll(Coefficients, Widths, (c, width) =>
        {
            var hermite = Through(c, width);
            (double least, double greatest) = hermite.Range();
            double scale = c.Select((x, k) => Math.Abs(x) * Math.Pow(width, k)).Sum();
            double[] samples = [.. Enumerable.Range(0, 1025).Select(i => hermite.At(i / 1024.0))];
            double rounding = 32 * ScaledAssert.Epsilon * scale;
            ScaledAssert.Small(least - samples.Min(), rounding, $"smallest sample below the range of {hermite}");
            ScaledAssert.Small(samples.Max() - greatest, rounding, $"largest sample above the range of {hermite}");
            // Between samples 1/1024 apart a cubic rises by at most its second derivative allows.
            double between = (rounding + (8 * scale / 1024 / 1024));
            ScaledAssert.Small(samples.Min() - least, between, $"unreached part of the range of {hermite}");
            ScaledAssert.Small(greatest - samples.Max(), between, $"unreached part of the range of {hermite}");
        }));

    /// <summary>Integer coefficients and widths that are powers of two: the data of the cubic are exact.</summary>
    private static Arbitrary<double[]> Coefficients => Gen.Choose(-50, 50).Select(c => (double)c).ArrayOf(4).ToArbitrary();

    private static Arbitrary<double> Widths => Gen.Choose(-4, 4).Select(e => Math.ScaleB(1, e)).ToArbitrary();

    private static CubicHermite Through(double[] c, double width)
        => new(c[0], c[1], Value(c, width), c[1] + (2 * c[2] * width) + (3 * c[3] * width * width), width);

    private static double Value(double[] c, double x) => c[0] + (x * (c[1] + (x * (c[2] + (x * c[3])))));
}
