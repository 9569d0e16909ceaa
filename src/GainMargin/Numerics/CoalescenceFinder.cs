using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>A square of frequency at which a lossless loop is stationary: two roots <c>z</c> meet there.</summary>
/// <param name="Square"><c>z = ω²</c>.</param>
/// <param name="SquareUncertainty">Rounding of <c>z</c>.</param>
/// <param name="Real">The loop's value.</param>
/// <param name="RealUncertainty">Its rounding.</param>
/// <param name="Curvature"><c>R″(z)</c>: where it is negative the two roots are real below the gain and complex above.</param>
internal readonly record struct StationaryPoint(double Square, double SquareUncertainty, double Real, double RealUncertainty, double Curvature);

/// <summary>
/// All points on <c>z &gt; 0</c> at which a lossless loop <c>R(z) = (p − a·z)·(c + Σ ρ/(z − κ))</c> is stationary and of a size in reach.
/// Every gain is marginal in such a loop; flutter begins where two roots <c>z</c> of <c>1 + δR = 0</c> meet, <c>R′ = 0</c>.
/// </summary>
internal sealed class CoalescenceFinder
{
    /// <summary>Moments taken: beyond four times the reach the rest is below rounding.</summary>
    private const int Moments = 30;

    private readonly MirroredPole[] _poles;
    private readonly Complex[] _tops;
    private readonly double _constant;
    private readonly double _instant;
    private readonly double _instantModuli;
    private readonly double _position;
    private readonly double _acceleration;
    private readonly double _outOfReachFrom;
    private readonly double _outOfReachTo;
    private readonly int _budget;
    private readonly CancellationToken _cancellation;
    private readonly List<StationaryPoint> _roots = [];
    private readonly List<UnresolvedBand> _bands = [];

    /// <param name="poles">Terms of the loop without its law.</param>
    /// <param name="constant">Its value at infinity.</param>
    /// <param name="law">The ratios, of which the rate is zero.</param>
    /// <param name="least">Least change of gain searched.</param>
    /// <param name="greatest">Greatest change of gain searched.</param>
    /// <param name="budget">Most evaluations.</param>
    /// <param name="cancellation">Cancels.</param>
    public CoalescenceFinder(
        IEnumerable<MirroredPole> poles, double constant, RatioFactor law, double least, double greatest, int budget, CancellationToken cancellation)
    {
        _constant = constant;
        _position = law.Position;
        _acceleration = law.Acceleration;
        var sums = poles.GroupBy(p => p.Place)
            .Select(g => new MirroredPole(g.Key, g.Aggregate(Complex.Zero, (sum, p) => sum + p.Residue), g.Max(p => p.Uncertainty)))
            .OrderBy(p => p.Place.Real).ToArray();
        double[] instants = Array.ConvertAll(sums, p => _acceleration * p.Weight * p.Residue.Real);
        _instant = instants.Sum();
        _instantModuli = instants.Sum(Math.Abs);

        // Where the ratios vanish at a pole it is none of the loop's.
        _poles = Array.FindAll(sums, p => Top(p) != 0);
        _tops = Array.ConvertAll(_poles, Top);
        _outOfReachFrom = greatest > 0 ? -1 / greatest : double.NegativeInfinity;
        _outOfReachTo = least < 0 ? -1 / least : double.PositiveInfinity;
        _budget = budget;
        _cancellation = cancellation;
    }

    public IReadOnlyList<StationaryPoint> Roots => _roots;

    public IReadOnlyList<UnresolvedBand> Unresolved => _bands;

    public int Evaluations { get; private set; }

    /// <summary>Whether the search covered all frequencies within its budget.</summary>
    public bool CoveredAll { get; private set; }

    public void Run()
    {
        if (_poles.Length == 0)
        {
            CoveredAll = true;
            return;
        }

        if (End() is not { } end)
        {
            return;
        }

        int[] anchors = [-1, .. Enumerable.Range(0, _poles.Length).Where(k => _poles[k].Place.Real >= 0)];
        for (int i = 0; i < anchors.Length; i++)
        {
            double origin = Origin(anchors[i]);
            double low = i == 0 ? 0 : 0.5 * (Origin(anchors[i - 1]) - origin);
            double high = i == anchors.Length - 1 ? end - origin : 0.5 * (Origin(anchors[i + 1]) - origin);
            Search(anchors[i], low, high);
        }

        CoveredAll = Evaluations < _budget;
    }

    private Complex Top(MirroredPole pole) => pole.Weight * pole.Residue * (_position - (_acceleration * pole.Place));

    private double Origin(int anchor) => anchor < 0 ? 0 : _poles[anchor].Place.Real;

    /// <summary>
    /// From where on the loop is out of reach for good, or its slope keeps its sign: <c>z²R′</c> tends to <c>−Σρ(p − aμ) − a·c·z²</c>.
    /// </summary>
    private double? End()
    {
        double end = 4 * Reach();
        double growing = -_acceleration * _constant;
        for (int doubling = 0; doubling < 200 && double.IsFinite(end); doubling++, end *= 2)
        {
            double leading = growing * end * end;
            double moduli = Math.Abs(leading);
            double rest = 0;
            for (int k = 0; k < _poles.Length; k++)
            {
                // R′ of ρ(p − az)/(z − μ) is −ρ(p − aμ)/(z − μ)².
                double place = Complex.Abs(_poles[k].Place);
                double q = place / end;
                leading -= _tops[k].Real;
                moduli += Complex.Abs(_poles[k].Residue) * _poles[k].Weight * (Math.Abs(_position) + Math.Abs(_acceleration * place));
                rest += Complex.Abs(_tops[k]) * ((1 / ((1 - q) * (1 - q))) - 1);
            }

            // What grows wins in the end.
            bool keepsSign = Math.Abs(leading) > rest + (Tolerances.Entry * moduli * _poles.Length) && (growing == 0 || Math.Sign(leading) == Math.Sign(growing));
            var (low, high) = TailBounds(end);
            if (keepsSign || (low > _outOfReachFrom && high < _outOfReachTo))
            {
                return end;
            }
        }

        return null;
    }

    private double Reach()
    {
        double reach = _poles.Max(p => Complex.Abs(p.Place));
        return reach > 0 ? reach : 1;
    }

    /// <summary>
    /// Bounds of the loop beyond its poles by its power series in <c>1/z</c>, whose moments <c>Σρ(p − aμ)μʲ</c> are summed before they are
    /// bounded.
    /// </summary>
    private (double Low, double High) TailBounds(double from)
    {
        if (_acceleration * _constant != 0)
        {
            return (double.NegativeInfinity, double.PositiveInfinity);
        }

        double reach = Reach();
        double limit = (_position * _constant) - _instant;
        double rest = Tolerances.Entry * (Math.Abs(_position * _constant) + _instantModuli);
        double size = _tops.Sum(Complex.Abs) / from;
        double y = reach / from;
        var powers = Array.ConvertAll(_tops, top => top);
        double scale = 1 / from;
        for (int j = 0; j < Moments; j++, scale *= y)
        {
            rest += (Math.Abs(powers.Sum(p => p.Real)) * scale) + (Tolerances.Entry * size * Math.Pow(y, j));
            for (int k = 0; k < powers.Length; k++)
            {
                powers[k] *= _poles[k].Place / reach;
            }
        }

        rest += size * Math.Pow(y, Moments) / (1 - y);
        return (limit - rest, limit + rest);
    }

    private void Search(int anchor, double low, double high)
    {
        if (!(high > low))
        {
            return;
        }

        var pending = new Stack<(double Low, double High)>();
        pending.Push((low, high));
        while (pending.Count > 0 && Evaluations < _budget)
        {
            _cancellation.ThrowIfCancellationRequested();
            var (a, b) = pending.Pop();
            double middle = 0.5 * (a + b);
            double radius = 0.5 * (b - a);
            if (anchor >= 0 && _poles[anchor].Place.Imaginary == 0 && HoldsNone(anchor, middle, radius))
            {
                continue;
            }

            var (real, slope) = At(anchor, middle, radius);
            bool outOfReach = real.Low > _outOfReachFrom && real.High < _outOfReachTo;
            if (slope.HasNoZero || outOfReach)
            {
                continue;
            }

            if (slope.IsMonotone)
            {
                Accept(anchor, a, b);
                continue;
            }

            if (!(middle > a && middle < b) || slope.IsLostInRounding)
            {
                _bands.Add(UnresolvedBand.Of(Origin(anchor) + a, Origin(anchor) + b, real.Low, real.High));
                continue;
            }

            pending.Push((middle, b));
            pending.Push((a, middle));
        }
    }

    /// <summary>Whether beside its pole the anchor's own <c>−ρ(p − aκ)/t²</c> outweighs the slope of all others.</summary>
    private bool HoldsNone(int anchor, double middle, double radius)
    {
        double reach = Math.Abs(middle) + radius;
        double own = Complex.Abs(_tops[anchor]);
        double others = Math.Abs(_acceleration * _constant);
        for (int k = 0; k < _poles.Length; k++)
        {
            if (k != anchor)
            {
                double near = Nearness(k, Origin(anchor), middle, radius);
                others += Complex.Abs(_tops[k]) * near * near;
            }
        }

        Evaluations++;
        return own > reach * reach * others * (1 + (Tolerances.Entry * _poles.Length));
    }

    private double Nearness(int k, double origin, double offset, double radius)
    {
        double gap = Math.Max(0, Math.Abs(origin - _poles[k].Place.Real + offset) - radius);
        return 1 / Math.Sqrt((gap * gap) + (_poles[k].Place.Imaginary * _poles[k].Place.Imaginary));
    }

    /// <summary><c>R</c> and <c>R′</c> over a cell: each term is <c>−aρ + ρ(p − aμ)/(z − μ)</c>.</summary>
    private (Bounded Real, Bounded Slope) At(int anchor, double offset, double radius)
    {
        Evaluations++;
        double origin = Origin(anchor);
        double z = origin + offset;
        var (value, slope, curve) = ((_constant * (_position - (_acceleration * z))) - _instant, -_acceleration * _constant, 0.0);
        var (first, second, third) = (Math.Abs(_acceleration * _constant), 0.0, 0.0);
        var (moduli, slopeModuli, curveModuli) = ((Math.Abs(_constant) * (Math.Abs(_position) + Math.Abs(_acceleration * z))) + _instantModuli, first, 0.0);
        double moved = 0;
        for (int k = 0; k < _poles.Length; k++)
        {
            var inverse = 1 / new Complex(origin - _poles[k].Place.Real + offset, -_poles[k].Place.Imaginary);
            var term = _tops[k] * inverse;
            var (bySlope, byCurve) = (term * inverse, 2 * term * inverse * inverse);
            value += term.Real;
            slope -= bySlope.Real;
            curve += byCurve.Real;
            moduli += Complex.Abs(term);
            slopeModuli += Complex.Abs(bySlope);
            curveModuli += Complex.Abs(byCurve);
            moved += Complex.Abs(bySlope) * _poles[k].Uncertainty;
            double near = Nearness(k, origin, offset, radius);
            double size = Complex.Abs(_tops[k]) * near * near;
            first += size;
            second += 2 * size * near;
            third += 6 * size * near * near;
        }

        return (
            new Bounded(value, slope, first, second, radius, (Tolerances.Entry * moduli) + moved, Tolerances.Entry * slopeModuli),
            new Bounded(slope, curve, second, third, radius, Tolerances.Entry * slopeModuli, Tolerances.Entry * curveModuli));
    }

    private void Accept(int anchor, double a, double b)
    {
        var low = At(anchor, a, 0).Slope;
        var high = At(anchor, b, 0).Slope;
        if (Math.Abs(low.Value) > low.Rounding && Math.Abs(high.Value) > high.Rounding && Math.Sign(low.Value) == Math.Sign(high.Value))
        {
            return;
        }

        double left = a;
        double right = b;
        double at = 0.5 * (a + b);
        for (int step = 0; step < 100; step++)
        {
            var here = At(anchor, at, 0).Slope;
            (left, right) = Math.Sign(here.Value) == Math.Sign(low.Value) ? (at, right) : (left, at);
            double next = at - (here.Value / here.Slope);
            next = next > left && next < right ? next : 0.5 * (left + right);
            bool arrived = Math.Abs(next - at) <= Tolerances.Epsilon * Math.Abs(at) || !(next > left && next < right);
            at = next > left && next < right ? next : at;
            if (arrived)
            {
                break;
            }
        }

        var (real, slope) = At(anchor, at, 0);
        double square = Origin(anchor) + at;
        double uncertainty = (slope.Rounding / Math.Abs(slope.Slope)) + (2 * Tolerances.Epsilon * square);

        // A root at the common end of two cells is found in both.
        bool repeats = _roots.Exists(
            r => Math.Abs(r.Square - square) <= 2 * (uncertainty + r.SquareUncertainty) && Math.Sign(r.Curvature) == Math.Sign(slope.Slope));
        bool inReach = !(real.Value - real.Rounding > _outOfReachFrom && real.Value + real.Rounding < _outOfReachTo);
        if (square > 0 && inReach && !repeats)
        {
            _roots.Add(new StationaryPoint(square, uncertainty, real.Value, real.Rounding, slope.Slope));
        }
    }
}
