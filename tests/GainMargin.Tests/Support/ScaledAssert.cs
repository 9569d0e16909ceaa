using System.Globalization;
using System.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin.Tests.Support;

/// <summary>Assertions with scaled tolerances whose messages name the worst entry and what was allowed. NaN always fails.</summary>
internal static class ScaledAssert
{
    /// <summary>Spacing of doubles at one.</summary>
    public const double Epsilon = 2.220446049250313e-16;

    /// <summary><c>|actual − expected| ≤ allowed</c>.</summary>
    public static void Within(double expected, double actual, double allowed, string what = "value")
    {
        double error = Math.Abs(actual - expected);
        if (!(error <= allowed))
        {
            Assert.Fail($"{what}: expected {Show(expected)}, actual {Show(actual)}, error {Show(error)}, allowed {Show(allowed)}");
        }
    }

    /// <summary><c>|actual − expected| ≤ relative·|expected|</c>.</summary>
    public static void Relative(double expected, double actual, double relative, string what = "value")
        => Within(expected, actual, relative * Math.Abs(expected), what);

    /// <summary>A residual norm that must not exceed what rounding explains.</summary>
    public static void Small(double residual, double allowed, string what = "residual")
    {
        if (!(residual <= allowed))
        {
            Assert.Fail($"{what} is {Show(residual)}, allowed {Show(allowed)}");
        }
    }

    /// <summary>Every entry within <c>factor·ε·n·‖expected‖</c>, with <c>n</c> the larger dimension, at least four.</summary>
    public static void Matrices(Matrix<double> expected, Matrix<double> actual, double factor = 8, string what = "matrix")
    {
        Assert.Equal((expected.RowCount, expected.ColumnCount), (actual.RowCount, actual.ColumnCount));
        double allowed = factor * Epsilon * Math.Max(4, Math.Max(expected.RowCount, expected.ColumnCount)) * expected.FrobeniusNorm();
        (int row, int column, double worst) = (0, 0, -1);
        for (int i = 0; i < expected.RowCount; i++)
        {
            for (int j = 0; j < expected.ColumnCount; j++)
            {
                double error = Math.Abs(actual[i, j] - expected[i, j]);
                if (!(error <= worst) && !double.IsNaN(worst))
                {
                    (row, column, worst) = (i, j, error);
                }
            }
        }

        if (expected.RowCount * expected.ColumnCount > 0)
        {
            Within(expected[row, column], actual[row, column], allowed, $"{what}[{row}, {column}], the worst entry");
        }
    }

    /// <summary>Two multisets of roots agree: they can be paired so that each pair is within what is allowed.</summary>
    public static void Roots(IReadOnlyList<Complex> expected, IReadOnlyList<Complex> actual, double allowed)
        => Roots(expected, actual, [.. actual.Select(_ => allowed)]);

    /// <summary>The same with an allowance for each of the actual roots, such as its stated uncertainty.</summary>
    public static void Roots(IReadOnlyList<Complex> expected, IReadOnlyList<Complex> actual, IReadOnlyList<double> allowed)
    {
        Assert.Equal(expected.Count, actual.Count);
        Assert.Equal(actual.Count, allowed.Count);
        int[] partner = [.. actual.Select(_ => -1)];
        var alone = Enumerable.Range(0, expected.Count).Where(i => !TryPair(i, new bool[actual.Count])).ToArray();
        if (alone.Length == 0)
        {
            return;
        }

        var worst = alone.Select(i => (Root: i, Nearest: Nearest(i))).MaxBy(p => Excess(p.Root, p.Nearest));
        Assert.Fail(
            $"{alone.Length} of {expected.Count} expected roots have no partner; worst {Show(expected[worst.Root])}: nearest actual root " +
            $"{Show(actual[worst.Nearest])} at {Show(Distance(worst.Root, worst.Nearest))}, allowed {Show(allowed[worst.Nearest])}");

        double Distance(int i, int j) => Complex.Abs(expected[i] - actual[j]);

        double Excess(int i, int j) => double.IsNaN(Distance(i, j)) ? double.PositiveInfinity : Distance(i, j) - allowed[j];

        int Nearest(int i) => Enumerable.Range(0, actual.Count).MinBy(j => Excess(i, j));

        // Augmenting paths in the graph of pairs that are near enough: greedy pairing would miss matchings that exist.
        bool TryPair(int i, bool[] seen)
        {
            for (int j = 0; j < actual.Count; j++)
            {
                if (seen[j] || !(Distance(i, j) <= allowed[j]))
                {
                    continue;
                }

                seen[j] = true;
                if (partner[j] < 0 || TryPair(partner[j], seen))
                {
                    partner[j] = i;
                    return true;
                }
            }

            return false;
        }
    }

    private static string Show(double value) => value.ToString("G17", CultureInfo.InvariantCulture);

    private static string Show(Complex value)
        => $"{Show(value.Real)} {(value.Imaginary < 0 ? "-" : "+")} {Show(Math.Abs(value.Imaginary))}i";
}
