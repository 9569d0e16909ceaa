using System.Collections.Immutable;
using System.Numerics;

namespace GainMargin;

/// <summary>
/// Evidence of an onset of a structure with modes of its own, by modal sums: with <c>Q₀(s)</c> diagonal the right mode is
/// <c>Q₀(s)⁻¹b</c>, the left one <c>Q₀(s)⁻ᴴs</c>.
/// </summary>
internal sealed class ModalEvidence
{
    private readonly GainPath _path;
    private readonly LoopTerms _terms;
    private readonly bool _decays;
    private readonly int _loop;
    private readonly double _scale;
    private readonly double _residual;
    private readonly FeedbackRatios _ratios;
    private readonly double[] _mass, _damping, _stiffness, _drive, _sense;

    public ModalEvidence(GainPath path, LoopedPencil pencil, LoopTerms terms, int loop, double scale, bool decays)
    {
        _path = path;
        _terms = terms;
        _loop = loop;
        _scale = scale;
        _decays = decays;
        _ratios = pencil.Ratios[loop];
        _residual = pencil.Residual?[loop, loop] ?? 0;
        _mass = [.. pencil.Open.Mass.Diagonal()];
        _damping = [.. pencil.Open.Damping.Diagonal()];
        _stiffness = [.. pencil.Open.Stiffness.Diagonal()];
        _drive = [.. pencil.Drive.Column(loop)];
        _sense = [.. pencil.Sense.Column(loop)];
    }

    public OnsetDraft OfFlutter(double value, double uncertainty, double omega, double? slope)
        => Draft(value, uncertainty, OnsetKind.Flutter, omega, slope);

    public OnsetDraft OfCoalescence(double value, double uncertainty, double omega)
        => Draft(value, uncertainty, OnsetKind.LosslessCoalescence, omega, null);

    public OnsetDraft OfDivergence(double value, double uncertainty, double? slope)
        => Draft(value, uncertainty, OnsetKind.Divergence, 0, slope);

    public OnsetDraft OfInfinity(double value, double uncertainty)
    {
        var mode = NamedVector.Scaled(_path.Nominal.Structure.Dofs, [.. _drive.Select((b, i) => new Complex(b / _mass[i], 0))]);
        var left = NamedVector.Scaled(_path.Nominal.Structure.Dofs, [.. _sense.Select((s, i) => new Complex(s / _mass[i], 0))]);
        return new OnsetDraft(value, uncertainty, OnsetKind.ThroughInfinity, Frequency.Unlimited, null, 0, mode, left, null);
    }

    private OnsetDraft Draft(double value, double uncertainty, OnsetKind kind, double normalised, double? slope)
    {
        double omega = normalised * _terms.Rate;
        var s = new Complex(0, omega);
        int n = _mass.Length;
        var right = new Complex[n];
        var left = new Complex[n];
        for (int i = 0; i < n; i++)
        {
            var open = _stiffness[i] + (s * (_damping[i] + (s * _mass[i])));
            right[i] = _drive[i] == 0 ? 0 : _drive[i] / open;
            left[i] = _sense[i] == 0 ? 0 : Complex.Conjugate(_sense[i] / open);
        }

        if (!right.Concat(left).All(x => double.IsFinite(x.Real) && double.IsFinite(x.Imaginary)))
        {
            (right, left) = (AtPole(omega, _drive), AtPole(omega, _sense));
        }

        var mode = NamedVector.Scaled(_path.Nominal.Structure.Dofs, right);
        var energy = kind == OnsetKind.Flutter && !_decays ? Energy(value, omega, [.. mode.Values]) : null;
        return new OnsetDraft(
            value, uncertainty, kind, Frequency.Of(omega), slope * _terms.Rate, BackwardError(value, s, [.. mode.Values]), mode,
            NamedVector.Scaled(_path.Nominal.Structure.Dofs, left), energy);
    }

    /// <summary>At a pole of the open structure itself the mode is that of the pole.</summary>
    private Complex[] AtPole(double omega, double[] pattern)
    {
        var at = new Complex[_mass.Length];
        for (int i = 0; i < at.Length; i++)
        {
            at[i] = _damping[i] == 0 && _stiffness[i] == omega * omega * _mass[i] ? pattern[i] / _mass[i] : 0;
        }

        return at;
    }

    /// <summary>Gain as the residual flexibility leaves it, <c>g/(1 + g·p·R)</c>.</summary>
    private double Effective(double value)
    {
        double g = _scale * value;
        return g / (1 + (g * _ratios.Position * _residual));
    }

    private double BackwardError(double value, Complex s, Complex[] v)
    {
        double g = Effective(value);
        var sensed = Complex.Zero;
        double residual = 0;
        double length = 0;
        for (int i = 0; i < v.Length; i++)
        {
            sensed += _sense[i] * v[i];
        }

        var force = g * (_ratios.Position + (s * (_ratios.Rate + (s * _ratios.Acceleration)))) * sensed;
        for (int i = 0; i < v.Length; i++)
        {
            var row = ((_stiffness[i] + (s * (_damping[i] + (s * _mass[i])))) * v[i]) + (force * _drive[i]);
            residual += Square(row) / _mass[i];
            length += Square(v[i]) * _mass[i];
        }

        double size = Complex.Abs(s);
        double scale = ((size * size * Norm(_mass, g * _ratios.Acceleration)) + (size * Norm(_damping, g * _ratios.Rate)) + Norm(_stiffness, g * _ratios.Position))
            * Math.Sqrt(length);
        return scale == 0 ? 0 : Math.Sqrt(residual) / scale;
    }

    /// <summary>Frobenius norm of <c>diag + x·b·sᵀ</c> in coordinates of unit mass.</summary>
    private double Norm(double[] diagonal, double x)
    {
        double sum = 0;
        double driven = 0;
        double sensed = 0;
        for (int i = 0; i < diagonal.Length; i++)
        {
            double d = diagonal[i] / _mass[i];
            sum += (d * d) + (2 * d * x * _drive[i] * _sense[i] / _mass[i]);
            driven += _drive[i] * _drive[i] / _mass[i];
            sensed += _sense[i] * _sense[i] / _mass[i];
        }

        return Math.Sqrt(Math.Max(0, sum + (x * x * driven * sensed)));
    }

    private EnergyBalance Energy(double value, double omega, Complex[] v)
    {
        double g = Effective(value);
        var driven = Complex.Zero;
        var sensed = Complex.Zero;
        double inertia = 0;
        double dissipation = 0;
        for (int i = 0; i < v.Length; i++)
        {
            driven += Complex.Conjugate(v[i]) * _drive[i];
            sensed += _sense[i] * v[i];
            inertia += _mass[i] * Square(v[i]);
            dissipation += _damping[i] * Square(v[i]);
        }

        var form = g * driven * sensed;
        double kinetic = 0.5 * omega * omega * (inertia + (_ratios.Acceleration * form.Real));
        double structure = -Math.PI * omega * dissipation / kinetic;
        double damper = -Math.PI * omega * _ratios.Rate * form.Real / kinetic;
        double circulatory = -Math.PI * _ratios.Position * form.Imaginary / kinetic;
        double skewMass = Math.PI * omega * omega * _ratios.Acceleration * form.Imaginary / kinetic;
        var loops = _path.Nominal.Law.Loops
            .Select((l, k) => new LoopWork(l.Loop.Name, k == _loop ? damper + circulatory + skewMass : 0)).ToImmutableArray();
        return new EnergyBalance(structure + damper, circulatory, skewMass, structure, loops);
    }

    private static double Square(Complex x) => (x.Real * x.Real) + (x.Imaginary * x.Imaginary);
}
