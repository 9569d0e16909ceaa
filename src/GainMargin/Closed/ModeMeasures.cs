using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Measures of a mode that several results carry.</summary>
internal static class ModeMeasures
{
    public static double BackwardError(QuadraticPencil pencil, Complex s, Complex[] v)
    {
        double size = Complex.Abs(s);
        double scale = ((size * size * pencil.Mass.FrobeniusNorm()) + (size * pencil.Damping.FrobeniusNorm()) + pencil.Stiffness.FrobeniusNorm()) * Dense.Norm2(v);
        return scale == 0 ? 0 : Dense.Norm2(pencil.Times(s, v)) / scale;
    }
}
