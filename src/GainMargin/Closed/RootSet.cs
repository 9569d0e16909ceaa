using System.Numerics;

namespace GainMargin;

/// <summary>All roots at one set of gains with what is known of each, in normalised time; zero roots of rigid motion first.</summary>
internal sealed class RootSet
{
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
    {
        var roots = Raw(model, gains, rigid);
        var closed = model.Even.At(gains);
        QuadraticPencil? moduli = null;
        for (int i = 0; i < roots.Values.Length; i++)
        {
            bool conjugateFollows = roots.Values[i].Imaginary > 0;
            if (roots.VerdictOf(i) == StabilityVerdict.Undecided && roots.IsSeparate(i))
            {
                moduli ??= model.Even.ModuliAt(gains);
                roots.Improve(i, conjugateFollows, RootPolish.Run(
                    closed, moduli, roots.Values[i],
                    model.HatToEven(roots.Solution.Right[i]), model.HatToEven(roots.Solution.Left[i])));
            }

            i += conjugateFollows ? 1 : 0;
        }

        return roots;
    }

    public StabilityVerdict VerdictOf(int i)
        => Values[i].Real > Uncertainty[i] ? StabilityVerdict.Unstable
        : Values[i].Real < -Uncertainty[i] ? StabilityVerdict.Stable
        : StabilityVerdict.Undecided;

    private bool IsSeparate(int i)
    {
        if (Rigid.ZeroRoots > 0 && Complex.Abs(Values[i]) <= Uncertainty[i])
        {
            return false;
        }

        for (int j = 0; j < Values.Length; j++)
        {
            if (j != i && Complex.Abs(Values[i] - Values[j]) <= Uncertainty[i] + Uncertainty[j])
            {
                return false;
            }
        }

        return true;
    }

    private void Improve(int i, bool conjugateFollows, PolishedRoot? polished)
    {
        if (polished is null || polished.Uncertainty >= Uncertainty[i] || Complex.Abs(polished.Value - Values[i]) > 2 * Uncertainty[i])
        {
            return;
        }

        Values[i] = polished.Value;
        Uncertainty[i] = polished.Uncertainty;
        if (conjugateFollows)
        {
            Values[i + 1] = Complex.Conjugate(polished.Value);
            Uncertainty[i + 1] = polished.Uncertainty;
        }
    }
}
