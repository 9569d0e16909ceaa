namespace GainMargin;

/// <summary>One loop made ready for its search: its terms, its poles counted, and the matrices where they are needed.</summary>
internal sealed class OneLoop
{
    private readonly Lazy<SweepModel> _sweep;

    private OneLoop(GainPath path, OnsetOptions options, LoopTerms terms, LoopedPencil pencil, int index, double scale, Lazy<SweepModel> sweep)
    {
        Path = path;
        Options = options;
        Terms = terms;
        Pencil = pencil;
        Index = index;
        Scale = scale;
        _sweep = sweep;
        InvisibleCount = CountOf(terms.Invisible);
        BaseCount = CountOf(terms.Poles.Concat(terms.Invisible));
    }

    public GainPath Path { get; }

    public OnsetOptions Options { get; }

    public LoopTerms Terms { get; }

    /// <summary>The structure with its loops, roots moved right by the decay rate.</summary>
    public LoopedPencil Pencil { get; }

    /// <summary>Which loop moves.</summary>
    public int Index { get; }

    /// <summary>Gain of the loop in units of the model per unit of the path.</summary>
    public double Scale { get; }

    public double Decay => Options.DecayRate;

    /// <summary>The path made ready for decompositions.</summary>
    public SweepModel Sweep => _sweep.Value;

    /// <summary>Decompositions spent so far.</summary>
    public int Decompositions => (_sweep.IsValueCreated ? _sweep.Value.Decompositions : 0) + ShiftedDecompositions;

    public int ShiftedDecompositions { get; private set; }

    /// <summary>Roots that the loop does not move.</summary>
    public RootCount InvisibleCount { get; }

    /// <summary>Roots at the base value.</summary>
    public RootCount BaseCount { get; }

    /// <summary>The loop of a path, or why it cannot be searched.</summary>
    public static (OneLoop? Loop, string? Reason) Of(GainPath path, OnsetOptions options, CancellationToken cancellation)
    {
        var polynomials = Array.ConvertAll(path.GainPolynomials(), SweepModel.Trimmed);
        int[] moving = [.. Enumerable.Range(0, polynomials.Length).Where(k => polynomials[k].Length > 1)];
        if (moving.Length != 1 || polynomials[moving[0]].Length != 2)
        {
            return (null, moving.Length == 0 ? "no loop moves" : "several gains move together");
        }

        int index = moving[0];
        var nominal = path.Nominal.Pencil;
        var pencil = options.DecayRate == 0 ? nominal : nominal.Decaying(options.DecayRate);
        var sweep = new Lazy<SweepModel>(() => new SweepModel(path, cancellation, options.DecayRate));
        var terms = Usable(ModalTerms.OfStructure(pencil, polynomials, index), path.Range);
        if (terms is null && pencil.Residual is not null)
        {
            return (null, "the residual flexibility is fed back through modes that damping or other loops couple");
        }

        terms ??= Usable(ModalTerms.OfMatrices(sweep.Value, index), path.Range) ?? MirroredTerms.Of(sweep.Value, index) ?? DecomposedTerms.Of(sweep.Value, index);
        return terms is null
            ? (null, "no base gain gives poles that are known well enough")
            : (new OneLoop(path, options, terms, pencil, index, polynomials[index][1], sweep), null);
    }

    /// <summary>A count with a given number of growing roots; the others decay, but for those that the loop does not move.</summary>
    public RootCount CountWith(int growing)
    {
        int rest = BaseCount.Total - growing - InvisibleCount.Marginal - InvisibleCount.Undecided;
        return Terms.IsLossless
            ? new RootCount(growing, growing + InvisibleCount.Decaying, rest - growing - InvisibleCount.Decaying + InvisibleCount.Marginal, InvisibleCount.Undecided)
            : new RootCount(growing, rest, InvisibleCount.Marginal, InvisibleCount.Undecided);
    }

    /// <summary>A count by decomposition, or <see langword="null"/> where it fails.</summary>
    public RootCount? CountAt(double value)
    {
        try
        {
            return Sweep.CountAt(value);
        }
        catch (NumericalFailureException)
        {
            return null;
        }
    }

    /// <summary>A count by a matrix of another kind.</summary>
    public ShiftedCount? ShiftedCountAt(double value)
    {
        ShiftedDecompositions++;
        try
        {
            return ShiftInverted.Count(Sweep.Model.Even.At(Sweep.GainsAt(value)));
        }
        catch (NumericalFailureException)
        {
            return null;
        }
    }

    /// <summary>Undamped poles inside the range are onsets at the base itself: another base is needed.</summary>
    private static LoopTerms? Usable(LoopTerms? terms, GainRange range)
    {
        bool inside = terms is not null && terms.BaseValue > range.From && terms.BaseValue < range.To;
        return inside && !terms!.IsLossless && terms.Poles.Any(p => p.IsOnAxis && p.Value != 0) ? null : terms;
    }

    private static RootCount CountOf(IEnumerable<LoopPole> poles)
        => RootCount.Of(poles.SelectMany(p => Enumerable.Repeat(p.Verdict, p.Roots)));
}
