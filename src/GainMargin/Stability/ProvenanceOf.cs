using System.Globalization;
using System.Reflection;
using System.Runtime.InteropServices;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Hashes of inputs and options: equal bits, equal hash.</summary>
internal static class ProvenanceOf
{
    public static string LibraryVersion { get; } = Version();

    public static Provenance Sweep(GainPath path, SweepOptions options) => Of("sampled sweep", path, w => Write(w, options));

    /// <summary>A sweep in place of the search that the options were made for.</summary>
    public static Provenance Sweep(GainPath path, OnsetOptions options) => Of("sampled sweep", path, w => Write(w, options));

    public static Provenance OneLoop(GainPath path, OnsetOptions options) => Of("complete search of one loop", path, w => Write(w, options));

    private static Provenance Of(string method, GainPath path, Action<BinaryWriter> options)
        => new(LibraryVersion, method, HashOf(w => Write(w, path)), HashOf(options),
            LinearAlgebraBackend.Current.Name, $"{RuntimeInformation.FrameworkDescription}, {RuntimeInformation.ProcessArchitecture}");

    private static string Version()
    {
        string full = typeof(ProvenanceOf).Assembly.GetCustomAttribute<AssemblyInformationalVersionAttribute>()?.InformationalVersion ?? "unknown";
        return full.Split('+')[0];
    }

    private static string HashOf(Action<BinaryWriter> write)
    {
        return Convert.ToHexStringLower(Hashing.Of(write));
    }

    private static void Write(BinaryWriter to, GainPath path)
    {
        to.Write(path.Nominal.Structure.Hash);
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

    private static void Write(BinaryWriter to, OnsetOptions options)
    {
        Write(to, [options.DecayRate, options.MaximumEvaluations]);
        to.Write(options.Confirm);
        to.Write(options.Extremes);
        Write(to, options.Sweep);
    }

    private static void Write(BinaryWriter to, SweepOptions options)
    {
        Write(to, [options.MaximumStep, options.MinimumStep, options.MaximumDecompositions]);
        to.Write(options.KeepLoci);
    }

    private static void Write(BinaryWriter to, ReadOnlySpan<double> values) => to.Write(Hashing.Bytes(values));
}
