namespace GainMargin;

/// <summary>A step with the identity of each root across it.</summary>
internal sealed record SweepStep(SweepSample Left, SweepSample Right, int[] Match);
