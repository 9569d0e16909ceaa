namespace GainMargin.Tests.Published;

/// <summary>Published systems written as structures with loops. Dimensionless unless said otherwise.</summary>
internal static class FeedbackCases
{
    public static readonly DofNames XY = ["x", "y"];

    public static ClosedLoop Two(double[] mass, double[] damping, double[] stiffness, params LoopSetting[] loops)
        => ClosedLoop.Create(ElasticStructure.FromRowMajor(XY, mass, damping, stiffness), ControlLaw.Of(loops));

    public static LoopSetting Loop(string name, string sensor, string actuator, FeedbackRatios ratios, double gain)
        => new(FeedbackLoop.Create(name, Sensor.At(sensor), Actuator.At(actuator), ratios), gain);

    /// <summary>M = I, D = cI, K = ω²I + [[0, q₁], [−q₂, 0]] with q₁ in the structure and q₂ as a loop.</summary>
    public static GainPath OneCrossTerm(double c, double omega, double fixedTerm, GainRange range)
        => GainPath.OneLoop(
            Two([1, 0, 0, 1], [c, 0, 0, c], [omega * omega, fixedTerm, 0, omega * omega], Loop("q", "x", "y", new() { Position = -1 }, 0.1 * range.To)),
            "q", range);

    /// <summary>M = I, D = cI, K = ω²I + q[[0, 1], [−1, 0]] with both cross terms as loops on one factor.</summary>
    public static GainPath SkewPair(double c, double omega, double unit, GainRange factor)
        => GainPath.CommonFactor(
            Two([1, 0, 0, 1], [c, 0, 0, c], [omega * omega, 0, 0, omega * omega],
                Loop("down", "y", "x", new() { Position = 1 }, unit), Loop("up", "x", "y", new() { Position = -1 }, unit)),
            factor);

    /// <summary>Two unit masses joined by spring k and dashpot c; force on the first, rate of one of them.</summary>
    public static GainPath TwoMasses(double c, double k, string sensor, GainRange range)
        => GainPath.OneLoop(
            Two([1, 0, 0, 1], [c, -c, -c, c], [k, -k, -k, k], Loop("rate", sensor, "x", new() { Rate = 1 }, 0.5 * range.To)), "rate", range);
}
