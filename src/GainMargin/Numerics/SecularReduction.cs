using System.Numerics;

namespace GainMargin.Numerics;

/// <summary>
/// <c>1 + δ·L(s)</c> as <c>f∞ + Σ(e·s + f)/(s² + d·s + κ) + Σ r/(s − λ)</c>: the law is multiplied into each term and divided by its
/// denominator, frequencies are taken over a power of two of their own size, and poles that no gain moves are set aside.
/// </summary>
internal sealed class SecularReduction
{
    /// <summary>A residue below this, and a numerator's constant below its square, moves its pole by less than a double can hold.</summary>
    private const double Nothing = 1e-70;

    private readonly List<FixedRoot> _fixed = [];
    private readonly List<QuadraticTerm> _quadratics = [];
    private readonly List<SimpleTerm> _simples = [];

    private SecularReduction()
    {
    }

    /// <summary>Poles that are roots at every gain.</summary>
    public IReadOnlyList<FixedRoot> Fixed => _fixed;

    public IReadOnlyList<QuadraticTerm> Quadratics => _quadratics;

    public IReadOnlyList<SimpleTerm> Simples => _simples;

    /// <summary>Number of roots that are not fixed.</summary>
    public int Order => (2 * _quadratics.Count) + _simples.Count;

    /// <summary>Binary exponent of the unit that frequencies are taken in.</summary>
    public int Exponent { get; private set; }

    /// <summary><c>f∞</c>, and the sum of the moduli it consists of.</summary>
    public double Leading { get; private set; }

    public double LeadingModulus { get; private set; }

    /// <summary>Whether <c>f∞</c> is clear of its rounding: where it vanishes roots are lost through infinity.</summary>
    public bool IsOrderKnown => Math.Abs(Leading) > 16 * Tolerances.Entry * LeadingModulus;

    /// <summary>What a moment that should vanish adds to <c>f</c> per unit of <c>|s|</c>, and of <c>|s|²</c>.</summary>
    public (double Linear, double Square) Excess { get; private set; }

    /// <summary>Sum of the roots that are not fixed, <c>Σ poles − (Σe + Σr)/f∞</c>.</summary>
    public double Trace
        => _quadratics.Sum(t => -t.D) + _simples.Sum(t => t.Pole) - ((_quadratics.Sum(t => t.E) + _simples.Sum(t => t.Residue)) / Leading);

    /// <summary>Rounding error of <see cref="Trace"/>.</summary>
    public double TraceError
    {
        get
        {
            double moment = _quadratics.Sum(t => t.EModulus) + _simples.Sum(t => t.ResidueModulus);
            double poles = _quadratics.Sum(t => Math.Abs(t.D)) + _simples.Sum(t => Math.Abs(t.Pole));
            return Tolerances.Entry * (poles + (moment / Math.Abs(Leading) * (1 + (LeadingModulus / Math.Abs(Leading)))));
        }
    }

    /// <summary>Returns <see langword="null"/> where data are not finite.</summary>
    public static SecularReduction? Of(SecularTerms terms, double delta)
    {
        double largest = 0;
        for (int k = 0; k < terms.D.Length; k++)
        {
            largest = Math.Max(largest, Math.Max(Math.Abs(terms.D[k]), Math.Sqrt(Math.Abs(terms.Kappa[k]))));
        }

        foreach (double pole in terms.Root)
        {
            largest = Math.Max(largest, Math.Abs(pole));
        }

        if (!double.IsFinite(largest))
        {
            return null;
        }

        var reduction = new SecularReduction { Exponent = largest > 0 ? Math.ILogB(largest) : 0 };
        return reduction.TryAdd(terms, delta) ? reduction : null;
    }

    private bool TryAdd(SecularTerms terms, double delta)
    {
        double p = delta * terms.Position;
        double v = delta * Math.ScaleB(terms.Rate, Exponent);
        double a = delta * Math.ScaleB(terms.Acceleration, 2 * Exponent);
        double moment = 0;
        Leading = 1 + (p * terms.Constant);
        LeadingModulus = 1 + Math.Abs(p * terms.Constant);
        bool isFinite = true;
        for (int k = 0; k < terms.D.Length; k++)
        {
            double d = Math.ScaleB(terms.D[k], -Exponent);
            double kappa = Math.ScaleB(terms.Kappa[k], -2 * Exponent);
            double e = Math.ScaleB(terms.E[k], -Exponent);
            double f = Math.ScaleB(terms.F[k], -2 * Exponent);
            double next = f - (e * d);
            double nextModulus = Math.Abs(f) + Math.Abs(e * d);
            moment += e;
            Leading += (v * e) + (a * next);
            LeadingModulus += Math.Abs(v * e) + (Math.Abs(a) * nextModulus);
            var term = new QuadraticTerm(
                d, kappa, (p * e) + (v * next) - (a * ((e * kappa) + (next * d))), (p * f) - (v * e * kappa) - (a * next * kappa),
                Math.Abs(p * e) + (Math.Abs(v) * nextModulus) + (Math.Abs(a) * (Math.Abs(e * kappa) + (nextModulus * Math.Abs(d)))),
                Math.Abs(p * f) + Math.Abs(v * e * kappa) + (Math.Abs(a * kappa) * nextModulus));
            isFinite &= double.IsFinite(d + kappa + term.E + term.F + term.EModulus + term.FModulus);
            Add(term);
        }

        for (int j = 0; j < terms.Root.Length; j++)
        {
            double pole = Math.ScaleB(terms.Root[j], -Exponent);
            double residue = Math.ScaleB(terms.Residue[j], -Exponent);
            moment += residue;
            Leading += (v * residue) + (a * residue * pole);
            LeadingModulus += Math.Abs(v * residue) + Math.Abs(a * residue * pole);
            var term = new SimpleTerm(
                pole, residue * (p + (pole * (v + (pole * a)))),
                Math.Abs(residue) * (Math.Abs(p) + (Math.Abs(pole) * (Math.Abs(v) + Math.Abs(pole * a)))));
            isFinite &= double.IsFinite(pole + term.Residue + term.ResidueModulus);
            Add(term);
        }

        Excess = (Math.Abs(a * moment) + Math.Abs(v * terms.Constant), Math.Abs(a * terms.Constant));
        return isFinite && double.IsFinite(Leading + LeadingModulus + Excess.Linear + Excess.Square);
    }

    private void Add(QuadraticTerm term)
    {
        if (term.D == 0 && term.Kappa == 0 && Math.Abs(term.F) < Nothing * Nothing)
        {
            _fixed.Add(new FixedRoot(Complex.Zero, 0));
            Add(new SimpleTerm(0, term.E, term.EModulus));
        }
        else if (Math.Abs(term.E) < Nothing && Math.Abs(term.F) < Nothing * Nothing)
        {
            _fixed.Add(FixedRoot.Of(term, new Complex(term.X1, term.Y)));
            _fixed.Add(FixedRoot.Of(term, new Complex(term.X2, -term.Y)));
        }
        else
        {
            _quadratics.Add(term);
        }
    }

    private void Add(SimpleTerm term)
    {
        if (Math.Abs(term.Residue) < Nothing)
        {
            _fixed.Add(new FixedRoot(term.Pole, Tolerances.Entry * Math.Abs(term.Pole)));
        }
        else
        {
            _simples.Add(term);
        }
    }

    internal readonly record struct FixedRoot(Complex Value, double Uncertainty)
    {
        /// <summary>A pole of the term, known as well as <c>d</c> and <c>κ</c> are.</summary>
        public static FixedRoot Of(QuadraticTerm term, Complex pole)
        {
            double size = Complex.Abs(pole);
            double noise = Tolerances.Entry * ((size * (size + Math.Abs(term.D))) + Math.Abs(term.Kappa));
            double slope = Complex.Abs((2 * pole) + term.D);
            return new FixedRoot(pole, new SecularPoint(Complex.Zero, 0, noise, slope, 2, Tolerances.Entry / 2 * size).Uncertainty);
        }
    }

    /// <summary><c>r/(s − λ)</c> with the sum of moduli that <c>r</c> consists of.</summary>
    internal readonly record struct SimpleTerm(double Pole, double Residue, double ResidueModulus);

    /// <summary><c>(e·s + f)/(s² + d·s + κ)</c> with the sums of moduli that <c>e</c> and <c>f</c> consist of.</summary>
    internal readonly record struct QuadraticTerm
    {
        public QuadraticTerm(double d, double kappa, double e, double f, double eModulus, double fModulus)
        {
            (D, Kappa, E, F, EModulus, FModulus) = (d, kappa, e, f, eModulus, fModulus);
            X1 = X2 = -d / 2;
            double square = Math.FusedMultiplyAdd(d / 2, d / 2, -kappa);
            if (square > 0)
            {
                X1 += Math.CopySign(Math.Sqrt(square), X1);
                X2 = kappa / X1;
            }
            else
            {
                Y = Math.Sqrt(-square);
            }
        }

        public double D { get; }

        public double Kappa { get; }

        public double E { get; }

        public double F { get; }

        public double EModulus { get; }

        public double FModulus { get; }

        /// <summary>The poles are <c>x₁ + iy</c> and <c>x₂ − iy</c>, where <c>x₁ = x₂</c> or <c>y = 0</c>.</summary>
        public double X1 { get; }

        public double X2 { get; }

        public double Y { get; }
    }
}
