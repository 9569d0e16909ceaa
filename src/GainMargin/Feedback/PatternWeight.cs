namespace GainMargin;

/// <summary>Share of one named point in what a sensor sees or an actuator pushes.</summary>
/// <param name="Point">Name of the point.</param>
/// <param name="Weight">Its weight.</param>
public readonly record struct PatternWeight(string Point, double Weight);
