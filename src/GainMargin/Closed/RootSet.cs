using System.Numerics;

namespace GainMargin;

/// <summary>All roots at one set of gains with what is known of each, in normalised time; zero roots of rigid motion first.</summary>
internal sealed class RootSet
{
    private const double FirstOrder = 100;

    private RootSet(ModalSolution solution, RigidMotion rigid)
    {
        Solution = solution;
        Rigid = rigid;
        Values = solution.Values;
        Uncertainty = solution.Uncertainty;
    }

    public ModalSolution Solution { get; }

    public RigidMotion Rigid { get; }

    public Complex[] Values { get; }

    public double[] Uncertainty { get; }

    public RootCount Count
        => RootCount.Of(Enumerable.Repeat(StabilityVerdict.Marginal, Rigid.ZeroRoots).Concat(Enumerable.Range(0, Values.Length).Select(VerdictOf)));

    /// <summary>Roots straight from the decomposition.</summary>
    public static RootSet Raw(NormalisedModel model, ReadOnlySpan<double> gains, RigidMotion rigid)
    {
        var roots = new RootSet(ModalSolution.Solve(model.Hat, model.ClosedHat(gains), rigid), rigid);
        var even = model.Even.At(gains);
        for (int i = 0; i < roots.Values.Length; i++)
        {
            roots.Uncertainty[i] += roots.Values[i].Imaginary < 0
                ? roots.Uncertainty[i - 1] - roots.Uncertainty[i]
                : model.NormalisationError(roots.Values[i], roots.Solution.Left[i], roots.Solution.Right[i], roots.Solution.Slope(i), even);
        }

        return roots;
    }

    /// <summary>Roots whose side of the axis the decomposition leaves open are polished on the evenly scaled matrices.</summary>
    public static RootSet Polished(NormalisedModel model, ReadOnlySpan<double> gains, RigidMotion rigid)
        => Polished(model, gains, rigid, int.MaxValue);

    /// <summary>
    /// The same, unless more than <paramref name="most"/> pairs are open: a structure without damping has all its pairs on the
    /// axis, and polishing tells nothing.
    /// </summary>
    public static RootSet Polished(NormalisedModel model, ReadOnlySpan<double> gains, RigidMotion rigid, int most)
    {
        var roots = Raw(model, gains, rigid);
        int[] open = [.. Enumerable.Range(0, roots.Values.Length)
            .Where(i => roots.Values[i].Imaginary >= 0 && roots.VerdictOf(i) == StabilityVerdict.Undecided)];
        if (open.Length == 0 || open.Length > most)
        {
            return roots;
        }

        var closed = model.Even.At(gains);
        var moduli = model.Even.ModuliAt(gains);
        var polished = Array.ConvertAll(open, i => RootPolish.Run(
            closed, moduli, roots.Values[i], model.HatToEven(roots.Solution.Right[i]), model.HatToEven(roots.Solution.Left[i])));
        var accepted = new List<(int, PolishedRoot)>();
        for (int k = 0; k < open.Length; k++)
        {
            if (polished[k] is { } root && roots.Accepts(open[k], root) && Enumerable.Range(0, open.Length).All(j => j == k || IsApart(root, polished[j])))
            {
                accepted.Add((open[k], root));
            }
        }

        foreach (var (i, root) in accepted)
        {
            roots.Improve(i, root);
        }

        return roots;
    }

    public StabilityVerdict VerdictOf(int i)
        => Values[i].Real > Uncertainty[i] ? StabilityVerdict.Unstable
        : Values[i].Real < -Uncertainty[i] ? StabilityVerdict.Stable
        : StabilityVerdict.Undecided;

    /// <summary>
    /// A first-order bound holds only where it is small against the distance to the next root: the members of a defective
    /// cluster are polished to values of their own, each with a bound of the size of the cluster.
    /// </summary>
    private static bool IsApart(PolishedRoot root, PolishedRoot? other)
        => other is not null && Complex.Abs(root.Value - other.Value) > FirstOrder * (root.Uncertainty + other.Uncertainty);

    /// <summary>
    /// A polished root must lie where the decomposition put it, know itself better, and be neither its own conjugate nor a
    /// zero root that was split off.
    /// </summary>
    private bool Accepts(int i, PolishedRoot polished)
        => polished.Uncertainty < Uncertainty[i]
            && Complex.Abs(polished.Value - Values[i]) <= 2 * Uncertainty[i]
            && (Values[i].Imaginary == 0 || polished.Value.Imaginary > FirstOrder * polished.Uncertainty)
            && (Rigid.ZeroRoots == 0 || Complex.Abs(polished.Value) > polished.Uncertainty);

    private void Improve(int i, PolishedRoot polished)
    {
        bool conjugateFollows = Values[i].Imaginary > 0;
        Values[i] = polished.Value;
        Uncertainty[i] = polished.Uncertainty;
        if (conjugateFollows)
        {
            Values[i + 1] = Complex.Conjugate(polished.Value);
            Uncertainty[i + 1] = polished.Uncertainty;
        }
    }
}
