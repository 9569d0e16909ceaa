using System.Globalization;
using System.Text;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>A real matrix whose rows and columns carry names. Immutable.</summary>
public sealed class NamedMatrix
{
    private readonly Matrix<double> _values;

    internal NamedMatrix(DofNames rows, DofNames columns, Matrix<double> values)
    {
        Rows = rows;
        Columns = columns;
        _values = values;
    }

    /// <summary>Names of the rows.</summary>
    public DofNames Rows { get; }

    /// <summary>Names of the columns.</summary>
    public DofNames Columns { get; }

    /// <summary>Entry by names.</summary>
    /// <param name="row">Name of the row.</param>
    /// <param name="column">Name of the column.</param>
    /// <exception cref="ArgumentException">There is no such row or column.</exception>
    public double this[string row, string column] => _values[Rows.IndexOf(row), Columns.IndexOf(column)];

    /// <summary>Entry by positions from zero.</summary>
    /// <param name="row">Position of the row.</param>
    /// <param name="column">Position of the column.</param>
    public double this[int row, int column] => _values[row, column];

    /// <summary>Copies the entries row by row.</summary>
    /// <param name="destination">At least <c>Rows.Count × Columns.Count</c> long.</param>
    /// <exception cref="ArgumentException">The destination is too short.</exception>
    public void CopyRowMajorTo(Span<double> destination)
    {
        if (destination.Length < Rows.Count * Columns.Count)
        {
            throw new ArgumentException(
                Guard.Invariant($"The destination holds {destination.Length} values; {Rows.Count * Columns.Count} are needed."), nameof(destination));
        }

        for (int i = 0, k = 0; i < Rows.Count; i++)
        {
            for (int j = 0; j < Columns.Count; j++, k++)
            {
                destination[k] = _values[i, j];
            }
        }
    }

    /// <summary>A fresh copy as a matrix of Math.NET Numerics.</summary>
    public Matrix<double> ToMatrix() => _values.Clone();

    /// <summary>The entries with their names, for reading; large matrices are cut to twelve rows and columns.</summary>
    public override string ToString()
    {
        const int most = 12;
        int rows = Math.Min(most, Rows.Count);
        int columns = Math.Min(most, Columns.Count);
        int label = Enumerable.Range(0, rows).Select(i => Rows[i].Length).DefaultIfEmpty(0).Max();
        int width = Enumerable.Range(0, columns).Select(j => Columns[j].Length).DefaultIfEmpty(0).Append(13).Max();
        var text = new StringBuilder().Append(' ', label);
        for (int j = 0; j < columns; j++)
        {
            text.Append("  ").Append(Columns[j].PadLeft(width));
        }

        for (int i = 0; i < rows; i++)
        {
            text.Append('\n').Append(Rows[i].PadRight(label));
            for (int j = 0; j < columns; j++)
            {
                text.Append("  ").Append(_values[i, j].ToString("G6", CultureInfo.InvariantCulture).PadLeft(width));
            }
        }

        if (rows < Rows.Count || columns < Columns.Count)
        {
            text.Append(CultureInfo.InvariantCulture, $"\n({Rows.Count}×{Columns.Count}, cut)");
        }

        return text.ToString();
    }

    internal Matrix<double> Values => _values;
}
