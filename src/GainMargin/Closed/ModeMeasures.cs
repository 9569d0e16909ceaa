using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Measures of a mode that several results carry.</summary>
internal static class ModeMeasures
{
    public static double BackwardError(QuadraticPencil pencil, Complex s, Complex[] v)
    {
        double size = Complex.Abs(s);
        double scale = ((size * size * Dense.Norm(pencil.Mass)) + (size * Dense.Norm(pencil.Damping)) + Dense.Norm(pencil.Stiffness)) * Dense.Norm2(v);
        return scale == 0 ? 0 : Dense.Norm2(pencil.Times(s, v)) / scale;
    }
}
