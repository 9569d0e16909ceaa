namespace GainMargin.Numerics;

/// <summary>
/// The ratios of a law, <c>p + v·s + a·s²</c>, as the pair <c>(p − a·z, v)</c>.
/// </summary>
internal sealed class RatioFactor(double position, double rate, double acceleration) : IPairFactor
{
    public double Position => position;

    public double Rate => rate;

    public double Acceleration => acceleration;

    public RealPair Over(double z, double radius)
        => new(Bounded.Linear(position, -acceleration, z, radius), Bounded.Linear(rate, 0, z, radius));

    public (double Real, double Imaginary) Expand(double z, double radius, Span<double> real, Span<double> imaginary)
    {
        real.Clear();
        imaginary.Clear();
        (real[0], real[1], imaginary[0]) = (position - (acceleration * z), -acceleration, rate);
        return (0, 0);
    }

    public double GreatestBeyond(double z)
        => acceleration != 0 || rate != 0 ? double.PositiveInfinity : Math.Abs(position);
}
