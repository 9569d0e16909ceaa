using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Hash of everything that a structure is made of, but for the labels of its units.</summary>
internal static class StructureHash
{
    public static byte[] Of(ElasticStructure structure) => Hashing.Of(to =>
    {
        foreach (var matrix in new[] { structure.Mass, structure.Damping, structure.Stiffness, structure.Shapes, structure.ResidualFlexibility })
        {
            Write(to, matrix);
        }
    });

    private static void Write(BinaryWriter to, NamedMatrix? matrix)
    {
        to.Write(matrix is not null);
        if (matrix is null)
        {
            return;
        }

        foreach (string name in matrix.Rows.Concat(matrix.Columns))
        {
            to.Write(name);
        }

        double[] values = new double[matrix.Rows.Count * matrix.Columns.Count];
        matrix.CopyRowMajorTo(values);
        to.Write(Hashing.Bytes(values));
    }
}
