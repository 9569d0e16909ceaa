using System.Collections.Immutable;
using System.Globalization;
using System.Numerics;

namespace GainMargin;

/// <summary>A complex vector over named degrees of freedom, such as a mode. Immutable.</summary>
public sealed class NamedVector
{
    internal NamedVector(DofNames dofs, ImmutableArray<Complex> values)
    {
        Dofs = dofs;
        Values = values;
    }

    /// <summary>Names of the degrees of freedom.</summary>
    public DofNames Dofs { get; }

    /// <summary>The components in the order of <see cref="Dofs"/>.</summary>
    public ImmutableArray<Complex> Values { get; }

    /// <summary>Component by name.</summary>
    /// <param name="dof">Name of the degree of freedom.</param>
    /// <exception cref="ArgumentException">There is no such degree of freedom.</exception>
    public Complex this[string dof] => Values[Dofs.IndexOf(dof)];

    /// <summary>The largest components with modulus and phase in degrees, up to eight.</summary>
    public override string ToString()
    {
        double largest = Values.Select(Complex.Abs).DefaultIfEmpty(0).Max();
        var shown = Enumerable.Range(0, Dofs.Count)
            .Where(i => Complex.Abs(Values[i]) >= 1e-6 * largest)
            .OrderByDescending(i => Complex.Abs(Values[i])).ThenBy(i => i)
            .Take(8).ToList();
        string text = string.Join(", ", shown.Select(i => Component(Dofs[i], Values[i])));
        return shown.Count < Dofs.Count ? text + ", …" : text;
    }

    /// <summary>Scaled so that the component of largest modulus is one.</summary>
    internal static NamedVector Scaled(DofNames dofs, ReadOnlySpan<Complex> values)
    {
        int pivot = 0;
        double largest = 0;
        for (int i = 0; i < values.Length; i++)
        {
            double modulus = Complex.Abs(values[i]);
            if (modulus > largest * (1 + 1e-9))
            {
                largest = modulus;
                pivot = i;
            }
        }

        var scaled = ImmutableArray.CreateBuilder<Complex>(values.Length);
        for (int i = 0; i < values.Length; i++)
        {
            scaled.Add(largest == 0 ? values[i] : i == pivot ? Complex.One : values[i] / values[pivot]);
        }

        return new NamedVector(dofs, scaled.MoveToImmutable());
    }

    private static string Component(string dof, Complex value)
    {
        string modulus = Complex.Abs(value).ToString("G4", CultureInfo.InvariantCulture);
        double degrees = value.Phase * 180 / Math.PI;
        return Math.Abs(degrees) < 0.05 ? $"{dof} {modulus}" : $"{dof} {modulus}∠{degrees.ToString("0.0", CultureInfo.InvariantCulture)}°";
    }
}
