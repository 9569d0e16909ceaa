using System.Numerics;

namespace GainMargin;

/// <summary>
/// One loop as a sum of real second-order terms. On the axis, with <c>z = ω²</c>, the loop without its law is
/// <c>β(iω) = R(z) + iω·I(z)</c>; each term gives <c>R = (R₀ + R₁t)/(t² + h)</c>, <c>I = (I₀ + I₁t)/(t² + h)</c> with
/// <c>t = z − c</c> the distance from its pole. Real numerators, so that bounds do not grow as damping falls. The law
/// <c>(p − a·z, v)</c> stays a factor. The onset condition along the path is <c>1 + (g − g₀)·L(iω) = 0</c>.
/// </summary>
/// <param name="Center">Real part <c>c</c> of the pole in <c>z</c>.</param>
/// <param name="Square">Squared imaginary part <c>h</c>; negative for two real roots.</param>
/// <param name="Real0">Constant of the real numerator.</param>
/// <param name="Real1">Slope of the real numerator.</param>
/// <param name="Imaginary0">Constant of the imaginary numerator.</param>
/// <param name="Imaginary1">Slope of the imaginary numerator.</param>
/// <param name="Constant">Value of <c>β</c> at infinity.</param>
/// <param name="Law">Ratios on <c>β</c>; a law without position acts on the velocity, so that no factor vanishes at <c>ω = 0</c>.</param>
/// <param name="BaseValue">Value <c>g₀</c> of the path at which the terms were computed.</param>
internal sealed record LoopTerms(
    double[] Center, double[] Square, double[] Real0, double[] Real1, double[] Imaginary0, double[] Imaginary1,
    double Constant, FeedbackRatios Law, double BaseValue)
{
    public int Count => Center.Length;

    /// <summary>Largest relative uncertainty of a pole that terms are trusted with.</summary>
    private const double TrustedPoles = 1e-9;

    /// <summary>
    /// Terms of the only moving loop of a path, or <see langword="null"/> where several move, a residual flexibility is
    /// fed back, or no base value gives well-conditioned poles.
    /// </summary>
    public static LoopTerms? Of(SweepModel sweep)
    {
        int[] moving = [.. Enumerable.Range(0, sweep.Polynomials.Count).Where(k => sweep.Polynomials[k].Length > 1)];
        if (moving.Length != 1 || sweep.Polynomials[moving[0]].Length != 2 || sweep.Model.Hat.Residual is not null)
        {
            return null;
        }

        var range = sweep.Path.Range;
        double[] candidates = [0, 0.381966, 0.618034, 0.145898, 0.0557, 0.0081, 0.854102];
        ModalSolution? best = null;
        double bestValue = 0;
        double bestScore = double.PositiveInfinity;
        foreach (double candidate in candidates)
        {
            double value = candidate == 0 ? Math.Clamp(0, range.From, range.To) : range.From + (candidate * range.Width);
            var solution = sweep.RootsAt(value).Solution;
            double score = Enumerable.Range(0, solution.Values.Length)
                .Select(i => solution.Uncertainty[i] / Complex.Abs(solution.Values[i])).DefaultIfEmpty(0).Max();
            if (score < bestScore)
            {
                (best, bestValue, bestScore) = (solution, value, score);
            }

            if (score < TrustedPoles)
            {
                break;
            }
        }

        return best is null || !(bestScore < TrustedPoles) ? null : Build(sweep, best, bestValue, moving[0]);
    }

    private static LoopTerms Build(SweepModel sweep, ModalSolution solution, double baseValue, int loop)
    {
        var model = sweep.Model.Hat;
        var ratios = model.Ratios[loop];
        int order = ratios.Position != 0 ? 0 : ratios.Rate != 0 ? 1 : 2;
        double scale = sweep.Polynomials[loop][1];
        var residues = solution.Residues(loop);
        var builder = new Builder();
        int? waiting = null;
        for (int i = 0; i < residues.Length; i++)
        {
            var s = solution.Values[i];
            var residue = scale * residues[i] * (order == 0 ? Complex.One : order == 1 ? s : s * s);
            residues[i] = residue;
            if (s.Imaginary > 0)
            {
                builder.AddPair(s, residue);
            }
            else if (s.Imaginary == 0 && waiting is { } first)
            {
                builder.AddReal(solution.Values[first].Real, residues[first].Real, s.Real, residue.Real);
                waiting = null;
            }
            else if (s.Imaginary == 0)
            {
                waiting = i;
            }
        }

        if (waiting is { } last)
        {
            builder.AddReal(solution.Values[last].Real, residues[last].Real, solution.Values[last].Real, 0);
        }

        var law = order switch
        {
            0 => ratios,
            1 => new FeedbackRatios { Position = ratios.Rate, Rate = ratios.Acceleration },
            _ => new FeedbackRatios { Position = ratios.Acceleration },
        };
        return builder.Build(order == 2 ? scale * solution.DirectAcceleration(loop) : 0, law, baseValue);
    }

    private sealed class Builder
    {
        private readonly List<(double C, double H, double R0, double R1, double I0, double I1)> _terms = [];

        /// <summary><c>r/(s − λ) + r̄/(s − λ̄) = (e·s + f)/(s² + d·s + κ)</c>.</summary>
        public void AddPair(Complex root, Complex residue)
        {
            double e = 2 * residue.Real;
            double f = -2 * (residue * Complex.Conjugate(root)).Real;
            double d = -2 * root.Real;
            double imaginary = 2 * root.Real * root.Imaginary;
            Add((root.Imaginary - root.Real) * (root.Imaginary + root.Real), imaginary * imaginary, e, f, d);
        }

        public void AddReal(double root1, double residue1, double root2, double residue2)
        {
            double half = 0.5 * (root1 - root2) * (root1 + root2);
            Add(
                -0.5 * ((root1 * root1) + (root2 * root2)), -(half * half), residue1 + residue2,
                -((residue1 * root2) + (residue2 * root1)), -(root1 + root2));
        }

        public LoopTerms Build(double constant, FeedbackRatios law, double baseValue)
        {
            var sorted = _terms.OrderBy(t => t.C).ToArray();
            return new LoopTerms(
                [.. sorted.Select(t => t.C)], [.. sorted.Select(t => t.H)], [.. sorted.Select(t => t.R0)], [.. sorted.Select(t => t.R1)],
                [.. sorted.Select(t => t.I0)], [.. sorted.Select(t => t.I1)], constant, law, baseValue);
        }

        private void Add(double c, double h, double e, double f, double d)
        {
            if (e != 0 || f != 0)
            {
                _terms.Add((c, h, (0.5 * f * d * d) + (e * d * c), (e * d) - f, (0.5 * e * d * d) - (f * d), -e));
            }
        }
    }
}
