using GainMargin;

namespace TallGantry;

/// <summary>
/// A tall gantry milling machine, invented for this sample; all numbers are invented. A linear motor pushes the foot of
/// the column along the rails. The column bends, and the tool head moves with it. The rate loop reads the foot. The
/// position loop reads a glass scale, either at the tool point, where accuracy is wanted, or at the foot, where the motor is.
/// </summary>
internal static class Machine
{
    public const string Rate = "rate";
    public const string Position = "position";

    /// <summary>Position gain, m/min of commanded speed per mm of error, as drives on such machines take it.</summary>
    public const double ReleaseGain = 1.2;

    private const double PerSecond = 1000.0 / 60;

    public static ElasticStructure Structure() => ElasticStructure.FromRowMajor(
        ["foot.x", "column.x", "head.x", "tool.x"],
        mass:
        [
            1400, 0, 0, 0,
            0, 900, 0, 0,
            0, 0, 650, 0,
            0, 0, 0, 120,
        ],
        damping:
        [
            5.2e3, -4.0e3, 0, 0,
            -4.0e3, 6.4e3, -2.4e3, 0,
            0, -2.4e3, 3.6e3, -1.2e3,
            0, 0, -1.2e3, 1.2e3,
        ],
        stiffness:
        [
            2.4e7, -2.4e7, 0, 0,
            -2.4e7, 3.8e7, -1.4e7, 0,
            0, -1.4e7, 3.2e7, -1.8e7,
            0, 0, -1.8e7, 1.8e7,
        ],
        new UnitLabels { Length = "m", Force = "N", Time = "s" });

    public static ControlLaw Law(string scaleAt)
    {
        var motor = Actuator.At("foot.x");
        var rate = FeedbackLoop.Create(Rate, Sensor.At("foot.x"), motor, new FeedbackRatios { Rate = 1 });
        var position = FeedbackLoop.Create(Position, Sensor.At(scaleAt), motor, new FeedbackRatios { Position = 1 });
        return ControlLaw.Cascade(
            inner: new LoopSetting(rate, Gain: 2.6e5, GainUnit: "N s/m"),
            outer: new LoopSetting(position, Gain: ReleaseGain, GainUnit: "m/min/mm", DisplayScale: PerSecond));
    }
}
