namespace GainMargin.Tests.Support;

/// <summary>Small closed loops with a known boundary, one for each outcome that a result can express.</summary>
internal static class Boundaries
{
    public static LoopSetting Loop(string name, string sensor, string actuator, FeedbackRatios ratios, double gain)
        => new(FeedbackLoop.Create(name, Sensor.At(sensor), Actuator.At(actuator), ratios), gain);

    public static ElasticStructure One(double mass, double damping, double stiffness)
        => ElasticStructure.FromRowMajor(["x"], [mass], [damping], [stiffness]);

    public static GainPath Path(ElasticStructure structure, LoopSetting loop, double from, double to)
        => GainPath.OneLoop(ClosedLoop.Create(structure, ControlLaw.Of(loop)), loop.Loop.Name, GainRange.Between(from, to));

    /// <summary>x″ + (0.1 + g)x′ + x = 0: flutter at −0.1, stable above.</summary>
    public static GainPath Flutter(double from = -1, double to = 1)
        => Path(One(1, 0.1, 1), Loop("g", "x", "x", new() { Rate = 1 }, 0.5), from, to);

    /// <summary>x″ + 0.1x′ + (1 − g)x = 0: divergence at 1.</summary>
    public static GainPath Divergence(double from = 0, double to = 2)
        => Path(One(1, 0.1, 1), Loop("g", "x", "x", new() { Position = -1 }, 0.5), from, to);

    /// <summary>(1 + g)x″ + 0.1x′ + x = 0: a root passes through infinity at −1.</summary>
    public static GainPath ThroughInfinity()
        => Path(One(1, 0.1, 1), Loop("g", "x", "x", new() { Acceleration = 1 }, 0.5), -2, 1);

    /// <summary>x″ + (1 − f)²x′ + 4x = 0 by a cascade on one factor: the pair touches the axis at f = 1 and turns back.</summary>
    public static GainPath Touch()
    {
        var law = ControlLaw.Cascade(
            Loop("inner", "x", "x", new() { Rate = 1 }, -2), Loop("outer", "x", "x", new() { Rate = 1 }, -0.5));
        return GainPath.CommonFactor(ClosedLoop.Create(One(1, 1, 4), law), GainRange.Between(0, 3.1));
    }

    /// <summary>Two modes without damping and position feedback between two places: coalescence at (7 − 2√2)/2.</summary>
    /// <remarks>H. Ziegler, Ing.-Arch. 20 (1952) 49–56, the follower force written as a loop: flutter at 7/2 − √2.</remarks>
    public static GainPath Lossless(double damping = 0, double to = 8)
    {
        var loop = FeedbackLoop.Create("p", Sensor.Difference("x", "y"), Actuator.At("x"), new() { Position = -1 });
        var structure = ElasticStructure.FromRowMajor(
            ["x", "y"], [3, 1, 1, 1], [2 * damping, -damping, -damping, damping], [2, -1, -1, 1]);
        return GainPath.OneLoop(ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(loop, 0.5))), "p", GainRange.Between(0, to));
    }
}
