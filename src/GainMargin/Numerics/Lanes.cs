namespace GainMargin.Numerics;

/// <summary>Flat arrays that are read four doubles at a time, filled up with places so far away that their share vanishes.</summary>
internal static class Lanes
{
    public const int Width = 4;

    /// <summary>Place whose squared distance from anything overflows, so that its reciprocal is zero.</summary>
    public const double FarSingle = 1e160;

    /// <summary>The same for two poles or a conjugate pair, whose product of distances is squared.</summary>
    public const double FarPair = 1e100;

    /// <summary>Number of vectors that hold <paramref name="count"/> doubles.</summary>
    public static int Vectors(int count) => (count + Width - 1) / Width;

    /// <summary>Writes the fields of item <paramref name="k"/> into vectors that alternate field by field.</summary>
    public static void Put(Span<double> vectors, int k, ReadOnlySpan<double> fields)
    {
        int at = ((k / Width) * fields.Length * Width) + (k % Width);
        foreach (double field in fields)
        {
            vectors[at] = field;
            at += Width;
        }
    }
}
