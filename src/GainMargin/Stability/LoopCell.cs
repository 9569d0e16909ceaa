using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// The imaginary part of a loop over a cell <c>[m − r, m + r]</c> of <c>z</c>, near a pole multiplied by <c>t² + h</c> of that
/// pole, which has the same roots and no pole.
/// </summary>
/// <param name="Value">Value at the middle.</param>
/// <param name="Slope">Slope at the middle.</param>
/// <param name="FirstBound">Bound of the slope's modulus over the cell.</param>
/// <param name="SecondBound">Bound of the second derivative's modulus over the cell.</param>
/// <param name="Rounding">Rounding of the value.</param>
/// <param name="RealBound">Bound of the modulus of the loop's real part over the cell; infinite near a pole.</param>
internal readonly record struct CellBounds(
    double Value, double Slope, double FirstBound, double SecondBound, double Rounding, double RealBound);

/// <summary>Evaluates a loop's terms in coordinates anchored at a pole, so that distances from it keep all their digits.</summary>
internal sealed class LoopCell(LoopTerms terms)
{
    private readonly double _p = terms.Law.Position;
    private readonly double _v = terms.Law.Rate;
    private readonly double _a = terms.Law.Acceleration;

    public int Evaluations { get; private set; }

    /// <param name="anchor">The pole whose centre the offset is measured from.</param>
    /// <param name="offset">Middle of the cell.</param>
    /// <param name="radius">Half its width.</param>
    /// <param name="clear">Whether to multiply by the anchor's pole.</param>
    public CellBounds At(int anchor, double offset, double radius, bool clear)
    {
        Evaluations++;
        double origin = terms.Center[anchor];
        double z = origin + offset;
        var sums = new TermSums();
        for (int k = 0; k < terms.Count; k++)
        {
            if (!clear || k != anchor)
            {
                sums.Add(terms, k, origin - terms.Center[k] + offset, radius);
            }
        }

        double law = _p - (_a * z);
        double lawSup = Math.Abs(law) + (Math.Abs(_a) * radius);
        double velocity = Math.Abs(_v);
        double acceleration = Math.Abs(_a);
        double real = sums.Real + terms.Constant;
        double value = (law * sums.Imaginary) + (_v * real);
        double slope = (law * sums.ImaginarySlope) - (_a * sums.Imaginary) + (_v * sums.RealSlope);
        double imaginarySup = Math.Abs(sums.Imaginary) + (sums.Imaginary1 * radius);
        double first = (lawSup * sums.Imaginary1) + (acceleration * imaginarySup) + (velocity * sums.Real1);
        double second = (lawSup * sums.Imaginary2) + (2 * acceleration * sums.Imaginary1) + (velocity * sums.Real2);
        double lawModuli = Math.Abs(_p) + (acceleration * z);
        double rounding = Tolerances.Entry * ((lawModuli * sums.ImaginaryModuli) + (velocity * (sums.RealModuli + Math.Abs(terms.Constant))));
        if (clear)
        {
            return Cleared(anchor, offset, radius, law, lawSup, lawModuli, new CellBounds(value, slope, first, second, rounding, double.PositiveInfinity));
        }

        double realSup = Math.Abs(real) + (sums.Real1 * radius);
        double loop = (law * real) - (_v * z * sums.Imaginary);
        double loopSlope = (lawSup * sums.Real1) + (acceleration * realSup) + (velocity * (((z + radius) * sums.Imaginary1) + imaginarySup));
        return new CellBounds(value, slope, first, second, rounding, Math.Abs(loop) + (loopSlope * radius));
    }

    /// <summary>The loop's real part at a point.</summary>
    public double RealAt(int anchor, double offset)
    {
        double origin = terms.Center[anchor];
        double real = terms.Constant;
        double imaginary = 0;
        for (int k = 0; k < terms.Count; k++)
        {
            double t = origin - terms.Center[k] + offset;
            double inverse = 1 / ((t * t) + terms.Square[k]);
            real += (terms.Real0[k] + (terms.Real1[k] * t)) * inverse;
            imaginary += (terms.Imaginary0[k] + (terms.Imaginary1[k] * t)) * inverse;
        }

        double z = origin + offset;
        return ((_p - (_a * z)) * real) - (_v * z * imaginary);
    }

    /// <summary>
    /// Bound of the modulus of the loop's real part for all <c>z</c> from <paramref name="from"/> on, which lies above twice the
    /// reach of every pole. The terms <c>I₁/z</c> are summed before they are bounded: for a receptance they cancel.
    /// </summary>
    public double TailBound(double from)
    {
        double real = 0;
        double imaginary = 0;
        double leading = 0;
        for (int k = 0; k < terms.Count; k++)
        {
            double reach = Math.Abs(terms.Center[k]) + Math.Sqrt(Math.Abs(terms.Square[k]));
            double shrink = from / (from - reach);
            real += ((Math.Abs(terms.Real0[k]) / from * shrink) + Math.Abs(terms.Real1[k])) * shrink;
            imaginary += (Math.Abs(terms.Imaginary0[k]) + (2 * reach * Math.Abs(terms.Imaginary1[k]))) * shrink * shrink;
            leading += terms.Imaginary1[k];
        }

        double constant = Math.Abs(terms.Constant);
        return (Math.Abs(_p) * ((real / from) + constant)) + (Math.Abs(_v) * ((imaginary / from) + Math.Abs(leading)))
            + (_a == 0 ? 0 : Math.Abs(_a) * (real + (from * constant)));
    }

    /// <summary>
    /// Whether the imaginary part keeps its sign for all <c>z</c> from <paramref name="from"/> on, which lies above twice the
    /// reach of every pole: <c>z·I</c> tends to <c>v·ΣR₁ + p·ΣI₁ − a·Σ(I₀ + c·I₁)</c>, and the rest is bounded term by term.
    /// </summary>
    public bool KeepsSign(double from)
    {
        double leading = 0;
        double moduli = 0;
        double rest = 0;
        for (int k = 0; k < terms.Count; k++)
        {
            double reach = Math.Abs(terms.Center[k]) + Math.Sqrt(Math.Abs(terms.Square[k]));
            double q = reach / from;
            double once = 1 / (1 - q);
            double i0 = Math.Abs(terms.Imaginary0[k]);
            double i1 = Math.Abs(terms.Imaginary1[k]);
            double next = terms.Imaginary0[k] + (terms.Center[k] * terms.Imaginary1[k]);

            // Of a receptance fed back with an acceleration ratio, ΣI₁ is zero; its rounding would be multiplied by z.
            leading += (_v * terms.Real1[k]) + (_a == 0 ? _p * terms.Imaginary1[k] : 0) - (_a * next);
            moduli += Math.Abs(_v * terms.Real1[k]) + (_a == 0 ? Math.Abs(_p) * i1 : 0) + (Math.Abs(_a) * (i0 + (reach * i1)));
            rest += Math.Abs(_v) * ((Math.Abs(terms.Real0[k]) * once) + (Math.Abs(terms.Real1[k]) * reach)) * once / from;
            rest += Math.Abs(_p) * ((i0 * once) + (i1 * reach)) * once / from;
            rest += Math.Abs(_a) * ((2 * i0 * q * once * once) + (i1 * reach * q * once));
        }

        return Math.Abs(leading) > rest + (Tolerances.Entry * terms.Count * moduli);
    }

    /// <summary>Twice the reach of the farthest pole.</summary>
    public double BeyondPoles()
        => 2 * Enumerable.Range(0, terms.Count).Select(k => Math.Abs(terms.Center[k]) + Math.Sqrt(Math.Abs(terms.Square[k]))).DefaultIfEmpty(1).Max();

    /// <summary><c>(law ∘ N) + P·rest</c> with the anchor's numerators <c>N</c> and pole <c>P = t² + h</c>; without damping <c>t</c> is enough.</summary>
    private CellBounds Cleared(int anchor, double t, double radius, double law, double lawSup, double lawModuli, CellBounds rest)
    {
        double h = terms.Square[anchor];
        var (i0, i1, r0, r1) = (terms.Imaginary0[anchor], terms.Imaginary1[anchor], terms.Real0[anchor], terms.Real1[anchor]);
        double reach = Math.Abs(t) + radius;
        double restSup = Math.Abs(rest.Value) + (rest.FirstBound * radius);
        if (h == 0)
        {
            return new CellBounds(
                (law * i1) + (_v * r1) + (t * rest.Value),
                (-_a * i1) + rest.Value + (t * rest.Slope),
                (Math.Abs(_a) * Math.Abs(i1)) + restSup + (reach * rest.FirstBound),
                (2 * rest.FirstBound) + (reach * rest.SecondBound),
                (Tolerances.Entry * ((lawModuli * Math.Abs(i1)) + Math.Abs(_v * r1))) + (Math.Abs(t) * rest.Rounding),
                double.PositiveInfinity);
        }

        double pole = (t * t) + h;
        double poleSup = (reach * reach) + h;
        double imaginary = i0 + (i1 * t);
        double imaginarySup = Math.Abs(imaginary) + (Math.Abs(i1) * radius);
        return new CellBounds(
            (law * imaginary) + (_v * (r0 + (r1 * t))) + (pole * rest.Value),
            (-_a * imaginary) + (law * i1) + (_v * r1) + (2 * t * rest.Value) + (pole * rest.Slope),
            (Math.Abs(_a) * imaginarySup) + (lawSup * Math.Abs(i1)) + Math.Abs(_v * r1) + (2 * reach * restSup) + (poleSup * rest.FirstBound),
            (2 * Math.Abs(_a * i1)) + (2 * restSup) + (4 * reach * rest.FirstBound) + (poleSup * rest.SecondBound),
            (Tolerances.Entry * ((lawModuli * (Math.Abs(i0) + Math.Abs(i1 * t))) + (Math.Abs(_v) * (Math.Abs(r0) + Math.Abs(r1 * t))))) + (pole * rest.Rounding),
            double.PositiveInfinity);
    }
}
