using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>All roots of a closed loop at one value from the terms of its loop, in normalised time.</summary>
/// <param name="Value">The value of the path.</param>
/// <param name="Roots">Roots that the loop moves, and those that it does not.</param>
/// <param name="Uncertainty">Rounding of each.</param>
/// <param name="Count">How they are spread.</param>
/// <param name="IsClear">Whether every root that the loop moves lies well away from the axis, or on it exactly.</param>
internal sealed record TermSample(double Value, Complex[] Roots, double[] Uncertainty, RootCount Count, bool IsClear);

/// <summary>Solves the secular equation of a loop at any value, each time from the nearest value solved before.</summary>
internal sealed class RootSampler(LoopTerms terms)
{
    /// <summary>
    /// Multiples of its uncertainty that a root must lie off the axis to contradict the books: the uncertainty is that of the
    /// equation's roots, not of the terms it is made of.
    /// </summary>
    private const double Clear = 100;

    private readonly SortedList<double, SecularSolution> _solved = [];

    public TermSample? At(double value)
    {
        if (Solve(value) is not { } solution)
        {
            return null;
        }

        int[] moving = [.. Enumerable.Range(0, solution.Roots.Length).OrderBy(i => Complex.Abs(solution.Roots[i])).Skip(terms.HiddenZeros).Order()];
        var fixedRoots = terms.Invisible.Concat(terms.Invisible.Where(p => p.Value.Imaginary > 0).Select(p => p with { Value = Complex.Conjugate(p.Value) })).ToArray();
        Complex[] roots = [.. moving.Select(i => solution.Roots[i]), .. fixedRoots.Select(p => p.Value)];
        double[] uncertainty = [.. moving.Select(i => solution.Uncertainty[i]), .. fixedRoots.Select(p => p.Uncertainty)];
        var verdicts = moving.Select(i => VerdictOf(solution, i)).Concat(fixedRoots.Select(p => p.Verdict));
        bool clear = moving.All(i => VerdictOf(solution, i) == StabilityVerdict.Marginal || Math.Abs(solution.Roots[i].Real) > Clear * solution.Uncertainty[i]);
        return new TermSample(value, roots, uncertainty, RootCount.Of(verdicts), clear);
    }

    private SecularSolution? Solve(double value)
    {
        if (_solved.TryGetValue(value, out var known))
        {
            return known;
        }

        var start = _solved.Count == 0 ? null : _solved.MinBy(s => Math.Abs(s.Key - value)).Value;
        double delta = value - terms.BaseValue;
        var solution = SecularRoots.Find(terms.Secular, delta, start?.Roots) ?? (start is null ? null : SecularRoots.Find(terms.Secular, delta, null));
        if (solution is not null)
        {
            _solved[value] = solution;
        }

        return solution;
    }

    /// <summary>
    /// In a lossless loop roots are mirrored in the imaginary axis: a root on the axis within rounding that has no other near it
    /// is its own mirror image, and so on the axis.
    /// </summary>
    private StabilityVerdict VerdictOf(SecularSolution solution, int i)
    {
        var (s, uncertainty) = (solution.Roots[i], solution.Uncertainty[i]);
        if (Math.Abs(s.Real) > uncertainty)
        {
            return s.Real > 0 ? StabilityVerdict.Unstable : StabilityVerdict.Stable;
        }

        bool alone = terms.IsLossless && Enumerable.Range(0, solution.Roots.Length)
            .All(j => j == i || Complex.Abs(solution.Roots[j] - s) > 4 * (uncertainty + solution.Uncertainty[j]));
        return alone || s == 0 ? StabilityVerdict.Marginal : StabilityVerdict.Undecided;
    }
}
