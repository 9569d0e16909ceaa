namespace GainMargin;

/// <summary>
/// How many roots start to grow where poles on the imaginary axis leave it as the value leaves the base, <c>1 + δ·L(s) = 0</c>
/// for small <c>δ</c>.
/// </summary>
internal static class Departure
{
    /// <param name="terms">The loop.</param>
    /// <param name="direction">Sign of <c>δ</c>.</param>
    /// <returns>The number, or <see langword="null"/> where rounding leaves it open.</returns>
    public static int? Of(LoopTerms terms, int direction)
    {
        int? zero = OfZero(terms, direction);
        int growing = 0;
        foreach (var pole in terms.Poles.Where(p => p.IsOnAxis && p.Value != 0))
        {
            double first = -direction * terms.Law.Rate * pole.Coupling;
            double sign = first != 0 ? first : SecondOrder(terms, pole) ?? double.NaN;
            if (double.IsNaN(sign))
            {
                return null;
            }

            growing += sign > 0 ? 2 : 0;
        }

        return zero + growing;
    }

    /// <summary>
    /// <c>L = B/s² + A/s + …</c>: for <c>δB &lt; 0</c> one of two real roots grows; for <c>δB &gt; 0</c> a pair leaves with the sign of <c>I/B</c>;
    /// a simple zero root moves to <c>−δA</c>.
    /// </summary>
    private static int? OfZero(LoopTerms terms, int direction)
    {
        if (terms.DoubleZero == 0)
        {
            return -direction * terms.SimpleZero > 0 ? 1 : 0;
        }

        if (direction * terms.DoubleZero < 0)
        {
            return 1;
        }

        if (terms.SimpleZero != 0)
        {
            return terms.SimpleZero * terms.DoubleZero < 0 ? 2 : 0;
        }

        int anchor = Enumerable.Range(0, terms.Pairs.Count).First(k => terms.Pairs.CenterOf(k) == 0 && terms.Pairs.SquareOf(k) == 0);
        var cleared = terms.Function().Over(anchor, 0, 0, clear: true).Sought;
        return Math.Abs(cleared.Slope) <= cleared.SlopeRounding ? null : cleared.Slope * terms.DoubleZero > 0 ? 2 : 0;
    }

    /// <summary>A pole that a position moves along the axis leaves it by what the other terms add, <c>Re s ≈ δ²·f·q²·I/2</c>.</summary>
    private static double? SecondOrder(LoopTerms terms, LoopPole pole)
    {
        double square = pole.Value.Imaginary * pole.Value.Imaginary;
        int anchor = Enumerable.Range(0, terms.Pairs.Count)
            .Where(k => terms.Pairs.SquareOf(k) == 0).MinBy(k => Math.Abs(terms.Pairs.CenterOf(k) - square));
        double offset = 0;
        var cleared = terms.Function().Over(anchor, offset, 0, clear: true).Sought;

        // An acceleration alone is taken without its factor −z, and so is its ratio.
        double ratio = terms.Law.Position == 0 ? terms.Law.Acceleration : terms.Law.Position - (terms.Law.Acceleration * terms.Pairs.CenterOf(anchor));
        return Math.Abs(cleared.Slope) <= cleared.SlopeRounding || ratio == 0 ? null : cleared.Slope * ratio * pole.Coupling;
    }
}
