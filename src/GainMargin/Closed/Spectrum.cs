using System.Collections.Immutable;

namespace GainMargin;

/// <summary>All <c>2n</c> roots of a closed loop, by frequency, each with its own uncertainty, and what they say together.</summary>
public sealed class Spectrum
{
    internal Spectrum(ImmutableArray<SpectrumRoot> roots, StabilityVerdict verdict, ImmutableArray<DecidingFact> facts)
    {
        Roots = roots;
        Verdict = verdict;
        Facts = facts;
    }

    /// <summary>The roots by ascending frequency, then by ascending real part; conjugates stand next to each other.</summary>
    public ImmutableArray<SpectrumRoot> Roots { get; }

    /// <summary>How many grow, decay, lie on the axis, or cannot be told.</summary>
    public RootCount Count => RootCount.Of(Roots.Select(r => r.Verdict));

    /// <summary>The verdict of the count, or where the count leaves it open, of a theorem that decides.</summary>
    public StabilityVerdict Verdict { get; }

    /// <summary>The theorems that decide on their own, if any.</summary>
    public ImmutableArray<DecidingFact> Facts { get; }

    /// <summary>Verdict and count.</summary>
    public override string ToString() => $"{Verdict.ToString().ToLowerInvariant()}: {Count}";
}
