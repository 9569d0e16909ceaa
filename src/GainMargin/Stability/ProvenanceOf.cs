using System.Globalization;
using System.Reflection;
using System.Runtime.InteropServices;
using System.Security.Cryptography;
using System.Text;

namespace GainMargin;

/// <summary>Hashes of inputs and options: equal bits, equal hash.</summary>
internal static class ProvenanceOf
{
    public static string LibraryVersion { get; } = Version();

    public static Provenance Sweep(GainPath path, SweepOptions options)
        => new(LibraryVersion, "sampled sweep", HashOf(w => Write(w, path)), HashOf(w => Write(w, options)),
            LinearAlgebraBackend.Current.Name, $"{RuntimeInformation.FrameworkDescription}, {RuntimeInformation.ProcessArchitecture}");

    private static string Version()
    {
        string full = typeof(ProvenanceOf).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "unknown";
        return full.Split('+')[0];
    }

    private static string HashOf(Action<BinaryWriter> write)
    {
        using var stream = new MemoryStream();
        using (var writer = new BinaryWriter(stream, Encoding.UTF8, leaveOpen: true))
        {
            write(writer);
        }

        return Convert.ToHexStringLower(SHA256.HashData(stream.ToArray()));
    }

    private static void Write(BinaryWriter to, GainPath path)
    {
        var structure = path.Nominal.Structure;
        Write(to, structure.Mass);
        Write(to, structure.Damping);
        Write(to, structure.Stiffness);
        Write(to, structure.Shapes);
        Write(to, structure.ResidualFlexibility);
        foreach (var setting in path.Nominal.Law.Loops)
        {
            var loop = setting.Loop;
            to.Write(loop.Name);
            Write(to, [loop.Ratios.Position, loop.Ratios.Rate, loop.Ratios.Acceleration, setting.Gain, setting.DisplayScale]);
            to.Write(path.Nominal.Law.InnerOf(loop.Name) ?? "");
            foreach (var (point, weight) in loop.Sensor.Weights.Concat(loop.Actuator.Weights))
            {
                to.Write(point);
                Write(to, [weight]);
            }

            to.Write(loop.Sensor.Weights.Length.ToString(CultureInfo.InvariantCulture));
        }

        to.Write(path.ToString());
        Write(to, [path.Range.From, path.Range.To]);
    }

    private static void Write(BinaryWriter to, SweepOptions options)
    {
        Write(to, [options.MaximumStep, options.MinimumStep, options.MaximumDecompositions]);
        to.Write(options.KeepLoci);
    }

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
        Write(to, values);
    }

    // A negative zero is the same input as zero.
    private static void Write(BinaryWriter to, ReadOnlySpan<double> values)
    {
        foreach (double value in values)
        {
            to.Write(value == 0 ? 0.0 : value);
        }
    }
}
