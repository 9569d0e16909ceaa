namespace GainMargin.Numerics;

/// <summary>
/// All frequencies at which a loop is real and of a size in reach: the roots of its imaginary part on <c>z &gt; 0</c>, isolated by
/// cells. A cell is dismissed where the imaginary part has no zero or the real part is out of reach, accepted where the imaginary
/// part is monotone, else halved. What rounding leaves open is kept as a band, never dropped.
/// </summary>
internal sealed class RootIsolator
{
    /// <summary>Doublings of the frequency after which the tail is given up.</summary>
    private const int Doublings = 400;

    /// <summary>Radius of a cell below which bounds beside a pole overflow, in all of its parts, and halving would never end.</summary>
    private const double Narrowest = 1e-60;

    private readonly AxisFunction _function;
    private readonly double _outOfReachFrom;
    private readonly double _outOfReachTo;
    private readonly int _budget;
    private readonly CancellationToken _cancellation;
    private readonly List<AxisRoot> _roots = [];
    private readonly List<UnresolvedBand> _bands = [];

    /// <param name="function">The loop.</param>
    /// <param name="least">Least change of gain searched, not above zero.</param>
    /// <param name="greatest">Greatest change of gain searched, not below zero; <c>1 + δ·L = 0</c> with <c>δ</c> between them.</param>
    /// <param name="budget">Most evaluations.</param>
    /// <param name="cancellation">Cancels.</param>
    public RootIsolator(AxisFunction function, double least, double greatest, int budget, CancellationToken cancellation)
    {
        _function = function;
        _outOfReachFrom = greatest > 0 ? -1 / greatest : double.NegativeInfinity;
        _outOfReachTo = least < 0 ? -1 / least : double.PositiveInfinity;
        _budget = budget;
        _cancellation = cancellation;
    }

    public IReadOnlyList<AxisRoot> Roots => _roots;

    /// <summary>Bands left open, by ascending frequency.</summary>
    public IReadOnlyList<UnresolvedBand> Unresolved => _bands;

    /// <summary>Whether the search covered all frequencies within its budget.</summary>
    public bool CoveredAll { get; private set; }

    public void Run()
    {
        var terms = _function.Terms;
        if (!_function.HasPoles)
        {
            CoveredAll = true;
            return;
        }

        if (End() is not { } end)
        {
            return;
        }

        // Of several poles about one centre the nearest to the axis is the one to clear.
        int[] anchors =
        [
            -1,
            .. Enumerable.Range(0, terms.Count).Where(k => terms.CenterOf(k) >= 0 && terms.SquareOf(k) >= 0)
                .GroupBy(terms.CenterOf).Select(g => g.MinBy(terms.SquareOf)),
        ];
        for (int i = 0; i < anchors.Length; i++)
        {
            double origin = _function.OriginOf(anchors[i]);
            double low = i == 0 ? 0 : 0.5 * (_function.OriginOf(anchors[i - 1]) - origin);
            double high = i == anchors.Length - 1 ? end - origin : 0.5 * (_function.OriginOf(anchors[i + 1]) - origin);
            Search(anchors[i], low, high);
        }

        CoveredAll = _function.Evaluations < _budget;
        MergeBands();
        DropRepeats();
    }

    /// <summary>From where on the loop has no root in reach for good, or <see langword="null"/> if that is not clear.</summary>
    private double? End()
    {
        double end = _function.BeyondPoles();
        for (int doubling = 0; doubling < Doublings && double.IsFinite(end); doubling++, end *= 2)
        {
            var (low, high) = _function.TailBounds(end);
            if ((low > _outOfReachFrom && high < _outOfReachTo) || _function.KeepsSign(end))
            {
                return end;
            }
        }

        return null;
    }

    private void Search(int anchor, double low, double high)
    {
        if (!(high > low))
        {
            return;
        }

        var terms = _function.Terms;
        double square = anchor < 0 ? -1 : terms.SquareOf(anchor);
        var pending = new Stack<(double Low, double High)>();
        pending.Push((low, high));
        while (pending.Count > 0 && _function.Evaluations < _budget)
        {
            _cancellation.ThrowIfCancellationRequested();
            var (a, b) = pending.Pop();
            double middle = 0.5 * (a + b);
            double radius = 0.5 * (b - a);
            double gap = Math.Max(0, Math.Abs(middle) - radius);
            bool clear = square >= 0 && (gap * gap) + square < 4 * radius * radius;
            var cell = _function.Over(anchor, middle, radius, clear);
            if (IsDismissed(cell))
            {
                continue;
            }

            bool monotone = cell.Sought.IsMonotone;
            bool lost = cell.Sought.IsLostInRounding;
            if (!monotone && !clear && AxisFunction.CanExpand(cell, radius))
            {
                var expanded = _function.Expanded(anchor, middle, radius);
                if (IsDismissed(expanded))
                {
                    continue;
                }

                monotone = expanded.Sought.IsMonotone;
                lost |= expanded.Sought.IsLostInRounding;
                cell = expanded;
            }

            if (monotone)
            {
                Accept(anchor, a, b, clear);
                continue;
            }

            bool spent = radius < Narrowest || !(middle > a && middle < b);
            if (spent || lost)
            {
                double origin = _function.OriginOf(anchor);
                _bands.Add(UnresolvedBand.Of(origin + a, origin + b, cell.RealLow, cell.RealHigh));
                continue;
            }

            pending.Push((middle, b));
            pending.Push((a, middle));
        }
    }

    private bool IsDismissed(AxisCell cell)
        => cell.Sought.HasNoZero || (cell.RealLow > _outOfReachFrom && cell.RealHigh < _outOfReachTo);

    /// <summary>
    /// A monotone cell has one root if the ends differ in sign. An end that is zero within rounding counts as a root too: its
    /// neighbour may have rounded the other way, and a root found twice is recognised later. The root that clearing has made is none.
    /// </summary>
    private void Accept(int anchor, double a, double b, bool clear)
    {
        if (clear && a <= 0 && b >= 0 && _function.IsSilent(anchor))
        {
            return;
        }

        var atLow = _function.Over(anchor, a, 0, clear).Sought;
        var atHigh = _function.Over(anchor, b, 0, clear).Sought;
        if (Math.Abs(atLow.Value) <= atLow.Rounding)
        {
            Add(anchor, a, clear, atLow);
        }
        else if (Math.Abs(atHigh.Value) <= atHigh.Rounding)
        {
            Add(anchor, b, clear, atHigh);
        }
        else if (Math.Sign(atLow.Value) != Math.Sign(atHigh.Value))
        {
            double root = Root(anchor, a, b, Math.Sign(atLow.Value), clear);
            Add(anchor, root, clear, _function.Over(anchor, root, 0, clear).Sought);
        }
    }

    /// <summary>Newton's method, kept inside the bracket by bisection.</summary>
    private double Root(int anchor, double a, double b, int signAtLow, bool clear)
    {
        double low = a;
        double high = b;
        double at = 0.5 * (a + b);
        for (int step = 0; step < 100; step++)
        {
            var here = _function.Over(anchor, at, 0, clear).Sought;
            if (here.Value == 0)
            {
                break;
            }

            (low, high) = Math.Sign(here.Value) == signAtLow ? (at, high) : (low, at);
            double next = at - (here.Value / here.Slope);
            next = next > low && next < high ? next : 0.5 * (low + high);
            if (Math.Abs(next - at) <= Tolerances.Epsilon * Math.Abs(at) || !(next > low && next < high))
            {
                at = next > low && next < high ? next : at;
                break;
            }

            at = next;
        }

        return at;
    }

    private void Add(int anchor, double offset, bool clear, Bounded sought)
    {
        double square = _function.OriginOf(anchor) + offset;
        double uncertainty = (sought.Rounding / Math.Abs(sought.Slope)) + (Tolerances.Epsilon * Math.Abs(offset));
        var real = _function.RealAt(anchor, offset);
        double realUncertainty = real.Rounding + (Math.Abs(real.Slope) * uncertainty);
        bool inReach = !(real.Value - realUncertainty > _outOfReachFrom && real.Value + realUncertainty < _outOfReachTo);
        if (square > 0 && inReach && double.IsFinite(real.Value))
        {
            _roots.Add(new AxisRoot(
                anchor, offset, square, uncertainty, real.Value, realUncertainty, real.Slope, _function.LoopSlope(anchor, offset, clear, sought.Slope)));
        }
    }

    private void MergeBands()
    {
        var sorted = _bands.OrderBy(b => b.From).ToArray();
        _bands.Clear();
        foreach (var band in sorted)
        {
            if (_bands.Count > 0 && band.From <= _bands[^1].To * (1 + (4 * Tolerances.Epsilon)))
            {
                var last = _bands[^1];
                _bands[^1] = new UnresolvedBand(
                    last.From, Math.Max(last.To, band.To), Math.Min(last.RealLow, band.RealLow), Math.Max(last.RealHigh, band.RealHigh));
            }
            else
            {
                _bands.Add(band);
            }
        }
    }

    /// <summary>A root at the common end of two cells is found in both.</summary>
    private void DropRepeats()
    {
        var sorted = _roots.OrderBy(r => r.Square).ToArray();
        _roots.Clear();
        foreach (var root in sorted)
        {
            bool repeats = _roots.Count > 0 && IsSame(_roots[^1], root);
            if (!repeats)
            {
                _roots.Add(root);
            }
        }
    }

    private bool IsSame(AxisRoot a, AxisRoot b)
    {
        double distance = _function.OriginOf(b.Anchor) - _function.OriginOf(a.Anchor) + b.Offset - a.Offset;
        return distance <= 2 * (a.SquareUncertainty + b.SquareUncertainty) && Math.Sign(a.ImaginarySlope) == Math.Sign(b.ImaginarySlope);
    }
}
