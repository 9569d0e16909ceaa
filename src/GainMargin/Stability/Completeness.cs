using System.Globalization;
using System.Text.Json.Serialization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>How a search covered the range.</summary>
public enum Coverage
{
    /// <summary>Sampled: onsets between samples can be missed.</summary>
    Sampled,

    /// <summary>Complete, up to rounding: every onset of the model in the range is reported.</summary>
    Complete,
}

/// <summary>What the result covers and what it can miss.</summary>
public sealed class Completeness
{
    [JsonConstructor]
    internal Completeness(
        Coverage flutter, Coverage divergence, double widestStep, int decompositions, int evaluations, int confirmed, string? whySampled)
    {
        Flutter = flutter;
        Divergence = divergence;
        WidestStep = widestStep;
        Decompositions = decompositions;
        Evaluations = evaluations;
        Confirmed = confirmed;
        WhySampled = whySampled;
    }

    /// <summary>Coverage of flutter onsets.</summary>
    public Coverage Flutter { get; }

    /// <summary>Coverage of divergences and losses through infinity.</summary>
    public Coverage Divergence { get; }

    /// <summary>
    /// Widest step between two samples: an excursion into instability and back that is narrower can be missed where the
    /// slopes at both samples give no sign of it. Zero where flutter is complete.
    /// </summary>
    public double WidestStep { get; }

    /// <summary>Eigenvalue decompositions spent.</summary>
    public int Decompositions { get; }

    /// <summary>Evaluations of the loop on the imaginary axis spent, by a search without sampling.</summary>
    public int Evaluations { get; }

    /// <summary>Stable and marginal intervals that the eigenvalues of a second matrix confirmed.</summary>
    public int Confirmed { get; }

    /// <summary>Why the complete search was not possible; <see langword="null"/> where it was, or was not asked for.</summary>
    public string? WhySampled { get; }

    /// <summary>The coverage in words.</summary>
    public override string ToString()
    {
        string because = WhySampled is null ? "" : $" because {WhySampled}";
        string flutter = Flutter == Coverage.Complete
            ? "complete, for the loop as computed and up to rounding"
            : $"sampled{because} (an excursion narrower than {WidestStep.ToString("G3", CultureInfo.InvariantCulture)} can be missed)";
        string evaluations = Evaluations > 0 ? Guard.Invariant($", {Evaluations} evaluations of the loop") : "";
        string confirmed = Confirmed > 0 ? Guard.Invariant($"; {Guard.Count(Confirmed, "interval", "intervals")} confirmed by a second matrix") : "";
        return $"flutter {flutter}; divergence {Divergence.ToString().ToLowerInvariant()}; {Guard.Count(Decompositions, "decomposition", "decompositions")}{evaluations}{confirmed}";
    }

    internal static Completeness OfSearch(int decompositions, int evaluations, int confirmed)
        => new(Coverage.Complete, Coverage.Complete, 0, decompositions, evaluations, confirmed, null);

    internal static Completeness OfSweep(Coverage divergence, double widestStep, int decompositions, string? whySampled)
        => new(Coverage.Sampled, divergence, widestStep, decompositions, 0, 0, whySampled);
}
