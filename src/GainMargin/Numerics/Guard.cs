using System.Diagnostics.CodeAnalysis;
using System.Globalization;
using System.Runtime.CompilerServices;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin.Numerics;

/// <summary>The one place where caller errors are turned into exceptions that name the culprit.</summary>
internal static class Guard
{
    public static T NotNull<T>([NotNull] T? value, [CallerArgumentExpression(nameof(value))] string? parameter = null)
        where T : class
    {
        ArgumentNullException.ThrowIfNull(value, parameter);
        return value;
    }

    public static string Name(string? value, [CallerArgumentExpression(nameof(value))] string? parameter = null)
    {
        ArgumentException.ThrowIfNullOrWhiteSpace(value, parameter);
        return value;
    }

    public static double Finite(double value, [CallerArgumentExpression(nameof(value))] string? parameter = null)
        => double.IsFinite(value)
            ? value
            : throw new ArgumentOutOfRangeException(parameter, value, Invariant($"{parameter} is {Show(value)}; it must be finite."));

    public static double NotNegative(double value, [CallerArgumentExpression(nameof(value))] string? parameter = null)
        => Finite(value, parameter) >= 0
            ? value
            : throw new ArgumentOutOfRangeException(parameter, value, Invariant($"{parameter} is {Show(value)}; it must not be negative."));

    public static double InRange(
        double value, double above, double atMost, [CallerArgumentExpression(nameof(value))] string? parameter = null)
        => value > above && value <= atMost
            ? value
            : throw new ArgumentOutOfRangeException(
                parameter, value, Invariant($"{parameter} is {Show(value)}; it must be above {above:R} and at most {atMost:R}."));

    public static int AtLeast(int value, int least, [CallerArgumentExpression(nameof(value))] string? parameter = null)
        => value >= least
            ? value
            : throw new ArgumentOutOfRangeException(parameter, value, Invariant($"{parameter} is {value}; it must be at least {least}."));

    /// <summary>Checks size and entries of a matrix given by the caller; <paramref name="what"/> is its name in the message.</summary>
    public static void Matrix(Matrix<double> matrix, IReadOnlyList<string> rows, IReadOnlyList<string> columns, string what, string parameter)
    {
        if (matrix is null)
        {
            throw new ArgumentNullException(parameter, $"{what} is null.");
        }

        if (matrix.RowCount != rows.Count || matrix.ColumnCount != columns.Count)
        {
            throw new ArgumentException(
                Invariant($"{what} is {matrix.RowCount}×{matrix.ColumnCount}; {rows.Count}×{columns.Count} was expected."), parameter);
        }

        for (int i = 0; i < rows.Count; i++)
        {
            for (int j = 0; j < columns.Count; j++)
            {
                if (!double.IsFinite(matrix[i, j]))
                {
                    throw new ArgumentException($"{Entry(what, rows[i], columns[j])} is {Show(matrix[i, j])}; it must be finite.", parameter);
                }
            }
        }
    }

    public static string Count(int number, string one, string many) => Invariant($"{number} {(number == 1 ? one : many)}");

    public static string Entry(string matrix, string row, string column) => $"{matrix}[\"{row}\", \"{column}\"]";

    public static string Invariant(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);

    public static string Show(double value) => value switch
    {
        double.PositiveInfinity => "+infinity",
        double.NegativeInfinity => "-infinity",
        _ when double.IsNaN(value) => "NaN",
        _ => value.ToString("R", CultureInfo.InvariantCulture),
    };
}
