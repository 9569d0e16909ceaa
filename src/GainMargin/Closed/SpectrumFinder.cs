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
        var hat = model.Hat.At(closed.Gains);
        var rigid = RigidMotion.Find(hat.Stiffness, hat.Damping);
        var roots = RootSet.Polished(model, closed.Gains, rigid);
        cancellation.ThrowIfCancellationRequested();
        var even = model.Even.At(closed.Gains);
        var all = ImmutableArray.CreateBuilder<SpectrumRoot>();
        AddZeroRoots(all, closed, model, rigid);
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
        var sorted = all.OrderBy(r => Math.Abs(r.Value.Imaginary)).ThenBy(r => r.Value.Real).ThenByDescending(r => r.Value.Imaginary).ToImmutableArray();
        return new Spectrum(sorted, Decide(RootCount.Of(sorted.Select(r => r.Verdict)), facts), facts);
    }

    /// <summary>The count decides; a theorem only where the count leaves it open.</summary>
    public static StabilityVerdict Decide(RootCount count, ImmutableArray<DecidingFact> facts)
    {
        var byCount = count.Verdict;
        return byCount == StabilityVerdict.Undecided && !facts.IsEmpty ? facts[0].Verdict : byCount;
    }

    private static void AddZeroRoots(ImmutableArray<SpectrumRoot>.Builder all, ClosedLoop closed, NormalisedModel model, RigidMotion rigid)
    {
        foreach (var (basis, roots) in new[] { (rigid.Drifting, 1), (rigid.Free, 2) })
        {
            for (int j = 0; j < basis.ColumnCount; j++)
            {
                var even = model.HatToEven([.. basis.Column(j).Select(v => new Complex(v, 0))]);
                var mode = NamedVector.Scaled(closed.Structure.Dofs, model.EvenToPhysical(even));
                for (int k = 0; k < roots; k++)
                {
                    all.Add(new SpectrumRoot(0, 0, StabilityVerdict.Marginal, 0, mode, mode));
                }
            }
        }
    }
}

/// <summary>Measures of a mode that several results carry.</summary>
internal static class ModeMeasures
{
    public static double BackwardError(QuadraticPencil pencil, Complex s, Complex[] v)
    {
        double size = Complex.Abs(s);
        double scale = ((size * size * pencil.Mass.FrobeniusNorm()) + (size * pencil.Damping.FrobeniusNorm()) + pencil.Stiffness.FrobeniusNorm()) * Dense.Norm2(v);
        return scale == 0 ? 0 : Dense.Norm2(pencil.Times(s, v)) / scale;
    }
}
