using GainMargin.Numerics;

namespace GainMargin;

/// <summary>A root of the loop's imaginary part, as an offset from a pole.</summary>
/// <param name="Anchor">The pole.</param>
/// <param name="Offset">Distance from its centre in <c>z</c>.</param>
/// <param name="Square">The root <c>z = ω²</c>.</param>
/// <param name="Real">The loop's real part there; the gain is <c>g₀ − 1/Real</c>.</param>
internal readonly record struct AxisRoot(int Anchor, double Offset, double Square, double Real);

/// <summary>
/// All roots of the imaginary part of a loop on <c>z &gt; 0</c> that belong to a gain in reach. Cells are dismissed as empty or
/// out of reach, accepted as monotone, or halved; what rounding leaves open is counted, never dropped.
/// </summary>
internal sealed class OnsetIsolator
{
    private const int Budget = 200_000;

    private readonly LoopTerms _terms;
    private readonly LoopCell _cell;
    private readonly double _outOfReach;

    /// <param name="terms">The loop.</param>
    /// <param name="reach">Largest distance of a gain of the range from the base gain.</param>
    public OnsetIsolator(LoopTerms terms, double reach)
    {
        _terms = terms;
        _cell = new LoopCell(terms);
        _outOfReach = 1 / reach;
    }

    public List<AxisRoot> Roots { get; } = [];

    /// <summary>Cells in which rounding leaves open whether there is a root.</summary>
    public int Unresolved { get; private set; }

    public int Evaluations => _cell.Evaluations;

    /// <summary>Whether the search covered all frequencies.</summary>
    public bool IsComplete { get; private set; }

    public void Run(CancellationToken cancellation)
    {
        if (_terms.Count == 0 || End() is not { } end)
        {
            IsComplete = _terms.Count == 0;
            return;
        }

        int[] owners = [.. Enumerable.Range(0, _terms.Count).Where(k => _terms.Center[k] >= 0 && _terms.Square[k] >= 0)];
        if (owners.Length == 0)
        {
            owners = [_terms.Count - 1];
        }

        for (int i = 0; i < owners.Length; i++)
        {
            double origin = _terms.Center[owners[i]];
            double low = i == 0 ? -origin : 0.5 * (_terms.Center[owners[i - 1]] - origin);
            cancellation.ThrowIfCancellationRequested();
            double high = i == owners.Length - 1 ? end - origin : 0.5 * (_terms.Center[owners[i + 1]] - origin);
            Search(owners[i], low, high);
        }

        IsComplete = Unresolved == 0 && _cell.Evaluations < Budget;
    }

    /// <summary>From where on the loop has no root in reach for good, or <see langword="null"/> if that is not clear.</summary>
    private double? End()
    {
        double end = _cell.BeyondPoles();
        for (int doubling = 0; doubling < 400; doubling++, end *= 2)
        {
            if (_cell.TailBound(end) < _outOfReach || _cell.KeepsSign(end))
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

        var pending = new Stack<(double Low, double High)>();
        pending.Push((low, high));
        while (pending.Count > 0 && _cell.Evaluations < Budget)
        {
            var (a, b) = pending.Pop();
            double middle = 0.5 * (a + b);
            double radius = 0.5 * (b - a);
            double h = _terms.Square[anchor];
            double gap = Math.Max(0, Math.Abs(middle) - radius);
            bool clear = h >= 0 && (gap * gap) + h < 4 * radius * radius;
            var cell = _cell.At(anchor, middle, radius, clear);
            if (cell.RealBound < _outOfReach || Math.Abs(cell.Value) > (cell.FirstBound * radius) + cell.Rounding)
            {
                continue;
            }

            if (Math.Abs(cell.Slope) > cell.SecondBound * radius)
            {
                Accept(anchor, a, b, clear);
                continue;
            }

            bool spent = !(middle > a && middle < b);
            if (spent || Math.Abs(cell.Value) + (cell.FirstBound * radius) <= 2 * cell.Rounding)
            {
                Unresolved++;
                continue;
            }

            pending.Push((middle, b));
            pending.Push((a, middle));
        }
    }

    /// <summary>
    /// A monotone cell has one root if the ends differ in sign. An end that is zero within rounding counts as a root too: its
    /// neighbour may have rounded the other way, and a root found twice is recognised later.
    /// </summary>
    private void Accept(int anchor, double a, double b, bool clear)
    {
        var atLow = _cell.At(anchor, a, 0, clear);
        var atHigh = _cell.At(anchor, b, 0, clear);
        foreach (var (end, at) in new[] { (atLow, a), (atHigh, b) })
        {
            if (Math.Abs(end.Value) <= end.Rounding)
            {
                Add(anchor, at);
                return;
            }
        }

        if (Math.Sign(atLow.Value) != Math.Sign(atHigh.Value))
        {
            Add(anchor, Root(anchor, a, b, Math.Sign(atLow.Value), clear));
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
            var here = _cell.At(anchor, at, 0, clear);
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

    private void Add(int anchor, double offset)
    {
        double square = _terms.Center[anchor] + offset;
        double real = _cell.RealAt(anchor, offset);
        if (square > 0 && Math.Abs(real) >= _outOfReach)
        {
            Roots.Add(new AxisRoot(anchor, offset, square, real));
        }
    }
}
