using GainMargin.Numerics;
using Complex = System.Numerics.Complex;

namespace GainMargin;

/// <summary>
/// One loop as a sum of real terms, <c>1 + (g − g₀)·L(s) = 0</c> with <c>L = (p + v·s + a·s²)·β(s)</c>, in normalised time. From the modes where
/// the structure has modes of its own, otherwise from one decomposition at a base value <c>g₀</c> at which the poles are
/// well conditioned.
/// </summary>
internal sealed class LoopTerms
{
    /// <summary>Largest relative uncertainty of a pole that terms are made of.</summary>
    public const double TrustedPoles = 1e-6;

    private readonly LoopMode[] _modes;

    public LoopTerms(
        LoopTermsBuilder builder, double constant, FeedbackRatios law, double baseValue, double rate,
        LoopMode[] modes, bool ownModes, MirroredPole[]? mirrored)
    {
        Mirrored = mirrored ?? [];
        IsLossless = mirrored is not null;
        _modes = modes;
        builder.Finish(law);
        Pairs = builder.Pairs(constant);
        Secular = builder.Secular(constant, law);
        Law = law;
        BaseValue = baseValue;
        Rate = rate;
        FromModes = modes.Length > 0;
        IsOwnModes = ownModes;
        Poles = builder.Poles;
        Invisible = builder.Invisible;
        DoubleZero = law.Position * builder.DoubleZero;
        SimpleZero = (law.Position * builder.SimpleZero) + (law.Rate * builder.DoubleZero);
        int order = DoubleZero != 0 ? 2 : SimpleZero != 0 ? 1 : 0;
        HiddenZeros = (builder.DoubleZero != 0 ? 2 : builder.SimpleZero != 0 ? 1 : 0) - order;
        int zero = Enumerable.Range(0, Pairs.Count).Where(k => Pairs.CenterOf(k) == 0 && Pairs.SquareOf(k) == 0).DefaultIfEmpty(-1).First();
        var zeroPair = Pairs.Over(0, 0, 0, zero).Pair;
        AtZero = (law.Position * zeroPair.Real.Value) + (law.Rate * builder.SimpleZero) + (law.Acceleration * builder.DoubleZero);
        double slopeAtZero = (law.Position * zeroPair.Imaginary.Value) + (law.Rate * zeroPair.Real.Value) + (law.Acceleration * builder.SimpleZero);
        double slopeRounding = (Math.Abs(law.Position) * zeroPair.Imaginary.Rounding) + (Math.Abs(law.Rate) * zeroPair.Real.Rounding);
        SlopeAtZero = Math.Abs(slopeAtZero) <= slopeRounding ? 0 : slopeAtZero;
        ZeroRounding = zeroPair.Real.Rounding * Math.Abs(law.Position / AtZero);
        double[] inertia = [.. Enumerable.Range(0, Pairs.Count).Select(k => law.Acceleration * Pairs.NumeratorsOf(k).Real1)];
        double moduli = Math.Abs(law.Position * constant) + inertia.Sum(Math.Abs);
        double atInfinity = (law.Position * constant) - inertia.Sum();
        AtInfinity = Math.Abs(atInfinity) <= Tolerances.Entry * moduli ? 0 : atInfinity;
        InfinityRounding = Tolerances.Entry * moduli / Math.Abs(atInfinity);
    }

    public PairTerms Pairs { get; }

    public SecularTerms Secular { get; }

    public FeedbackRatios Law { get; }

    /// <summary>The base value <c>g₀</c>, in the unit of the path.</summary>
    public double BaseValue { get; }

    /// <summary>Physical root = rate × root of the terms.</summary>
    public double Rate { get; }

    /// <summary>Whether the terms are the structure's own modes, so that no decomposition of a state matrix was needed.</summary>
    public bool FromModes { get; }

    /// <summary>Whether these are the coordinates of the structure itself.</summary>
    public bool IsOwnModes { get; }

    /// <summary>Poles that the loop moves.</summary>
    public IReadOnlyList<LoopPole> Poles { get; }

    /// <summary>Poles that it does not: they stay at every gain.</summary>
    public IReadOnlyList<LoopPole> Invisible { get; }

    /// <summary>Coefficient of <c>1/s</c> of <c>L</c> at zero.</summary>
    public double SimpleZero { get; }

    /// <summary>Coefficient of <c>1/s²</c> of <c>L</c> at zero.</summary>
    public double DoubleZero { get; }

    /// <summary>Poles of <c>β</c> at zero that a zero of the law hides: they stay at every gain.</summary>
    public int HiddenZeros { get; }

    /// <summary><c>L</c> without its poles at zero, there.</summary>
    public double AtZero { get; }

    /// <summary><c>dL/ds</c> at zero, without its poles there; zero where rounding leaves its sign open.</summary>
    public double SlopeAtZero { get; }

    /// <summary>Relative rounding of <see cref="AtZero"/>.</summary>
    public double ZeroRounding { get; }

    /// <summary>Relative rounding of <see cref="AtInfinity"/>.</summary>
    public double InfinityRounding { get; }

    /// <summary><c>L</c> at infinity.</summary>
    public double AtInfinity { get; }

    /// <summary>Whether <c>L(s) = L(−s)</c>: the loop neither takes energy out nor puts any in.</summary>
    public bool IsLossless { get; }

    /// <summary>Terms in <c>z = −s²</c> of a lossless loop.</summary>
    public IReadOnlyList<MirroredPole> Mirrored { get; }

    /// <summary>
    /// How far an onset moves when each mode moves by its own rounding: with <c>L = q·Σf/(κ + d·s + s²)</c> the change of the gain is
    /// <c>−(δ/L)(Re dL + L_ω′dω)</c> and <c>dω</c> keeps the loop real. Symmetric structures keep their kind under rounding, so this
    /// bound stays small where damping vanishes.
    /// </summary>
    public double GainUncertainty(double omega, double delta)
    {
        var s = new Complex(0, omega);
        var law = Law.Position + (s * (Law.Rate + (s * Law.Acceleration)));
        var sum = Complex.Zero;
        var slope = Complex.Zero;
        foreach (var mode in _modes.Where(m => m.F != 0 || m.CouplingError != 0))
        {
            var inverse = 1 / (mode.Kappa + (s * (mode.D + s)));
            sum += mode.F * inverse;
            slope -= mode.F * inverse * inverse * (mode.D + (2 * s));
        }

        var byOmega = Complex.ImaginaryOne * ((law * slope) + ((Law.Rate + (2 * s * Law.Acceleration)) * sum));
        double loop = (law * sum).Real;
        double total = 0;
        foreach (var mode in _modes.Where(m => m.F != 0 || m.CouplingError != 0))
        {
            var inverse = 1 / (mode.Kappa + (s * (mode.D + s)));
            total += Math.Abs(mode.StiffnessError) * Moved(law * mode.F * inverse * inverse);
            total += Math.Abs(mode.DampingError) * omega * Moved(law * mode.F * inverse * inverse * Complex.ImaginaryOne);
            total += mode.CouplingError * Moved(law * inverse);
        }

        return Math.Abs(delta / loop) * total;

        double Moved(Complex change)
            => Math.Abs(change.Real - (byOmega.Imaginary == 0 ? 0 : byOmega.Real * change.Imaginary / byOmega.Imaginary));
    }

    public AxisFunction Function() => new(Pairs, new RatioFactor(Law.Position, Law.Rate, Law.Acceleration), []);
}
