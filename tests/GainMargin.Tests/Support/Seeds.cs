using System.Globalization;

namespace GainMargin.Tests.Support;

/// <summary>How many random cases a test runs; the environment variable GAINMARGIN_SEEDS asks for a longer run.</summary>
internal static class Seeds
{
    public static int Count(int usual)
        => int.TryParse(Environment.GetEnvironmentVariable("GAINMARGIN_SEEDS"), NumberStyles.None, CultureInfo.InvariantCulture, out int asked) ? asked : usual;
}
