namespace GainMargin;

/// <summary>
/// The law's own ratios: a loop of gain <c>g</c> drives its actuator with <c>−g·(p·y + v·y′ + a·y″)</c>. A positive gain
/// on a collocated loop is restoring.
/// </summary>
public readonly record struct FeedbackRatios
{
    /// <summary>Ratio <c>p</c> on displacement.</summary>
    public double Position { get; init; }

    /// <summary>Ratio <c>v</c> on velocity.</summary>
    public double Rate { get; init; }

    /// <summary>Ratio <c>a</c> on acceleration.</summary>
    public double Acceleration { get; init; }
}
