using System.Collections.Immutable;
using System.Numerics;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>The roots of a closed loop, polished where needed, in the units of the model.</summary>
internal static class SpectrumFinder
{
    public static Spectrum Run(ClosedLoop closed, CancellationToken cancellation)
    {
        cancellation.ThrowIfCancellationRequested();
        var model = new NormalisedModel(closed.Pencil);
        var hat = model.ClosedHat(closed.Gains);
        var rigid = RigidMotion.Of(model, closed.Gains);
        var roots = RootSet.Polished(model, closed.Gains, rigid);
        cancellation.ThrowIfCancellationRequested();
        var even = model.Even.At(closed.Gains);
        var all = ImmutableArray.CreateBuilder<SpectrumRoot>();
        AddZeroRoots(all, closed, model, hat, rigid);
        for (int i = 0; i < roots.Values.Length; i++)
        {
            var right = model.HatToEven(roots.Solution.Right[i]);
            var left = model.HatToEven(roots.Solution.Left[i]);
            all.Add(new SpectrumRoot(
                roots.Values[i] * model.Rate, roots.Uncertainty[i] * model.Rate, roots.VerdictOf(i),
                ModeMeasures.BackwardError(even, roots.Values[i], right),
                NamedVector.Scaled(closed.Structure.Dofs, model.EvenToPhysical(right)),
                NamedVector.Scaled(closed.Structure.Dofs, model.EvenToPhysical(left))));
        }

        var facts = SplitFinder.Run(closed).Facts;
        var sorted = all.OrderBy(r => Math.Abs(r.Value.Imaginary)).ThenBy(r => r.Value.Real).ToImmutableArray();
        return new Spectrum(sorted, Decide(RootCount.Of(sorted.Select(r => r.Verdict)), facts), facts);
    }

    /// <summary>The count decides; a theorem only where the count leaves it open.</summary>
    public static StabilityVerdict Decide(RootCount count, ImmutableArray<DecidingFact> facts)
    {
        var byCount = count.Verdict;
        return byCount == StabilityVerdict.Undecided && !facts.IsEmpty ? facts[0].Verdict : byCount;
    }

    private static void AddZeroRoots(
        ImmutableArray<SpectrumRoot>.Builder all, ClosedLoop closed, NormalisedModel model, QuadraticPencil hat, RigidMotion rigid)
    {
        int n = hat.Order;
        double tolerance = Tolerances.NullSpace(n, Dense.Norm(hat.Stiffness));
        var basis = rigid.Free.Append(rigid.Drifting);
        if (basis.ColumnCount == 0)
        {
            return;
        }

        var other = Dense.NullSpace(rigid.OnLeft ? hat.Stiffness : hat.Stiffness.Transpose(), tolerance).Null;
        for (int j = 0; j < basis.ColumnCount; j++)
        {
            var known = Mode(basis.Column(j));
            var counterpart = j < other.ColumnCount ? Mode(other.Column(j)) : known;
            var (right, left) = rigid.OnLeft ? (counterpart, known) : (known, counterpart);
            for (int k = 0; k < (j < rigid.Free.ColumnCount ? 2 : 1); k++)
            {
                all.Add(new SpectrumRoot(0, 0, StabilityVerdict.Marginal, 0, right, left));
            }
        }

        NamedVector Mode(IEnumerable<double> column)
            => NamedVector.Scaled(closed.Structure.Dofs, model.EvenToPhysical(model.HatToEven([.. column.Select(v => new Complex(v, 0))])));
    }
}
