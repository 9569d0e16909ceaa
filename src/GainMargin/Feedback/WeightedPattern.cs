using System.Collections.Immutable;
using System.Globalization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Weights over named points, checked: at least one that is not zero, all finite, no name twice.</summary>
internal static class WeightedPattern
{
    public static ImmutableArray<PatternWeight> Checked(string what, ReadOnlySpan<PatternWeight> weights)
    {
        var kept = ImmutableArray.CreateBuilder<PatternWeight>(weights.Length);
        foreach (var weight in weights)
        {
            Guard.Name(weight.Point, nameof(weights));
            if (!double.IsFinite(weight.Weight))
            {
                throw new ArgumentException($"The {what} weight at \"{weight.Point}\" is {Guard.Show(weight.Weight)}; it must be finite.", nameof(weights));
            }

            if (kept.Any(k => k.Point == weight.Point))
            {
                throw new ArgumentException($"The {what} names \"{weight.Point}\" twice.", nameof(weights));
            }

            kept.Add(weight);
        }

        return kept.Any(k => k.Weight != 0)
            ? kept.ToImmutable()
            : throw new ArgumentException($"The {what} has no weight that is not zero.", nameof(weights));
    }

    public static ImmutableArray<PatternWeight> Difference(string what, string plus, string minus, string parameter)
        => plus != minus
            ? [new(plus, 1), new(minus, -1)]
            : throw new ArgumentException($"The {what} takes \"{plus}\" against itself, which is zero.", parameter);

    /// <summary>Whether <paramref name="a"/> is a positive multiple of <paramref name="b"/>.</summary>
    public static bool ArePositiveMultiples(ImmutableArray<PatternWeight> a, ImmutableArray<PatternWeight> b)
    {
        var left = a.Where(w => w.Weight != 0).OrderBy(w => w.Point, StringComparer.Ordinal).ToArray();
        var right = b.Where(w => w.Weight != 0).OrderBy(w => w.Point, StringComparer.Ordinal).ToArray();
        if (left.Length != right.Length || !left.Select(w => w.Point).SequenceEqual(right.Select(w => w.Point)))
        {
            return false;
        }

        double ratio = left[0].Weight / right[0].Weight;
        return ratio > 0 && left.Zip(right).All(p => Math.Abs(p.First.Weight - (ratio * p.Second.Weight)) <= 4 * Tolerances.Epsilon * Math.Abs(p.First.Weight));
    }

    public static double[] OnCoordinates(ImmutableArray<PatternWeight> weights, ElasticStructure structure, string what)
    {
        double[] sum = new double[structure.Dofs.Count];
        foreach (var weight in weights)
        {
            if (!structure.Points.TryGetIndex(weight.Point, out _))
            {
                throw new ArgumentException($"The {what} is at \"{weight.Point}\", which the structure does not have; it has {structure.Points}.", nameof(structure));
            }

            double[] row = structure.RowAt(weight.Point);
            for (int j = 0; j < sum.Length; j++)
            {
                sum[j] += weight.Weight * row[j];
            }
        }

        return sum;
    }

    public static string Show(ImmutableArray<PatternWeight> weights)
        => string.Join(" ", weights.Select((w, i) => Term(w, i == 0)));

    private static string Term(PatternWeight w, bool first)
    {
        string sign = w.Weight < 0 ? (first ? "-" : "- ") : (first ? "" : "+ ");
        double size = Math.Abs(w.Weight);
        return size == 1 ? sign + w.Point : $"{sign}{size.ToString("G6", CultureInfo.InvariantCulture)}·{w.Point}";
    }
}
