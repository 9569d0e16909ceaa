using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>
/// A sum of real second-order terms on the imaginary axis. With <c>z = ω²</c> and <c>t = z − c</c> each is the pair
/// <c>R = (R₀ + R₁t)/(t² + h)</c>, <c>I = (I₀ + I₁t)/(t² + h)</c>: a conjugate pair of poles has <c>h &gt; 0</c>, one real pole or an undamped
/// pair <c>h = R₀ = I₀ = 0</c>, two nearly equal real poles <c>h ≤ 0</c>. Numerators are real and bounds go through the roots of
/// the denominators, so they do not grow as damping falls.
/// </summary>
internal sealed class PairTerms : IPairFactor
{
    private const double FarAway = -1e50;

    /// <summary>Largest radius of a Taylor polynomial, in distances to the nearest pole.</summary>
    private const double LargestRatio = 0.5;

    private readonly double[] _center, _square, _spread, _real0, _real1, _imaginary0, _imaginary1, _weight, _size, _error;

    private PairTerms(IReadOnlyList<PairTerm> terms, double constant)
    {
        Count = terms.Count;
        Constant = constant;
        int width = Vector<double>.Count;
        int padded = (terms.Count + width - 1) / width * width;
        double[] Column(Func<PairTerm, double> value, double filler)
        {
            double[] column = new double[padded];
            for (int k = 0; k < padded; k++)
            {
                column[k] = k < terms.Count ? value(terms[k]) : filler;
            }

            return column;
        }

        _center = Column(t => t.Center, FarAway);
        _square = Column(t => Math.Max(0, t.Square), 0);
        _spread = Column(t => Math.Sqrt(Math.Max(0, -t.Square)), 0);
        _real0 = Column(t => t.Real0, 0);
        _real1 = Column(t => t.Real1, 0);
        _imaginary0 = Column(t => t.Imaginary0, 0);
        _imaginary1 = Column(t => t.Imaginary1, 0);
        _weight = Column(t => t.Weight, 0);
        _size = Column(t => Math.Sqrt(t.Modulus), 0);
        _error = Column(t => t.ResidueError, 0);
    }

    public int Count { get; }

    /// <summary>Value at infinite frequency.</summary>
    public double Constant { get; }

    /// <summary>The terms by ascending centre; those with one pole <c>1/t</c> in common are added up.</summary>
    public static PairTerms Of(IEnumerable<PairTerm> terms, double constant)
    {
        var sum = new List<PairTerm>();
        foreach (var term in terms.OrderBy(t => t.Center).ThenByDescending(t => Math.Abs(t.Square)))
        {
            bool isCommon = sum.Count > 0 && sum[^1].Center == term.Center && sum[^1].IsSimple && term.IsSimple;
            if (isCommon)
            {
                sum[^1] = sum[^1] with
                {
                    Real1 = sum[^1].Real1 + term.Real1,
                    Imaginary1 = sum[^1].Imaginary1 + term.Imaginary1,
                    Weight = sum[^1].Weight + term.Weight,
                    ResidueError = sum[^1].ResidueError + term.ResidueError,
                };
            }
            else
            {
                sum.Add(term);
            }
        }

        return new PairTerms(sum, constant);
    }

    /// <summary><c>c</c> of one term.</summary>
    public double CenterOf(int k) => _center[k];

    /// <summary><c>h</c> of one term.</summary>
    public double SquareOf(int k) => _square[k] - (_spread[k] * _spread[k]);

    /// <summary>Numerators <c>R₀, R₁, I₀, I₁</c> of one term.</summary>
    public (double Real0, double Real1, double Imaginary0, double Imaginary1) NumeratorsOf(int k)
        => (_real0[k], _real1[k], _imaginary0[k], _imaginary1[k]);

    /// <summary>How far the poles of one term lie from <c>z = 0</c> at most.</summary>
    public double ReachOf(int k) => Math.Abs(_center[k]) + Math.Sqrt(_square[k]) + _spread[k];

    public RealPair Over(double z, double radius) => Over(0, z, radius, -1).Pair;

    public (double Real, double Imaginary) Expand(double z, double radius, Span<double> real, Span<double> imaginary)
        => Expand(0, z, radius, real, imaginary);

    public double GreatestBeyond(double z)
    {
        double sum = Math.Abs(Constant);
        for (int k = 0; k < Count; k++)
        {
            double gap = z - ReachOf(k);
            if (!(gap > 0))
            {
                return double.PositiveInfinity;
            }

            double ratio = 1 / gap;
            double omega = Math.Sqrt(gap);
            sum += ((Math.Abs(_real0[k]) * ratio) + Math.Abs(_real1[k])) * ratio;
            sum += (((Math.Abs(_imaginary0[k]) * ratio) + Math.Abs(_imaginary1[k])) / omega) * (1 + (ReachOf(k) * ratio));
        }

        return sum;
    }

    /// <summary>
    /// All terms but <paramref name="without"/> over a cell whose middle is <paramref name="offset"/> from <paramref name="origin"/>: kept
    /// apart, so that distances from a pole at the origin keep all their digits.
    /// </summary>
    /// <remarks>
    /// With the nearest root of a denominator at distance <c>δ</c> from the cell: <c>|1/P|′ ≤ 2/δ³</c>, <c>|1/P|″ ≤ 6/δ⁴</c>, and as <c>t/P</c> is the
    /// mean of <c>1/(z − ζ)</c> over both roots, <c>|t/P|′ ≤ 1/δ²</c>, <c>|t/P|″ ≤ 2/δ³</c>. A pole known to <c>δλ</c> moves a term with residue <c>r</c>
    /// by no more than <c>|r|δλ(√z + |λ|)²/P</c>; its weight is that with a factor. A residue known to <c>δr</c> changes <c>R</c> by no more than
    /// <c>2δr(√z + |λ|)/√P</c> and <c>I</c> by <c>8δr/√P</c>.
    /// </remarks>
    /// <returns>The pair, and one over the distance from the cell to the nearest pole.</returns>
    public (RealPair Pair, double Nearness) Over(double origin, double offset, double radius, int without)
    {
        var (real, realSlope, realFirst, realSecond, realModuli) = (Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero);
        var (imag, imagSlope, imagFirst, imagSecond, imagModuli) = (Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero);
        var (realMoved, imagMoved, realTurned, imagTurned, nearest) = (Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero, Vector<double>.Zero);
        var from = new Vector<double>(origin);
        var shift = new Vector<double>(offset);
        var half = new Vector<double>(radius);
        var omega = new Vector<double>(Math.Sqrt(Math.Max(0, origin + offset)));
        var lane = Vector.CreateSequence(0.0, 1.0);
        var skipped = new Vector<double>(without);
        var two = new Vector<double>(2.0);
        int width = Vector<double>.Count;
        for (int k = 0; k < _center.Length; k += width, lane += new Vector<double>(width))
        {
            var t = from - new Vector<double>(_center, k) + shift;
            var h = new Vector<double>(_square, k);
            var spread = new Vector<double>(_spread, k);
            var kept = Vector.Equals(lane, skipped);
            var squared = t * t;
            var inverse = Vector.ConditionalSelect(kept, Vector<double>.Zero, Vector<double>.One / (squared + h - (spread * spread)));
            var ratio = t * inverse;
            var inverseSlope = -two * ratio * inverse;
            var ratioSlope = (h - (spread * spread) - squared) * inverse * inverse;
            var gap = Vector.Max(Vector<double>.Zero, Vector.Abs(t) - half - spread);
            var near2 = Vector.ConditionalSelect(kept, Vector<double>.Zero, Vector<double>.One / ((gap * gap) + h));
            var near = Vector.SquareRoot(near2);
            var near3 = two * near * near2;
            var near4 = new Vector<double>(6.0) * near2 * near2;
            var r0 = new Vector<double>(_real0, k);
            var r1 = new Vector<double>(_real1, k);
            var i0 = new Vector<double>(_imaginary0, k);
            var i1 = new Vector<double>(_imaginary1, k);
            var (a0, a1, b0, b1) = (Vector.Abs(r0), Vector.Abs(r1), Vector.Abs(i0), Vector.Abs(i1));
            var (inverseModulus, ratioModulus) = (Vector.Abs(inverse), Vector.Abs(ratio));
            real += (r0 * inverse) + (r1 * ratio);
            realSlope += (r0 * inverseSlope) + (r1 * ratioSlope);
            realFirst += (a0 * near3) + (a1 * near2);
            realSecond += (a0 * near4) + (a1 * near3);
            imag += (i0 * inverse) + (i1 * ratio);
            imagSlope += (i0 * inverseSlope) + (i1 * ratioSlope);
            imagFirst += (b0 * near3) + (b1 * near2);
            imagSecond += (b0 * near4) + (b1 * near3);
            var realSize = (a0 * inverseModulus) + (a1 * ratioModulus);
            var imagSize = (b0 * inverseModulus) + (b1 * ratioModulus);
            var size = omega + new Vector<double>(_size, k);
            var moved = new Vector<double>(_weight, k) * inverseModulus * size;
            realModuli += realSize;
            imagModuli += imagSize;
            var missed = two * new Vector<double>(_error, k) * Vector.SquareRoot(inverseModulus);
            var (realMissed, imagMissed) = (missed * size, missed * new Vector<double>(4.0));
            realMoved += (moved * size) + realMissed;
            imagMoved += moved + imagMissed;
            realTurned += (((moved * size) + realMissed) * two * near) + (((a0 * near3) + (a1 * near2)) * Tolerances.Entry);
            imagTurned += ((moved + imagMissed) * two * near) + (((b0 * near3) + (b1 * near2)) * Tolerances.Entry);
            nearest = Vector.Max(nearest, near);
        }

        double closest = 0;
        for (int i = 0; i < width; i++)
        {
            closest = Math.Max(closest, nearest[i]);
        }

        double constant = Math.Abs(Constant);
        return (new RealPair(
            new Bounded(
                Vector.Sum(real) + Constant, Vector.Sum(realSlope), Vector.Sum(realFirst), Vector.Sum(realSecond), radius,
                (Tolerances.Entry * (Vector.Sum(realModuli) + constant)) + Vector.Sum(realMoved), Vector.Sum(realTurned)),
            new Bounded(
                Vector.Sum(imag), Vector.Sum(imagSlope), Vector.Sum(imagFirst), Vector.Sum(imagSecond), radius,
                (Tolerances.Entry * Vector.Sum(imagModuli)) + Vector.Sum(imagMoved), Vector.Sum(imagTurned))), closest);
    }

    /// <summary>
    /// Taylor coefficients of both parts about a point, and bounds of what they leave out over a radius, infinite unless that is
    /// less than half the distance to the nearest pole. Where moments cancel, sums of coefficients are far smaller than sums of
    /// bounds.
    /// </summary>
    public (double Real, double Imaginary) Expand(double origin, double offset, double radius, Span<double> real, Span<double> imaginary)
    {
        real.Clear();
        imaginary.Clear();
        real[0] = Constant;
        int order = real.Length;
        double realRest = 0;
        double imaginaryRest = 0;
        for (int k = 0; k < Count; k++)
        {
            double t = origin - _center[k] + offset;
            double pole = (t * t) + _square[k] - (_spread[k] * _spread[k]);
            double twice = 2 * t;
            double before = 0;
            double here = 1 / pole;
            for (int j = 0; j < order; j++)
            {
                // (R₀ + R₁(t + x))·Σqⱼxʲ
                real[j] += ((_real0[k] + (_real1[k] * t)) * here) + (_real1[k] * before);
                imaginary[j] += ((_imaginary0[k] + (_imaginary1[k] * t)) * here) + (_imaginary1[k] * before);
                (before, here) = (here, -((twice * here) + before) / pole);
            }

            double gap = Math.Abs(t) - _spread[k];
            double near = 1 / Math.Sqrt((gap * gap) + _square[k]);
            double q = radius * near;
            if (!(q < LargestRatio))
            {
                return (double.PositiveInfinity, double.PositiveInfinity);
            }

            double tail = Math.Pow(q, order) / (1 - q);
            double tailOfInverse = near * near * tail * (order + (1 / (1 - q)));
            realRest += (Math.Abs(_real0[k]) * tailOfInverse) + (Math.Abs(_real1[k]) * near * tail);
            imaginaryRest += (Math.Abs(_imaginary0[k]) * tailOfInverse) + (Math.Abs(_imaginary1[k]) * near * tail);
        }

        return (realRest, imaginaryRest);
    }
}
