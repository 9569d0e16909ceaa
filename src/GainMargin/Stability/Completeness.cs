using System.Globalization;
using System.Text.Json.Serialization;

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
    internal Completeness(Coverage flutter, Coverage divergence, double widestStep, int decompositions)
    {
        Flutter = flutter;
        Divergence = divergence;
        WidestStep = widestStep;
        Decompositions = decompositions;
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

    /// <summary>The coverage in words.</summary>
    public override string ToString()
    {
        string flutter = Flutter == Coverage.Complete
            ? "complete, for the model as computed and up to rounding"
            : $"sampled (an excursion narrower than {WidestStep.ToString("G3", CultureInfo.InvariantCulture)} can be missed)";
        return $"flutter {flutter}; divergence {Divergence.ToString().ToLowerInvariant()}; {Decompositions.ToString(CultureInfo.InvariantCulture)} decompositions";
    }
}
