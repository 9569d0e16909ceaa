using System.Runtime.InteropServices;
using System.Security.Cryptography;
using System.Text;

namespace GainMargin.Numerics;

/// <summary>Hashes of inputs: equal bits, equal hash.</summary>
internal static class Hashing
{
    public static byte[] Of(Action<BinaryWriter> write)
    {
        using var stream = new MemoryStream();
        using (var writer = new BinaryWriter(stream, Encoding.UTF8, leaveOpen: true))
        {
            write(writer);
        }

        return SHA256.HashData(stream.GetBuffer().AsSpan(0, (int)stream.Length));
    }

    /// <summary>The values as bytes; a negative zero is the same input as zero.</summary>
    public static byte[] Bytes(ReadOnlySpan<double> values)
    {
        double[] plain = values.ToArray();
        for (int i = 0; i < plain.Length; i++)
        {
            plain[i] += 0.0;
        }

        return MemoryMarshal.AsBytes(plain.AsSpan()).ToArray();
    }
}
