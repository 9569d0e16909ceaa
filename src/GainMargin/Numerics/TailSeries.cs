namespace GainMargin.Numerics;

/// <summary>
/// A loop beyond all its poles as power series in <c>y = ρ/z</c>, <c>ρ</c> the reach of the poles: moments are summed over the terms
/// before they are bounded, since those of a receptance cancel, the more of them the farther sensor and actuator are apart.
/// </summary>
internal sealed class TailSeries
{
    private const int Order = 40;

    private readonly double[] _real = new double[Order];
    private readonly double[] _realRounding = new double[Order];
    private readonly double[] _imaginary = new double[Order];
    private readonly double[] _imaginaryRounding = new double[Order];
    private readonly double _rest;
    private readonly double _constant;

    public TailSeries(PairTerms terms)
    {
        double reach = Enumerable.Range(0, terms.Count).Select(terms.ReachOf).DefaultIfEmpty(0).Max();
        Reach = reach > 0 ? reach : 1;
        _constant = terms.Constant;
        for (int k = 0; k < terms.Count; k++)
        {
            var (r0, r1, i0, i1) = terms.NumeratorsOf(k);
            double c = terms.CenterOf(k) / Reach;
            double product = (c * c) + (terms.SquareOf(k) / Reach / Reach);
            var (real0, imaginary0) = ((r0 / Reach) - (r1 * c), (i0 / Reach) - (i1 * c));
            double before = 0;
            double here = 1;
            for (int j = 0; j < Order; j++)
            {
                // 1/P = z⁻²·Σqⱼyʲ
                _real[j] += (r1 * here) + (real0 * before);
                _imaginary[j] += (i1 * here) + (imaginary0 * before);
                // Roots within the reach: |qⱼ| ≤ j + 1.
                _realRounding[j] += ((j + 1) * Math.Abs(r1)) + (j * (Math.Abs(r0 / Reach) + Math.Abs(r1 * c)));
                _imaginaryRounding[j] += ((j + 1) * Math.Abs(i1)) + (j * (Math.Abs(i0 / Reach) + Math.Abs(i1 * c)));
                (before, here) = (here, (2 * c * here) - (product * before));
            }
        }

        _rest = 2 * (_realRounding[^1] + _imaginaryRounding[^1]);
        for (int j = 0; j < Order; j++)
        {
            _realRounding[j] *= Tolerances.Entry;
            _imaginaryRounding[j] *= Tolerances.Entry;
        }
    }

    /// <summary><c>ρ</c>; one where all poles are at zero.</summary>
    public double Reach { get; }

    /// <summary>Bounds of the moduli of <c>R</c>, <c>zR</c> and <c>zI</c> of the terms for all <c>z</c> from <paramref name="from"/> on, at least twice the reach.</summary>
    public (double Real, double TimesReal, double TimesImaginary) Bounds(double from)
    {
        double real = Sum(from, j => Math.Abs(_real[j]) + _realRounding[j]);
        double imaginary = Sum(from, j => Math.Abs(_imaginary[j]) + _imaginaryRounding[j]);
        return ((real / from) + Math.Abs(_constant), _constant == 0 ? real : double.PositiveInfinity, imaginary);
    }

    /// <summary>Bounds of the loop's real part, <c>(p − a·z)R − v·zI</c>, for all <c>z</c> from <paramref name="from"/> on.</summary>
    public (double Low, double High) LoopBounds(double from, RatioFactor law)
    {
        double Coefficient(int j) => (j == 0 ? 0 : law.Position / Reach * _real[j - 1]) - (law.Acceleration * _real[j]) - (law.Rate * _imaginary[j]);
        double Rounding(int j) => (j == 0 ? 0 : Math.Abs(law.Position / Reach) * _realRounding[j - 1])
            + (Math.Abs(law.Acceleration) * _realRounding[j]) + (Math.Abs(law.Rate) * _imaginaryRounding[j]);
        double size = Math.Abs(law.Position / Reach) + Math.Abs(law.Acceleration) + Math.Abs(law.Rate);
        double rest = Sum(from, j => (j == 0 ? 0 : Math.Abs(Coefficient(j))) + Rounding(j)) + ((size - 1) * Rest(from));
        double limit = Coefficient(0) + (law.Position * _constant);
        rest += Tolerances.Entry * Math.Abs(law.Position * _constant);
        return law.Acceleration == 0 || _constant == 0 ? (limit - rest, limit + rest) : (double.NegativeInfinity, double.PositiveInfinity);
    }

    /// <summary>
    /// Whether the loop's imaginary part keeps its sign for all <c>z</c> from <paramref name="from"/> on: the first coefficient of
    /// <c>z·I</c> outweighs the others. Of a receptance fed back with an acceleration <c>zI</c> tends to zero; its rounding would be
    /// multiplied by <c>z</c>.
    /// </summary>
    public bool KeepsSign(double from, RatioFactor law)
    {
        double Coefficient(int j) => (law.Position * _imaginary[j]) + (law.Rate * _real[j])
            - (j + 1 < Order ? law.Acceleration * Reach * _imaginary[j + 1] : 0);
        double Rounding(int j) => (Math.Abs(law.Position) * _imaginaryRounding[j]) + (Math.Abs(law.Rate) * _realRounding[j])
            + (j + 1 < Order ? Math.Abs(law.Acceleration) * Reach * _imaginaryRounding[j + 1] : 0);
        double size = Math.Abs(law.Position) + Math.Abs(law.Rate) + (Math.Abs(law.Acceleration) * Reach);
        double growing = law.Rate * _constant;
        if (growing != 0)
        {
            // A constant grows with z against the others, and wins in the end; a first coefficient of its sign helps.
            double help = Coefficient(0) * growing > 0 ? Math.Abs(Coefficient(0)) : 0;
            return (Math.Abs(growing) * from) + (2 * help) > Sum(from, j => Math.Abs(Coefficient(j)) + Rounding(j)) + ((size - 1) * Rest(from));
        }

        // Coefficients that vanish exactly, as those of modes do, leave the lead to the next.
        int lead = 0;
        while (lead < Order - 1 && Coefficient(lead) == 0 && Rounding(lead) == 0)
        {
            lead++;
        }

        double rest = Sum(from, j => (j <= lead ? 0 : Math.Abs(Coefficient(j))) + Rounding(j)) + ((size - 1) * Rest(from));
        return Math.Abs(Coefficient(lead)) * Math.Pow(Reach / from, lead) > rest;
    }

    private double Rest(double from) => _rest * Math.Pow(Reach / from, Order);

    private double Sum(double from, Func<int, double> term)
    {
        double y = Reach / from;
        double sum = 0;
        double power = 1;
        for (int j = 0; j < Order; j++, power *= y)
        {
            sum += term(j) * power;
        }

        return sum + Rest(from);
    }
}
