using MathNet.Numerics;
using MathNet.Numerics.Providers.LinearAlgebra;

namespace GainMargin;

/// <summary>
/// Which linear algebra does the work. The library runs in managed code unless the process was told otherwise; the
/// setting is process-wide, as it is in Math.NET Numerics, so the library never changes it by itself.
/// </summary>
public static class LinearAlgebraBackend
{
    /// <summary>The backend in use now.</summary>
    public static BackendReport Current
    {
        get
        {
            string name = LinearAlgebraControl.Provider.ToString() ?? "unknown";
            return new BackendReport(name, !name.StartsWith("Managed", StringComparison.OrdinalIgnoreCase));
        }
    }

    /// <summary>
    /// Tries to switch the whole process to the OpenBLAS provider of Math.NET Numerics. Without its native library
    /// nothing changes. Call it once at start-up: results computed before and after agree to rounding, not bit for bit.
    /// </summary>
    /// <returns>The backend in use after the attempt.</returns>
    public static BackendReport TryUseNative()
    {
        _ = Control.TryUseNativeOpenBLAS();
        return Current;
    }
}

/// <summary>A linear-algebra backend.</summary>
/// <param name="Name">Its own description.</param>
/// <param name="IsNative">Whether it runs in a native library.</param>
public sealed record BackendReport(string Name, bool IsNative);
