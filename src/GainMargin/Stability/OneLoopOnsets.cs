using GainMargin.Numerics;
using Complex = System.Numerics.Complex;

namespace GainMargin;

/// <summary>Everything that one loop does on the axis, at zero and at infinity between its base and the ends of the range.</summary>
internal sealed class OneLoopOnsets(OneLoop loop, CancellationToken cancellation)
{
    /// <summary>Share of the range above which the uncertainty of an onset at its end is an open stretch of its own.</summary>
    private const double Sliver = 1e-12;

    /// <summary>Largest uncertainty of an onset, relative to its distance from the base.</summary>
    private const double MostUncertain = 1e-2;

    /// <summary>How far a polished onset may lie from the root it started from.</summary>
    private const double Near = 1e-6;

    private readonly LoopTerms _terms = loop.Terms;
    private readonly GainRange _range = loop.Path.Range;
    private readonly ModalEvidence? _modal = loop.Terms.IsOwnModes
        ? new ModalEvidence(loop.Path, loop.Pencil, loop.Terms, loop.Index, loop.Scale, loop.Decay > 0)
        : null;

    private readonly List<GainStretch> _doubtful = [];
    private bool _isLost;

    /// <summary>Onsets inside the range.</summary>
    public List<OnsetDraft> Drafts { get; } = [];

    /// <summary>Changes of the count, those between the base and the range included.</summary>
    public List<CrossingEvent> Events { get; } = [];

    /// <summary>Gains that rounding leaves open.</summary>
    public List<GainStretch> Open { get; } = [];

    /// <summary>Onsets that an end of the range lies within the uncertainty of.</summary>
    public List<GainStretch> Edges { get; } = [];

    /// <summary>Losses through infinity that are not inside the range: nothing is claimed at an end that is one.</summary>
    public List<GainStretch> Losses { get; } = [];

    /// <summary>
    /// The edges that are wide enough to be named or that hold another onset, and the onsets so uncertain that another may lie on
    /// either side: between them nothing can be counted.
    /// </summary>
    public IEnumerable<GainStretch> Slivers
        => _doubtful.Where(e => e.To - e.From > 2 * Sliver * _range.Width || Drafts.Exists(d => d.Gain + d.Uncertainty >= e.From && d.Gain - d.Uncertainty <= e.To))
            .Concat(Drafts.Where(d => d.Uncertainty > Sliver * _range.Width && Drafts.Exists(o => o != d && Math.Abs(o.Gain - d.Gain) <= d.Uncertainty + o.Uncertainty))
                .Select(d => new GainStretch(d.Gain - d.Uncertainty, d.Gain + d.Uncertainty)));

    /// <summary>Lower end of what was searched: the range and the base, up to a loss through infinity.</summary>
    public double Low { get; private set; } = Math.Min(loop.Path.Range.From, loop.Terms.BaseValue);

    /// <summary>Upper end of what was searched.</summary>
    public double High { get; private set; } = Math.Max(loop.Path.Range.To, loop.Terms.BaseValue);

    /// <summary>Evaluations of the loop.</summary>
    public int Evaluations { get; private set; }

    /// <summary>Searches; returns why it was given up, or <see langword="null"/>.</summary>
    public string? Run() => Infinities() ?? Divergences() ?? (_terms.IsLossless ? Coalescences() : Flutters())
        ?? (_isLost ? "an onset is not determined by the matrices" : null);

    /// <summary>Losses through infinity; the search ends at the nearest on either side of the base.</summary>
    private string? Infinities()
    {
        var found = new List<OnsetDraft>();
        if (_modal is not null)
        {
            if (_terms.AtInfinity != 0)
            {
                double delta = -1 / _terms.AtInfinity;
                found.Add(_modal.OfInfinity(_terms.BaseValue + delta, Math.Abs(delta) * _terms.InfinityRounding));
            }
        }
        else
        {
            var singular = SingularGains.ThroughInfinity(loop.Sweep, GainRange.Between(Low, High));
            if (!singular.IsRegular)
            {
                return "the mass is singular at every gain";
            }

            var evidence = new OnsetEvidence(loop.Sweep);
            found.AddRange(singular.Found.Select(evidence.OfInfinity));
        }

        foreach (var onset in found)
        {
            (Low, High) = onset.Gain < _terms.BaseValue ? (Math.Max(Low, onset.Gain), High) : (Low, Math.Min(High, onset.Gain));
        }

        Drafts.AddRange(found.Where(o => IsInside(o) && (o.Gain == Low || o.Gain == High)));
        Losses.AddRange(found.Where(o => !IsInside(o)).Select(o => new GainStretch(o.Gain - o.Uncertainty, o.Gain + o.Uncertainty)));
        return Low < _range.To && High > _range.From ? null : "the whole range lies beyond a loss through infinity";
    }

    private string? Divergences()
    {
        if (_modal is null)
        {
            var singular = SingularGains.Divergences(loop.Sweep, GainRange.Between(Low, High));
            if (!singular.IsRegular)
            {
                return "the static matrix is singular at every gain";
            }

            var evidence = new OnsetEvidence(loop.Sweep);
            foreach (var gain in singular.Found)
            {
                var draft = evidence.OfDivergence(gain);
                Keep(draft, draft.Slope is { } s && s != 0 ? Math.Sign(s) : null);
            }

            return null;
        }

        if (_terms.DoubleZero != 0 || _terms.SimpleZero != 0)
        {
            double? slope = _terms.DoubleZero == 0 ? -_terms.SimpleZero : null;
            Keep(_modal.OfDivergence(_terms.BaseValue, 0, slope), null);
        }
        else if (_terms.AtZero != 0)
        {
            double delta = -1 / _terms.AtZero;
            double? slope = _terms.SlopeAtZero == 0 ? null : 1 / (delta * delta * _terms.SlopeAtZero);
            int? change = slope is { } s ? Math.Sign(s) : _terms.IsLossless ? LosslessChange() : null;
            Keep(_modal.OfDivergence(_terms.BaseValue + delta, Math.Abs(delta) * _terms.ZeroRounding, slope), change);
        }

        return null;
    }

    private string? Flutters()
    {
        var function = _terms.Function();
        var isolator = new RootIsolator(function, Low - _terms.BaseValue, High - _terms.BaseValue, loop.Options.MaximumEvaluations, cancellation);
        isolator.Run();
        Evaluations = function.Evaluations;
        if (!isolator.CoveredAll)
        {
            return "the search did not end within its budget";
        }

        foreach (var band in isolator.Unresolved)
        {
            Open.AddRange(GainsOf(band));
        }

        var polished = new List<OnsetDraft>();
        foreach (var root in isolator.Roots)
        {
            double delta = -1 / root.Real;
            double omega = Math.Sqrt(root.Square);
            double uncertainty = (delta * delta * root.RealUncertainty) + (Tolerances.Epsilon * Math.Abs(_terms.BaseValue + delta));
            double growth = root.ImaginarySlope
                / (2 * delta * delta * ((root.Square * root.ImaginarySlope * root.ImaginarySlope) + (root.RealSlope * root.RealSlope)));
            var draft = _modal?.OfFlutter(_terms.BaseValue + delta, uncertainty + _terms.GainUncertainty(omega, delta), omega, growth)
                ?? OnMatrices(_terms.BaseValue + delta, uncertainty, omega, growth);
            if (draft is null || polished.Exists(p => p.Kind == draft.Kind && p.Gain == draft.Gain && p.Frequency == draft.Frequency))
            {
                return "an onset could not be confirmed on the matrices";
            }

            if (draft.Uncertainty > MostUncertain * Math.Abs(delta))
            {
                return "an onset is not determined by the matrices";
            }

            polished.Add(draft);
            Keep(draft, 2 * Math.Sign(root.ImaginarySlope));
        }

        return null;
    }

    private string? Coalescences()
    {
        var law = new RatioFactor(_terms.Law.Position, 0, _terms.Law.Acceleration);
        var finder = new CoalescenceFinder(
            _terms.Mirrored, _terms.Pairs.Constant, law, Low - _terms.BaseValue, High - _terms.BaseValue, loop.Options.MaximumEvaluations, cancellation);
        finder.Run();
        Evaluations = finder.Evaluations;
        if (!finder.CoveredAll)
        {
            return "the search did not end within its budget";
        }

        foreach (var band in finder.Unresolved)
        {
            Open.AddRange(GainsOf(band));
        }

        foreach (var root in finder.Roots)
        {
            double delta = -1 / root.Real;
            double value = _terms.BaseValue + delta;
            double uncertainty = (delta * delta * root.RealUncertainty) + (Tolerances.Epsilon * Math.Abs(value));
            double omega = Math.Sqrt(root.Square);
            var draft = _modal?.OfCoalescence(value, uncertainty, omega) ?? CoalescenceOnMatrices(value, uncertainty, omega);
            if (draft is null)
            {
                return "an onset could not be confirmed on the matrices";
            }

            Keep(draft, -2 * Math.Sign(root.Curvature));
        }

        return null;
    }

    /// <summary>
    /// Polished on the matrices. Where the structure's modes are uncoupled the terms are exact for matrices within rounding, and
    /// their own bound may be the better one.
    /// </summary>
    private OnsetDraft? OnMatrices(double gain, double uncertainty, double omega, double growth)
    {
        if (NullVectors(gain, omega) is not { } vectors)
        {
            return null;
        }

        double slack = (100 * uncertainty) + (1e-3 * Math.Abs(gain - _terms.BaseValue));
        var polished = FlutterPolish.Run(loop.Sweep, gain, omega, vectors.Right, vectors.Left, gain - slack, gain + slack);
        var evidence = new OnsetEvidence(loop.Sweep);
        bool agrees = polished is not null && Math.Abs(polished.Omega - omega) <= Near * omega + 10 * Math.Sqrt(Tolerances.Epsilon) * polished.Omega;
        if (!_terms.FromModes)
        {
            return agrees && Math.Sign(polished!.Slope.Real) == Math.Sign(growth) ? evidence.OfFlutter(polished) : null;
        }

        double modal = uncertainty + _terms.GainUncertainty(omega, gain - _terms.BaseValue);
        return agrees && polished!.Uncertainty <= modal
            ? evidence.OfFlutter(polished)
            : evidence.OfFlutter(new FlutterCrossing(gain, modal, omega, new Complex(growth, 0), vectors.Right, vectors.Left, false));
    }

    private OnsetDraft? CoalescenceOnMatrices(double gain, double uncertainty, double omega)
    {
        if (NullVectors(gain, omega) is not { } vectors)
        {
            return null;
        }

        var crossing = new FlutterCrossing(gain, uncertainty, omega, Complex.Zero, vectors.Right, vectors.Left, true);
        return new OnsetEvidence(loop.Sweep).OfFlutter(crossing) with { Kind = OnsetKind.LosslessCoalescence, Slope = null, Energy = null };
    }

    /// <summary><c>Q(iω)⁻¹b</c> and <c>Q(iω)⁻ᴴs</c> at a gain beside the onset: for one loop they are the null vectors at the onset.</summary>
    private (Complex[] Right, Complex[] Left)? NullVectors(double gain, double omega)
    {
        var even = loop.Sweep.Model.Even;
        double beside = gain + (0.25 * (gain - _terms.BaseValue));
        var matrix = even.At(loop.Sweep.GainsAt(beside)).At(new Complex(0, omega));
        var right = Dense.TrySolve(matrix, [.. even.Drive.Column(loop.Index).Select(x => new Complex(x, 0))]);
        var left = Dense.TrySolve(matrix.ConjugateTranspose(), [.. even.Sense.Column(loop.Index).Select(x => new Complex(x, 0))]);
        return right is null || left is null ? null : (Dense.Unit(right), Dense.Unit(left));
    }

    private void Keep(OnsetDraft draft, int? change)
    {
        if (!double.IsFinite(draft.Gain) || !double.IsFinite(draft.Uncertainty))
        {
            _isLost = true;
            return;
        }

        if (!(draft.Gain + draft.Uncertainty >= Low && draft.Gain - draft.Uncertainty <= High))
        {
            return;
        }

        bool atBase = Math.Abs(draft.Gain - _terms.BaseValue) <= draft.Uncertainty && _terms.Poles.Any(p => p.IsOnAxis);
        if (!atBase)
        {
            Events.Add(new CrossingEvent(draft.Gain, change));
        }

        if (IsInside(draft))
        {
            Drafts.Add(draft);
        }
        else
        {
            var edge = new GainStretch(draft.Gain - draft.Uncertainty, draft.Gain + draft.Uncertainty);
            Edges.Add(edge);
            if (!atBase && edge.From < _range.To && edge.To > _range.From)
            {
                _doubtful.Add(edge);
            }
        }
    }

    private bool IsInside(OnsetDraft draft) => draft.Gain - draft.Uncertainty > _range.From && draft.Gain + draft.Uncertainty < _range.To;

    /// <summary>Gains whose onset may hide in a band: <c>−1/R</c> over the values that the real part takes there.</summary>
    private IEnumerable<GainStretch> GainsOf(UnresolvedBand band)
    {
        double g = _terms.BaseValue;
        double atLow = -1 / band.RealLow;
        double atHigh = -1 / band.RealHigh;
        if (band.RealLow > 0 || band.RealHigh < 0)
        {
            return Between(g + atLow, g + atHigh);
        }

        return [.. Between(Low, g + (band.RealHigh > 0 ? atHigh : double.NegativeInfinity)), .. Between(g + (band.RealLow < 0 ? atLow : double.PositiveInfinity), High)];
    }

    /// <summary>The part of a stretch that was searched, if there is one.</summary>
    private IEnumerable<GainStretch> Between(double from, double to)
    {
        var stretch = new GainStretch(Math.Max(Low, from), Math.Min(High, to));
        return stretch.From < stretch.To ? [stretch] : [];
    }

    /// <summary>A pair <c>z = ω²</c> passes zero: real roots lie where <c>z</c> is negative.</summary>
    private int? LosslessChange()
    {
        // R = (p − a·z)(c + Σρ/(z − μ)); a pole at zero is left only where the position is not fed back.
        var (value, slope, moduli) = (_terms.Pairs.Constant, 0.0, Math.Abs(_terms.Law.Acceleration * _terms.Pairs.Constant));
        foreach (var pole in _terms.Mirrored.Where(p => p.Place != 0))
        {
            var term = pole.Weight * pole.Residue / pole.Place;
            value -= term.Real;
            slope -= (term / pole.Place).Real;
            moduli += Complex.Abs(_terms.Law.Acceleration * term) + Complex.Abs(_terms.Law.Position * term / pole.Place);
        }

        double total = (_terms.Law.Position * slope) - (_terms.Law.Acceleration * value);
        return Math.Abs(total) <= Tolerances.Entry * moduli ? null : -Math.Sign(total);
    }
}
