namespace GainMargin.Numerics;

/// <summary>A loop on the imaginary axis over a cell of <c>z = ω²</c>.</summary>
/// <param name="Sought">The function whose roots are the onsets: the loop's <c>I(z)</c>, times the denominator of the anchor where that was cleared.</param>
/// <param name="RealLow">Lower bound of the loop's real part.</param>
/// <param name="RealHigh">Upper bound of the loop's real part.</param>
/// <param name="Nearness">One over the distance from the cell to the nearest pole that was not cleared.</param>
internal readonly record struct AxisCell(Bounded Sought, double RealLow, double RealHigh, double Nearness);

/// <summary>
/// A loop <c>L(iω) = R(z) + iω·I(z)</c>: terms times the ratios of the law times further factors. Cells are given by an anchor, the
/// index of a term or −1 for <c>z = 0</c>, and the offset from it. An acceleration fed back alone is taken without its factor
/// <c>−z</c> when roots are sought: its zero at <c>z = 0</c> belongs to no onset.
/// </summary>
internal sealed class AxisFunction(PairTerms terms, RatioFactor law, IReadOnlyList<IPairFactor> dynamics)
{
    /// <summary>Terms of a Taylor polynomial: with poles at 2½ radii the rest is below 1e-6 of the bounds.</summary>
    private const int Order = 16;

    private const double LeastDistance = 2.5;

    private readonly bool _squared = law.Position == 0 && law.Rate == 0;
    private readonly IPairFactor[] _factors =
        [.. dynamics, law.Position == 0 && law.Rate == 0 ? new RatioFactor(law.Acceleration, 0, 0) : law];

    private readonly TailSeries _tail = new(terms);

    public PairTerms Terms => terms;

    /// <summary>Whether the loop is more than a constant times the ratios of its law.</summary>
    public bool HasPoles => terms.Count > 0 || dynamics.Count > 0;

    public int Evaluations { get; private set; }

    public double OriginOf(int anchor) => anchor < 0 ? 0 : terms.CenterOf(anchor);

    public AxisCell Over(int anchor, double offset, double radius, bool clear)
    {
        Evaluations++;
        double origin = OriginOf(anchor);
        double at = origin + offset;
        var z = Bounded.Linear(0, 1, at, radius);
        var (pair, nearness) = terms.Over(origin, offset, radius, clear ? anchor : -1);
        if (clear)
        {
            pair = Cleared(anchor, offset, radius) + pair.Times(Denominator(anchor, offset, radius));
        }

        foreach (var factor in _factors)
        {
            pair = RealPair.Product(factor.Over(at, radius), pair, z);
        }

        if (clear)
        {
            return new AxisCell(pair.Imaginary, double.NegativeInfinity, double.PositiveInfinity, nearness);
        }

        var real = _squared ? Bounded.Linear(0, -1, at, radius) * pair.Real : pair.Real;
        return new AxisCell(pair.Imaginary, real.Low, real.High, nearness);
    }

    /// <summary>Real part at a point, with its rounding; its slope too.</summary>
    public Bounded RealAt(int anchor, double offset)
    {
        double origin = OriginOf(anchor);
        double at = origin + offset;
        var z = Bounded.Linear(0, 1, at, 0);
        var pair = terms.Over(origin, offset, 0, -1).Pair;
        foreach (var factor in _factors)
        {
            pair = RealPair.Product(factor.Over(at, 0), pair, z);
        }

        return _squared ? Bounded.Linear(0, -1, at, 0) * pair.Real : pair.Real;
    }

    /// <summary>Slope of the loop's imaginary part at a root of the sought function.</summary>
    public double LoopSlope(int anchor, double offset, bool clear, double soughtSlope)
    {
        double slope = clear ? soughtSlope / Denominator(anchor, offset, 0).Value : soughtSlope;
        return _squared ? -slope * (OriginOf(anchor) + offset) : slope;
    }

    /// <summary>Whether the term has poles on the axis that add nothing to the imaginary part of the loop: cleared, they are its roots.</summary>
    public bool IsSilent(int anchor)
        => anchor >= 0 && law.Rate == 0 && dynamics.Count == 0 && terms.SquareOf(anchor) == 0 && terms.NumeratorsOf(anchor).Imaginary1 == 0;

    /// <summary>Whether all poles are far enough from a cell for a Taylor polynomial.</summary>
    public static bool CanExpand(AxisCell cell, double radius) => cell.Nearness * radius * LeastDistance < 1;

    /// <summary>The same cell by Taylor polynomials, whose coefficients keep what cancels between the terms.</summary>
    public AxisCell Expanded(int anchor, double offset, double radius)
    {
        Evaluations += Order;
        double origin = OriginOf(anchor);
        double at = origin + offset;
        Span<double> real = stackalloc double[Order];
        Span<double> imaginary = stackalloc double[Order];
        var rest = terms.Expand(origin, offset, radius, real, imaginary);
        var rounding = terms.Over(origin, offset, 0, -1).Pair;
        double realRounding = rounding.Real.Rounding;
        double imaginaryRounding = rounding.Imaginary.Rounding;
        Span<double> factorReal = stackalloc double[Order];
        Span<double> factorImaginary = stackalloc double[Order];
        Span<double> product = stackalloc double[Order];
        Span<double> other = stackalloc double[Order];
        foreach (var factor in _factors)
        {
            var factorRest = factor.Expand(at, radius, factorReal, factorImaginary);
            if (!double.IsFinite(factorRest.Real + factorRest.Imaginary))
            {
                double open = double.PositiveInfinity;
                return new AxisCell(new Bounded(0, 0, open, open, radius, 0, 0), -open, open, 0);
            }

            var factorRounding = factor.Over(at, 0);
            double size = at + radius;
            double fr = Sup(factorReal, radius) + factorRest.Real;
            double fi = Sup(factorImaginary, radius) + factorRest.Imaginary;
            double r = Sup(real, radius) + rest.Real;
            double i = Sup(imaginary, radius) + rest.Imaginary;
            double cut = Multiply(factorReal, real, radius, product);
            cut += Cross(factorImaginary, imaginary, at, radius, other);
            for (int k = 0; k < Order; k++)
            {
                product[k] -= other[k];
            }

            double otherCut = Multiply(factorReal, imaginary, radius, other);
            otherCut += Multiply(factorImaginary, real, radius, imaginary);
            for (int k = 0; k < Order; k++)
            {
                imaginary[k] += other[k];
            }

            product.CopyTo(real);
            rest = (cut + (fr * rest.Real) + (r * factorRest.Real) + (size * ((fi * rest.Imaginary) + (i * factorRest.Imaginary))),
                otherCut + (fr * rest.Imaginary) + (i * factorRest.Real) + (fi * rest.Real) + (r * factorRest.Imaginary));
            var (ofReal, ofImaginary) = (factorRounding.Real.Rounding, factorRounding.Imaginary.Rounding);
            (realRounding, imaginaryRounding) = (
                (fr * realRounding) + (r * ofReal) + (size * ((fi * imaginaryRounding) + (i * ofImaginary))),
                (fr * imaginaryRounding) + (i * ofReal) + (fi * realRounding) + (r * ofImaginary));
        }

        var sought = Ranged(imaginary, radius, rest.Imaginary, imaginaryRounding);
        var part = Ranged(real, radius, rest.Real, realRounding);
        part = _squared ? Bounded.Linear(0, -1, at, radius) * part : part;
        return new AxisCell(sought, part.Low, part.High, 0);
    }

    /// <summary>Twice the reach of the farthest pole.</summary>
    public double BeyondPoles() => 2 * _tail.Reach;

    /// <summary>Bounds of the loop's real part for all <c>z</c> from <paramref name="from"/> on, which lies beyond the poles.</summary>
    public (double Low, double High) TailBounds(double from)
    {
        if (dynamics.Count == 0)
        {
            return _tail.LoopBounds(from, law);
        }

        // Of the product only the modulus is bounded: √z·|v·R + (p − a·z)·I| comes in.
        var (real, timesReal, timesImaginary) = _tail.Bounds(from);
        var (p, v, a) = (Math.Abs(law.Position), Math.Abs(law.Rate), Math.Abs(law.Acceleration));
        double along = (p * real) + (a == 0 ? 0 : a * timesReal) + (v * timesImaginary);
        double across = (v == 0 ? 0 : v * timesReal / Math.Sqrt(from)) + (p * timesImaginary / Math.Sqrt(from)) + (a == 0 ? 0 : a * Math.Sqrt(from) * timesImaginary);
        double modulus = dynamics.Aggregate(along + across, (bound, factor) => bound * factor.GreatestBeyond(from));
        return (-modulus, modulus);
    }

    /// <summary>Whether the imaginary part keeps its sign for all <c>z</c> from <paramref name="from"/> on.</summary>
    public bool KeepsSign(double from) => dynamics.Count == 0 && _tail.KeepsSign(from, law);

    private Bounded Denominator(int anchor, double t, double radius)
        => terms.SquareOf(anchor) == 0 ? Bounded.Linear(0, 1, t, radius) : Bounded.Parabola(t, terms.SquareOf(anchor), radius);

    private RealPair Cleared(int anchor, double t, double radius)
    {
        var (r0, r1, i0, i1) = terms.NumeratorsOf(anchor);
        return terms.SquareOf(anchor) == 0
            ? new RealPair(Bounded.Linear(r1, 0, t, radius), Bounded.Linear(i1, 0, t, radius))
            : new RealPair(Bounded.Linear(r0, r1, t, radius), Bounded.Linear(i0, i1, t, radius));
    }

    private static double Sup(ReadOnlySpan<double> coefficients, double radius)
    {
        double sum = 0;
        for (int k = coefficients.Length - 1; k >= 0; k--)
        {
            sum = (sum * radius) + Math.Abs(coefficients[k]);
        }

        return sum;
    }

    /// <summary>Truncated product; returns a bound of what is cut off.</summary>
    private static double Multiply(ReadOnlySpan<double> a, ReadOnlySpan<double> b, double radius, Span<double> product)
    {
        product.Clear();
        for (int i = 0; i < Order; i++)
        {
            if (a[i] == 0)
            {
                continue;
            }

            for (int j = 0; i + j < Order; j++)
            {
                product[i + j] += a[i] * b[j];
            }
        }

        double cut = 0;
        double power = Math.Pow(radius, Order);
        for (int n = Order; n <= 2 * (Order - 1); n++, power *= radius)
        {
            double sum = 0;
            for (int i = n - Order + 1; i < Order; i++)
            {
                sum += Math.Abs(a[i] * b[n - i]);
            }

            cut += sum * power;
        }

        return cut;
    }

    /// <summary><c>z·a·b</c> with <c>z = at + x</c>.</summary>
    private static double Cross(ReadOnlySpan<double> a, ReadOnlySpan<double> b, double at, double radius, Span<double> product)
    {
        double cut = Multiply(a, b, radius, product) * (at + radius);
        cut += Math.Abs(product[Order - 1]) * Math.Pow(radius, Order);
        for (int k = Order - 1; k > 0; k--)
        {
            product[k] = (at * product[k]) + product[k - 1];
        }

        product[0] *= at;
        return cut;
    }

    private static Bounded Ranged(ReadOnlySpan<double> coefficients, double radius, double rest, double rounding)
    {
        double first = 0;
        double second = 0;
        double power = 1;
        for (int k = 1; k < Order; k++)
        {
            first += k * Math.Abs(coefficients[k]) * power;
            power *= radius;
            second += k + 1 < Order ? (k + 1) * k * Math.Abs(coefficients[k + 1]) * (power / radius) : 0;
        }

        // The rest is a power series from the order of the polynomial on, so its derivatives are bounded by multiples of it.
        double perRadius = 2 * Order * rest / radius;
        return new Bounded(coefficients[0], coefficients[1], first + perRadius, second + (2 * Order * perRadius / radius), radius, rounding, 2 * LeastDistance * rounding / radius);
    }
}
