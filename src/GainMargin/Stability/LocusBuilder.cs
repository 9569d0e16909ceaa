using System.Collections.Immutable;
using System.Numerics;

namespace GainMargin;

/// <summary>Chains the accepted steps into loci.</summary>
internal static class LocusBuilder
{
    public static ImmutableArray<RootLocus> Run(List<SweepStep> steps, double rate)
    {
        var ordered = steps.OrderBy(s => s.Left.Gain).ToList();
        if (ordered.Count == 0)
        {
            return [];
        }

        int n = ordered[0].Left.Values.Length;
        int[] place = [.. Enumerable.Range(0, n)];
        var points = new ImmutableArray<LocusPoint>.Builder[n];
        SweepSample? at = null;
        for (int k = 0; k < n; k++)
        {
            points[k] = ImmutableArray.CreateBuilder<LocusPoint>(ordered.Count + 1);
        }

        foreach (var step in ordered)
        {
            if (!ReferenceEquals(at, step.Left))
            {
                Move(at is null ? place : BranchMatch.Between(at, step.Left), step.Left);
            }

            Move(step.Match, step.Right);
            at = step.Right;
        }

        return [.. points.Select(p => new RootLocus(p.ToImmutable()))];

        void Move(int[] match, SweepSample sample)
        {
            for (int k = 0; k < n; k++)
            {
                place[k] = match[place[k]];
                points[k].Add(new LocusPoint(sample.Gain, sample.Values[place[k]] * new Complex(rate, 0)));
            }
        }
    }
}
