using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Feedback;

/// <summary>What sensors, actuators, loops, laws and the closing of a loop refuse, and how they say so.</summary>
public sealed class FeedbackInputTests
{
    private static readonly FeedbackRatios Position = new() { Position = 1 };

    [Theory]
    [InlineData(null)]
    [InlineData("")]
    [InlineData(" ")]
    public void Point_Blank_NamesTheParameter(string? blank)
    {
        OfBlank("dof", blank, () => Sensor.At(blank!));
        OfBlank("dof", blank, () => Actuator.At(blank!));
        OfBlank("dof", blank, () => Sensor.Difference(blank!, "a"));
        OfBlank("reference", blank, () => Sensor.Difference("a", blank!));
        OfBlank("dof", blank, () => Actuator.Between(blank!, "a"));
        OfBlank("reaction", blank, () => Actuator.Between("a", blank!));
        OfBlank("weights", blank, () => Sensor.Weighted(new PatternWeight("a", 1), new PatternWeight(blank!, 1)));
        OfBlank("weights", blank, () => Actuator.Weighted(new PatternWeight(blank!, 1)));
    }

    [Fact]
    public void Difference_OfAPointWithItself_NamesThePoint()
    {
        Refusal.Of<ArgumentException>("reference", () => Sensor.Difference("tool.x", "tool.x"), "sensor", "\"tool.x\"", "zero");
        Refusal.Of<ArgumentException>("reaction", () => Actuator.Between("tool.x", "tool.x"), "actuator", "\"tool.x\"", "zero");
    }

    [Fact]
    public void Weighted_WithoutAnyWeight_IsRefused()
    {
        const string How = "has no weight that is not zero";
        Refusal.Of<ArgumentException>("weights", () => Sensor.Weighted(), $"sensor {How}");
        Refusal.Of<ArgumentException>("weights", () => Sensor.Weighted(new("a", 0), new("b", -0.0)), $"sensor {How}");
        Refusal.Of<ArgumentException>("weights", () => Actuator.Weighted(), $"actuator {How}");
        Refusal.Of<ArgumentException>("weights", () => Actuator.Weighted(new PatternWeight("a", 0)), $"actuator {How}");
    }

    [Theory]
    [InlineData(double.NaN, "is NaN")]
    [InlineData(double.PositiveInfinity, "is +infinity")]
    [InlineData(double.NegativeInfinity, "is -infinity")]
    public void Weighted_WeightNotFinite_NamesThePoint(double weight, string how)
    {
        Refusal.Of<ArgumentException>("weights", () => Sensor.Weighted(new("a", 1), new("b", weight)), "sensor", "\"b\"", how);
        Refusal.Of<ArgumentException>("weights", () => Actuator.Weighted(new("a", 1), new("b", weight)), "actuator", "\"b\"", how);
    }

    [Fact]
    public void Weighted_PointTwice_NamesThePoint()
    {
        Refusal.Of<ArgumentException>("weights", () => Sensor.Weighted(new("a", 1), new("b", 1), new("a", 1)), "sensor", "\"a\" twice");
        Refusal.Of<ArgumentException>("weights", () => Actuator.Weighted(new("a", 1), new("a", -1)), "actuator", "\"a\" twice");
    }

    [Fact]
    public void Loop_NullOrBlankArguments_NamesTheParameter()
    {
        Refusal.Of<ArgumentNullException>("name", () => FeedbackLoop.Create(null!, Sensor.At("a"), Actuator.At("a"), Position));
        Refusal.Of<ArgumentException>("name", () => FeedbackLoop.Create(" ", Sensor.At("a"), Actuator.At("a"), Position));
        Refusal.Of<ArgumentNullException>("sensor", () => FeedbackLoop.Create("p", null!, Actuator.At("a"), Position));
        Refusal.Of<ArgumentNullException>("actuator", () => FeedbackLoop.Create("p", Sensor.At("a"), null!, Position));
    }

    [Fact]
    public void Loop_NoRatio_NamesTheLoop()
        => Refusal.Of<ArgumentException>("ratios", () => LoopOf(default), "\"pos\"", "no ratio");

    [Theory]
    [InlineData(double.NaN, "is NaN")]
    [InlineData(double.PositiveInfinity, "is +infinity")]
    public void Loop_RatioNotFinite_NamesTheRatio(double value, string how)
    {
        foreach (var (ratios, name) in new[]
        {
            (new FeedbackRatios { Position = value }, "Position"),
            (new FeedbackRatios { Rate = value }, "Rate"),
            (new FeedbackRatios { Acceleration = value }, "Acceleration"),
        })
        {
            var refused = Assert.Throws<ArgumentOutOfRangeException>(() => LoopOf(ratios));
            Assert.Contains($"{name} {how}", refused.Message, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void Law_WithoutLoops_IsRefused()
        => Refusal.Of<ArgumentException>("loops", () => ControlLaw.Of(), "at least one loop");

    [Fact]
    public void Law_LoopNameTwice_NamesTheLoop()
    {
        var (p, q, again) = (new LoopSetting(Loop("p"), 1), new LoopSetting(Loop("q"), 1), new LoopSetting(Loop("p"), 2));
        Refusal.Of<ArgumentException>("loops", () => ControlLaw.Of(p, q, again), "\"p\"", "twice");
        Refusal.Of<ArgumentException>("loops", () => ControlLaw.Of(p).With(again), "\"p\"", "twice");
    }

    [Fact]
    public void Law_LoopMissing_IsRefused()
    {
        Assert.Equal("loops", Assert.Throws<ArgumentNullException>(() => ControlLaw.Of(new LoopSetting(null!, 1))).ParamName);
        Assert.Equal("loops", Assert.Throws<ArgumentNullException>(() => ControlLaw.Of(default(LoopSetting))).ParamName);
        Assert.Equal("inner", Assert.Throws<ArgumentNullException>(() => ControlLaw.Cascade(default, new(Loop("p"), 1))).ParamName);
        Assert.Equal("outer", Assert.Throws<ArgumentNullException>(() => ControlLaw.Cascade(new(Loop("p"), 1), default)).ParamName);
    }

    [Theory]
    [InlineData(double.NaN, "is NaN")]
    [InlineData(double.PositiveInfinity, "is +infinity")]
    [InlineData(double.NegativeInfinity, "is -infinity")]
    public void Law_GainNotFinite_NamesTheLoop(double gain, string how)
    {
        var sound = new LoopSetting(Loop("sound"), 1);
        var bad = new LoopSetting(Loop("pos"), gain);
        Refusal.OfEntry(() => ControlLaw.Of(sound, bad), "\"pos\"", how);
        Refusal.OfEntry(() => ControlLaw.Of(sound).With(bad), "\"pos\"", how);
        Refusal.OfEntry(() => ControlLaw.Cascade(sound, bad), "\"pos\"", how);
        Refusal.OfEntry(() => ControlLaw.Cascade(bad, sound), "\"pos\"", how);
    }

    [Fact]
    public void WithGain_NotFinite_NamesTheLoop()
    {
        var law = ControlLaw.Of(new LoopSetting(Loop("pos"), 1));
        Refusal.Of<ArgumentOutOfRangeException>("gain", () => law.WithGain("pos", double.NaN), "\"pos\"", "NaN");
    }

    [Theory]
    [InlineData(0.0, "is 0")]
    [InlineData(double.NaN, "is NaN")]
    [InlineData(double.PositiveInfinity, "is +infinity")]
    public void Law_DisplayScaleZeroOrNotFinite_NamesTheLoop(double scale, string how)
        => Refusal.OfEntry(() => ControlLaw.Of(new LoopSetting(Loop("pos"), 1, DisplayScale: scale)), "display scale", "\"pos\"", how);

    [Fact]
    public void Cascade_OfALoopWithItself_NamesTheLoop()
    {
        var loop = Loop("pos");
        Refusal.Of<ArgumentException>("outer", () => ControlLaw.Cascade(new(loop, 1), new(loop, 2)), "\"pos\"", "itself");
    }

    [Fact]
    public void Law_UnknownLoop_ListsTheLoopsThereAre()
    {
        var law = ControlLaw.Of(new(Loop("pos"), 1), new(Loop("rate"), 1));
        Action[] lookups =
        [
            () => law.WithGain("Pos", 1), () => law.GainOf("Pos"), () => law.InnerOf("Pos"),
            () => ClosedLoopAnalysis.ContributionOf(Close(law), "Pos"),
        ];
        Assert.All(lookups, lookup => Refusal.Of<ArgumentException>("loop", lookup, "no loop \"Pos\"", "\"pos\", \"rate\""));
        Action[] nulls = [() => law.WithGain(null!, 1), () => law.GainOf(null!), () => law.InnerOf(null!)];
        Assert.All(nulls, lookup => Refusal.Of<ArgumentNullException>("loop", lookup));
    }

    [Fact]
    public void Create_NullArguments_NamesTheParameter()
    {
        Refusal.Of<ArgumentNullException>("structure", () => ClosedLoop.Create(null!, ControlLaw.Of(new LoopSetting(Loop("p"), 1))));
        Refusal.Of<ArgumentNullException>("law", () => ClosedLoop.Create(Two(), null!));
    }

    [Fact]
    public void Analysis_NullClosedLoop_NamesTheParameter()
    {
        Action[] analyses =
        [
            () => ClosedLoopAnalysis.Split(null!), () => ClosedLoopAnalysis.StateMatrix(null!), () => ClosedLoopAnalysis.Spectrum(null!),
            () => ClosedLoopAnalysis.ContributionOf(null!, "p"),
        ];
        Assert.All(analyses, analysis => Refusal.Of<ArgumentNullException>("closed", analysis));
    }

    [Fact]
    public void Create_PointTheStructureLacks_NamesLoopPointAndPoints()
    {
        var sensor = FeedbackLoop.Create("pos", Sensor.Difference("a", "tip"), Actuator.At("b"), Position);
        var actuator = FeedbackLoop.Create("pos", Sensor.At("a"), Actuator.At("B"), Position);
        Refusal.OfEntry(() => Close(ControlLaw.Of(new LoopSetting(sensor, 1))), "sensor of loop \"pos\"", "\"tip\"", "\"a\", \"b\"");
        Refusal.OfEntry(() => Close(ControlLaw.Of(new LoopSetting(actuator, 1))), "actuator of loop \"pos\"", "\"B\"", "\"a\", \"b\"");
    }

    [Fact]
    public void Create_ModalStructureAddressedByItsModes_NamesThePoints()
    {
        var law = ControlLaw.Of(new LoopSetting(FeedbackLoop.Create("pos", Sensor.At("mode 1"), Actuator.At("tip"), Position), 1));
        Refusal.OfEntry(() => ClosedLoop.Create(Modal(0), law), "sensor of loop \"pos\"", "\"mode 1\"", "\"tip\"");
    }

    [Theory]
    [InlineData(1, 0)]
    [InlineData(0, 1)]
    public void Create_RateOrAccelerationThroughResidualFlexibility_ExplainsWhy(double rate, double acceleration)
    {
        var loop = FeedbackLoop.Create("damper", Sensor.At("tip"), Actuator.At("tip"), new() { Rate = rate, Acceleration = acceleration });
        var law = ControlLaw.Of(new LoopSetting(loop, 1));
        Refusal.Of<ArgumentException>(
            "law", () => ClosedLoop.Create(Modal(0.5), law), "\"damper\"", "residual flexibility", "its own derivative", "roll-off");
        Assert.Equal(rate, ClosedLoop.Create(Modal(0), law).Damping[0, 0], 1e-15);
    }

    [Fact]
    public void Create_ResidualFlexibilityMakesTheLoopSingular_NamesTheGain()
    {
        var law = ControlLaw.Of(new LoopSetting(FeedbackLoop.Create("pos", Sensor.At("tip"), Actuator.At("tip"), Position), -2));
        Refusal.Of<ArgumentException>("law", () => ClosedLoop.Create(Modal(0.5), law), "pos = -2", "singular");
    }

    [Theory]
    [InlineData(1e200, 1e200, 1)]
    [InlineData(-1e200, 1, 1e200)]
    public void Create_GainThatOverflows_NamesTheGain(double gain, double scale, double ratio)
    {
        var loop = FeedbackLoop.Create("pos", Sensor.At("a"), Actuator.At("b"), new() { Rate = ratio });
        string shown = gain > 0 ? "pos = 1E+200" : "pos = -1E+200";
        var law = ControlLaw.Of(new LoopSetting(loop, gain, DisplayScale: scale));
        Refusal.Of<ArgumentException>("law", () => Close(law), shown, "not finite", "too large");
    }

    [Fact]
    public void Create_CascadeThatOverflows_NamesBothGains()
    {
        var law = ControlLaw.Cascade(new(Loop("rate"), 1e200), new(Loop("pos"), 2e200));
        Refusal.Of<ArgumentException>("law", () => Close(law), "rate = 1E+200", "pos = 2E+200", "not finite");
    }

    [Fact]
    public void Spectrum_StiffnessWhoseSquareOverflows_IsRightOrRefused()
    {
        // s² + s + 1e300 has two decaying roots.
        var structure = ElasticStructure.FromRowMajor(["a"], [1], [1], [1e300]);
        var closed = ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(LoopOf(Position), 1)));
        try
        {
            var verdict = ClosedLoopAnalysis.Spectrum(closed).Verdict;
            Assert.True(verdict is StabilityVerdict.Stable or StabilityVerdict.Undecided, $"The verdict is {verdict}.");
        }
        catch (NumericalFailureException failure)
        {
            Assert.NotEqual("unknown", failure.Stage);
        }
    }

    private static void OfBlank(string parameter, string? blank, Action call)
    {
        if (blank is null)
        {
            Refusal.Of<ArgumentNullException>(parameter, call);
        }
        else
        {
            Refusal.Of<ArgumentException>(parameter, call);
        }
    }

    private static FeedbackLoop LoopOf(FeedbackRatios ratios) => FeedbackLoop.Create("pos", Sensor.At("a"), Actuator.At("a"), ratios);

    private static FeedbackLoop Loop(string name) => FeedbackLoop.Create(name, Sensor.At("a"), Actuator.At("b"), Position);

    private static ElasticStructure Two() => ElasticStructure.FromRowMajor(["a", "b"], [1, 0, 0, 1], [0, 0, 0, 0], [2, -1, -1, 1]);

    private static ClosedLoop Close(ControlLaw law) => ClosedLoop.Create(Two(), law);

    private static ElasticStructure Modal(double residual) => ElasticStructure.FromModes(new()
    {
        Points = ["tip"],
        Frequencies = [Frequency.FromRadians(2)],
        DampingRatios = [0],
        Shapes = DenseMatrix.Create(1, 1, 1),
        ResidualFlexibility = DenseMatrix.Create(1, 1, residual),
    });
}
