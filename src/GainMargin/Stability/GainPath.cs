using System.Collections.Immutable;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// What is varied when a closed loop is screened, over which range; everything else stays as it is. Immutable.
/// </summary>
public abstract class GainPath
{
    private protected GainPath(ClosedLoop nominal, GainRange range)
    {
        Nominal = nominal;
        Range = range;
    }

    /// <summary>The closed loop at its release gains.</summary>
    public ClosedLoop Nominal { get; }

    /// <summary>The range screened.</summary>
    public GainRange Range { get; }

    /// <summary>The value that belongs to the release gains.</summary>
    public abstract double ReleaseValue { get; }

    /// <summary>Unit of the value as text, if it has one.</summary>
    public abstract string? Unit { get; }

    /// <summary>Names of the loops that move.</summary>
    public abstract ImmutableArray<string> MovingLoops { get; }

    /// <summary>One loop's gain, as typed into the drive; the other loops keep theirs.</summary>
    /// <param name="nominal">The closed loop at its release gains.</param>
    /// <param name="loop">Name of the loop to screen.</param>
    /// <param name="range">Range of its gain.</param>
    /// <exception cref="ArgumentException">There is no such loop, or the range is empty.</exception>
    public static GainPath OneLoop(ClosedLoop nominal, string loop, GainRange range)
    {
        Guard.NotNull(nominal);
        range.Check(nameof(range));
        nominal.Law.IndexOf(loop);
        return new OneLoopPath(nominal, loop, range);
    }

    /// <summary>Several loops' gains multiplied by one factor; 1 is the release setting.</summary>
    /// <param name="nominal">The closed loop at its release gains.</param>
    /// <param name="factor">Range of the factor.</param>
    /// <param name="loops">Names of the loops that move; none means all.</param>
    /// <exception cref="ArgumentException">There is no such loop, one is named twice, or the range is empty.</exception>
    public static GainPath CommonFactor(ClosedLoop nominal, GainRange factor, params ReadOnlySpan<string> loops)
    {
        Guard.NotNull(nominal);
        factor.Check(nameof(factor));
        var names = loops.IsEmpty ? nominal.Law.Loops.Select(l => l.Loop.Name).ToImmutableArray() : [.. loops];
        for (int i = 0; i < names.Length; i++)
        {
            nominal.Law.IndexOf(names[i]);
            if (names.IndexOf(names[i]) != i)
            {
                throw new ArgumentException($"Loop \"{names[i]}\" is named twice.", nameof(loops));
            }
        }

        return new CommonFactorPath(nominal, factor, names);
    }

    /// <summary>The closed loop at one value of the path.</summary>
    /// <param name="value">Gain or factor; it may lie outside the range.</param>
    /// <exception cref="ArgumentException">The value is not finite, or makes a closed-loop matrix overflow.</exception>
    public ClosedLoop At(double value) => ClosedLoop.Create(Nominal.Structure, LawAt(Guard.Finite(value)));

    /// <summary>What is varied, in words.</summary>
    public abstract override string ToString();

    /// <summary>The control law at one value.</summary>
    internal abstract ControlLaw LawAt(double value);

    /// <summary>
    /// Gain of each loop in model units as a polynomial of the value, coefficients ascending: in a cascade the product of
    /// two moving gains is of second degree.
    /// </summary>
    internal double[][] GainPolynomials()
    {
        var law = Nominal.Law;
        double[] Own(int k)
        {
            double held = law.Loops[k].DisplayScale * HeldShare(k);
            return MovingLoops.Contains(law.Loops[k].Loop.Name) ? [0, held] : [held];
        }

        var polynomials = new double[law.Loops.Length][];
        for (int k = 0; k < polynomials.Length; k++)
        {
            string? inner = law.InnerOf(law.Loops[k].Loop.Name);
            polynomials[k] = inner is null ? Own(k) : Product(Own(k), Own(law.IndexOf(inner)));
        }

        return polynomials;
    }

    /// <summary>Gain of loop <paramref name="k"/> per unit of the value, or its gain where it does not move.</summary>
    private protected abstract double HeldShare(int k);

    private static double[] Product(double[] a, double[] b)
    {
        double[] product = new double[a.Length + b.Length - 1];
        for (int i = 0; i < a.Length; i++)
        {
            for (int j = 0; j < b.Length; j++)
            {
                product[i + j] += a[i] * b[j];
            }
        }

        return product;
    }
}

internal sealed class OneLoopPath(ClosedLoop nominal, string loop, GainRange range) : GainPath(nominal, range)
{
    public override double ReleaseValue => Nominal.Law.GainOf(loop);

    public override string? Unit => Nominal.Law.Loops[Nominal.Law.IndexOf(loop)].GainUnit;

    public override ImmutableArray<string> MovingLoops => [loop];

    public override string ToString() => $"gain of loop \"{loop}\"";

    internal override ControlLaw LawAt(double value) => Nominal.Law.WithGain(loop, value);

    private protected override double HeldShare(int k)
        => Nominal.Law.Loops[k].Loop.Name == loop ? 1 : Nominal.Law.Loops[k].Gain;
}

internal sealed class CommonFactorPath(ClosedLoop nominal, GainRange range, ImmutableArray<string> loops) : GainPath(nominal, range)
{
    public override double ReleaseValue => 1;

    public override string? Unit => null;

    public override ImmutableArray<string> MovingLoops => loops;

    public override string ToString() => $"common factor on the gains of {string.Join(", ", loops.Select(l => $"\"{l}\""))}";

    internal override ControlLaw LawAt(double value)
        => loops.Aggregate(Nominal.Law, (law, loop) => law.WithGain(loop, Nominal.Law.GainOf(loop) * value));

    private protected override double HeldShare(int k) => Nominal.Law.Loops[k].Gain;
}
