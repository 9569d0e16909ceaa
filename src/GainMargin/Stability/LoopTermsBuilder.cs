using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>Collects the terms of a loop, real and complex poles each in the form that keeps its digits.</summary>
internal sealed class LoopTermsBuilder
{
    /// <summary>Real poles whose moduli are nearer than this ratio are kept in one term: their residues cancel.</summary>
    private const double NearlyEqual = 2;

    /// <summary>Relative distance in <c>z</c> below which two poles are close.</summary>
    private const double Close = 1e-4;

    private readonly List<PairTerm> _pairs = [];
    private readonly List<(double E, double F, double D, double Kappa)> _second = [];
    private readonly List<(double Root, double Residue)> _first = [];
    private readonly List<LoopPole> _poles = [];
    private readonly List<LoopPole> _invisible = [];

    private int _zeroRoots;
    private double _zeroError;

    /// <summary>Coefficient of <c>1/s</c> at zero.</summary>
    public double SimpleZero { get; private set; }

    /// <summary>Coefficient of <c>1/s²</c> at zero.</summary>
    public double DoubleZero { get; private set; }

    public IReadOnlyList<LoopPole> Poles => _poles;

    public IReadOnlyList<LoopPole> Invisible => _invisible;

    /// <summary>A mode of its own, <c>f/(s² + d·s + κ)</c>, exact but for the rounding of the matrices.</summary>
    public void AddMode(double f, double d, double kappa)
    {
        if (f == 0)
        {
            AddHidden(d, kappa, 0);
            return;
        }

        if (kappa == 0)
        {
            AddZeroRoots(d == 0 ? 2 : 1, d == 0 ? 0 : f / d, d == 0 ? f : 0);
            if (d != 0)
            {
                _poles.Add(new LoopPole(-d, 0, false));
                AddFirst(-f / d, -d, 0);
            }

            return;
        }

        var poles = PolesOf(d, kappa);
        _poles.AddRange(poles.Select(p => p with { Coupling = f }));
        if (poles.Count == 1 || IsNear(poles[0].Value.Real, poles[1].Value.Real))
        {
            _pairs.Add(PairTerm.Second(0, f, d, kappa, 0));
            _second.Add((0, f, d, kappa));
        }
        else
        {
            double residue = f / (poles[0].Value.Real - poles[1].Value.Real);
            AddFirst(residue, poles[0].Value.Real, 0);
            AddFirst(-residue, poles[1].Value.Real, 0);
        }
    }

    /// <summary>A conjugate pair or, with a real pole, one pole; residues as they are.</summary>
    public void AddPole(Complex residue, Complex pole, double uncertainty, double residueError = 0)
    {
        _poles.Add(new LoopPole(pole, uncertainty, false));
        if (pole.Imaginary == 0)
        {
            AddFirst(residue.Real, pole.Real, uncertainty, residueError);
            return;
        }

        _pairs.Add(PairTerm.Pair(residue, pole, uncertainty) with { ResidueError = residueError });
        double modulus = Complex.Abs(pole);
        _second.Add((2 * residue.Real, -2 * (residue * Complex.Conjugate(pole)).Real, -2 * pole.Real, modulus * modulus));
    }

    /// <summary>Two nearly equal real poles in one term.</summary>
    public void AddNearPair(double residue1, double pole1, double residue2, double pole2, double uncertainty, double residueError)
    {
        _poles.Add(new LoopPole(pole1, uncertainty, false));
        _poles.Add(new LoopPole(pole2, uncertainty, false));
        double e = residue1 + residue2;
        double f = -((residue1 * pole2) + (residue2 * pole1));
        double d = -(pole1 + pole2);
        double kappa = pole1 * pole2;
        _pairs.Add(PairTerm.Second(e, f, d, kappa, uncertainty) with { ResidueError = residueError });
        _second.Add((e, f, d, kappa));
    }

    /// <summary>Zero roots of rigid motion, of which the loop sees <c>A/s + B/s²</c>.</summary>
    /// <param name="count">How many there are.</param>
    /// <param name="simple"><c>A</c>.</param>
    /// <param name="twice"><c>B</c>.</param>
    /// <param name="error">Relative error of both.</param>
    public void AddZeroRoots(int count, double simple, double twice, double error = 0)
    {
        _zeroError = Math.Max(_zeroError, error);
        _zeroRoots += count;
        SimpleZero += simple;
        DoubleZero += twice;
    }

    /// <summary>Sorts the zero roots into those that the loop moves, the order of <c>L</c>'s pole there, and those that stay.</summary>
    public void Finish(FeedbackRatios law)
    {
        int visible = law.Position * DoubleZero != 0 ? 2 : (law.Position * SimpleZero) + (law.Rate * DoubleZero) != 0 ? 1 : 0;
        for (int k = 0; k < _zeroRoots; k++)
        {
            (k < visible ? _poles : _invisible).Add(new LoopPole(0, 0, true));
        }

        if (DoubleZero != 0)
        {
            _pairs.Add(PairTerm.Second(SimpleZero, DoubleZero, 0, 0, 0) with { ResidueError = _zeroError * Math.Abs(SimpleZero) });
            _second.Add((SimpleZero, DoubleZero, 0, 0));
        }
        else if (SimpleZero != 0)
        {
            AddFirst(SimpleZero, 0, 0, _zeroError * Math.Abs(SimpleZero));
        }
    }

    /// <summary>
    /// A mode that the loop does not see, or not beyond rounding: <paramref name="kappaUncertainty"/> is how far its <c>κ</c> may be moved.
    /// Where that may take an undamped mode off the axis, its side is open.
    /// </summary>
    public void AddHidden(double d, double kappa, double kappaUncertainty)
    {
        if (kappa == 0 && kappaUncertainty == 0)
        {
            AddZeroRoots(d == 0 ? 2 : 1, 0, 0);
            if (d != 0)
            {
                _invisible.Add(new LoopPole(-d, 0, false));
            }

            return;
        }

        foreach (var pole in PolesOf(d, kappa))
        {
            double size = Math.Max(Complex.Abs(pole.Value), Math.Sqrt(kappaUncertainty));
            double uncertainty = size == 0 ? 0 : kappaUncertainty / size;
            _invisible.Add(pole with { Uncertainty = uncertainty, IsOnAxis = pole.IsOnAxis && kappaUncertainty == 0 });
        }
    }

    public void AddInvisible(LoopPole pole) => _invisible.Add(pole);

    public static bool IsNear(double a, double b)
        => Math.Max(Math.Abs(a), Math.Abs(b)) < NearlyEqual * Math.Min(Math.Abs(a), Math.Abs(b));

    /// <summary>
    /// The terms for a search. Where two lie close together, what they differ by is small against their places, whose rounding
    /// then counts.
    /// </summary>
    public PairTerms Pairs(double constant)
    {
        var sorted = _pairs.OrderBy(t => t.Center).ToArray();
        bool AreClose(int i, int j) => j >= 0 && j < sorted.Length && Math.Abs(sorted[i].Center - sorted[j].Center) <= Close * Math.Abs(sorted[i].Center);
        return PairTerms.Of(sorted.Select((t, i) => AreClose(i, i - 1) || AreClose(i, i + 1) ? t.Blurred() : t), constant);
    }

    public SecularTerms Secular(double constant, FeedbackRatios law) => new(
        [.. _second.Select(t => t.E)], [.. _second.Select(t => t.F)], [.. _second.Select(t => t.D)], [.. _second.Select(t => t.Kappa)],
        [.. _first.Select(t => t.Root)], [.. _first.Select(t => t.Residue)], constant, law.Position, law.Rate, law.Acceleration);

    private static List<LoopPole> PolesOf(double d, double kappa)
    {
        double discriminant = (0.25 * d * d) - kappa;
        if (discriminant < 0)
        {
            return [new LoopPole(new Complex(-0.5 * d, Math.Sqrt(-discriminant)), 0, d == 0)];
        }

        double far = -0.5 * d - (d < 0 ? -Math.Sqrt(discriminant) : Math.Sqrt(discriminant));
        double near = far == 0 ? 0 : kappa / far;
        return [new LoopPole(far, 0, far == 0), new LoopPole(near, 0, near == 0)];
    }

    private void AddFirst(double residue, double pole, double uncertainty, double residueError = 0)
    {
        _pairs.Add(PairTerm.First(residue, pole, uncertainty) with { ResidueError = residueError });
        _first.Add((pole, residue));
    }
}
