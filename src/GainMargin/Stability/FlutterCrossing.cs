using System.Numerics;

namespace GainMargin;

/// <summary>A complex pair on the imaginary axis, in normalised time and evenly scaled coordinates.</summary>
/// <param name="Gain">Value of the path.</param>
/// <param name="Uncertainty">Its rounding bound.</param>
/// <param name="Omega">Frequency.</param>
/// <param name="Slope">Derivative of the root.</param>
/// <param name="Right">Right null vector.</param>
/// <param name="Left">Left null vector.</param>
/// <param name="Touches">Whether the pair reaches the axis and turns back.</param>
internal sealed record FlutterCrossing(double Gain, double Uncertainty, double Omega, Complex Slope, Complex[] Right, Complex[] Left, bool Touches);
