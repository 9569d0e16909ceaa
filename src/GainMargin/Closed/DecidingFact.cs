namespace GainMargin;

/// <summary>A classical theorem whose conditions the closed-loop matrices meet, so that it decides without any root.</summary>
/// <param name="Name">Name of the theorem.</param>
/// <param name="Verdict">What it says.</param>
/// <param name="Reason">The conditions that were found to hold.</param>
/// <param name="Source">Where it is published.</param>
public sealed record DecidingFact(string Name, StabilityVerdict Verdict, string Reason, string Source)
{
    /// <summary>Name, verdict and reason.</summary>
    public override string ToString() => $"{Name}: {Verdict.ToString().ToLowerInvariant()} ({Reason})";
}
