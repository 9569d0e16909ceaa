namespace GainMargin.Tests.Stability;

/// <summary>What ranges, paths and options refuse, and what a path promises to a finder.</summary>
public sealed class PathInputTests
{
    private static readonly GainRange Range = GainRange.Between(0, 1);

    [Theory]
    [InlineData(1, 1)]
    [InlineData(0.0, -0.0)]
    [InlineData(2, -3)]
    [InlineData(-1.5e308, 1.5e308)]
    public void Between_EmptyReversedOrTooWide_NamesBothEnds(double from, double to)
        => Refusal.Of<ArgumentException>("to", () => GainRange.Between(from, to), FormattableString.Invariant($"from {from:R} to {to:R}"));

    [Theory]
    [InlineData(double.NaN, 1, "from", "from is NaN")]
    [InlineData(double.NegativeInfinity, 1, "from", "from is -infinity")]
    [InlineData(0, double.NaN, "to", "to is NaN")]
    [InlineData(0, double.PositiveInfinity, "to", "to is +infinity")]
    public void Between_EndNotFinite_NamesTheEnd(double from, double to, string parameter, string message)
        => Refusal.Of<ArgumentOutOfRangeException>(parameter, () => GainRange.Between(from, to), message);

    [Fact]
    public void Between_TwoEnds_AreKept()
    {
        var range = GainRange.Between(-2, 0.5);
        Assert.Equal((-2, 0.5, 2.5, "-2 to 0.5"), (range.From, range.To, range.Width, range.ToString()));
    }

    [Fact]
    public void Path_DefaultRange_IsRefused()
    {
        Refusal.Of<ArgumentException>("range", () => GainPath.OneLoop(Nominal(), "rate", default), "empty", "GainRange.Between");
        Refusal.Of<ArgumentException>("factor", () => GainPath.CommonFactor(Nominal(), default), "empty", "GainRange.Between");
    }

    [Fact]
    public void Path_NullArguments_NamesTheParameter()
    {
        Refusal.Of<ArgumentNullException>("nominal", () => GainPath.OneLoop(null!, "rate", Range));
        Refusal.Of<ArgumentNullException>("loop", () => GainPath.OneLoop(Nominal(), null!, Range));
        Refusal.Of<ArgumentNullException>("nominal", () => GainPath.CommonFactor(null!, Range));
        Refusal.Of<ArgumentNullException>("path", () => GainSweep.Run(null!));
    }

    [Fact]
    public void Path_UnknownLoop_ListsTheLoopsThereAre()
    {
        Refusal.OfEntry(() => GainPath.OneLoop(Nominal(), "Rate", Range), "no loop \"Rate\"", "\"rate\", \"position\"");
        Refusal.OfEntry(() => GainPath.CommonFactor(Nominal(), Range, "rate", "tilt"), "no loop \"tilt\"", "\"rate\", \"position\"");
    }

    [Fact]
    public void CommonFactor_LoopNamedTwice_NamesTheLoop()
        => Refusal.Of<ArgumentException>(
            "loops", () => GainPath.CommonFactor(Nominal(), Range, "rate", "position", "rate"), "\"rate\"", "twice");

    [Theory]
    [InlineData(double.NaN, "value is NaN")]
    [InlineData(double.PositiveInfinity, "value is +infinity")]
    public void At_ValueNotFinite_NamesTheValue(double value, string message)
    {
        Refusal.Of<ArgumentOutOfRangeException>("value", () => GainPath.OneLoop(Nominal(), "rate", Range).At(value), message);
        Refusal.Of<ArgumentOutOfRangeException>("value", () => GainPath.CommonFactor(Nominal(), Range).At(value), message);
    }

    [Fact]
    public void At_GainThatOverflows_NamesTheLoop()
    {
        Refusal.OfEntry(() => GainPath.OneLoop(Nominal(scale: 1e200), "rate", Range).At(1e200), "rate = 1E+200", "not finite");
        var refused = Assert.ThrowsAny<ArgumentException>(() => GainPath.CommonFactor(Nominal(gain: 1e200), Range).At(1e200));
        Assert.Contains("rate", refused.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(8e307)]
    [InlineData(double.Epsilon)]
    public void Between_WidthThatCannotBeSampled_IsRefused(double to)
        => Refusal.Of<ArgumentException>("to", () => GainRange.Between(0, to), "too narrow to sample, or too wide");

    [Fact]
    public void Run_RangeThatOverflows_FailsWithAGainOfTheRange()
    {
        const double scale = 1e200;
        const double to = 1e200;
        var path = GainPath.OneLoop(Nominal(scale: scale), "rate", GainRange.Between(0, to));
        var failure = Assert.Throws<NumericalFailureException>(() => GainSweep.Run(path));
        Assert.InRange(failure.LastGain!.Value, double.Epsilon, to);
        Assert.Contains("gain of loop \"rate\"", failure.Message, StringComparison.Ordinal);
        Assert.NotEqual("unknown", failure.Stage);
    }

    [Theory]
    [InlineData(0)]
    [InlineData(-0.1)]
    [InlineData(1.0000001)]
    [InlineData(double.NaN)]
    public void MaximumStep_OutOfRange_NamesTheOption(double value)
        => Refusal.Of<ArgumentOutOfRangeException>(
            "MaximumStep", () => _ = new SweepOptions { MaximumStep = value }, $"MaximumStep is {Shown(value)}", "above 0 and at most 1");

    [Theory]
    [InlineData(0)]
    [InlineData(1e-14)]
    [InlineData(0.2)]
    [InlineData(double.NaN)]
    public void MinimumStep_OutOfRange_NamesTheOption(double value)
        => Refusal.Of<ArgumentOutOfRangeException>(
            "MinimumStep", () => _ = new SweepOptions { MinimumStep = value }, $"MinimumStep is {Shown(value)}", "at most 0.1");

    [Theory]
    [InlineData(1)]
    [InlineData(0)]
    [InlineData(int.MinValue)]
    public void MaximumDecompositions_TooFew_NamesTheOption(int value)
        => Refusal.Of<ArgumentOutOfRangeException>(
            "MaximumDecompositions", () => _ = new SweepOptions { MaximumDecompositions = value },
            FormattableString.Invariant($"MaximumDecompositions is {value}"), "at least 2");

    [Fact]
    public void SweepOptions_OutOfRangeInACopy_NamesTheOption()
        => Refusal.Of<ArgumentOutOfRangeException>(
            "MaximumStep", () => _ = new SweepOptions() with { MaximumStep = 2 }, "MaximumStep is 2");

    [Fact]
    public void SweepOptions_AtTheEdgeOfTheRange_AreTaken()
    {
        var options = new SweepOptions { MaximumStep = 1, MinimumStep = 0.1, MaximumDecompositions = 2 };
        Assert.Equal((1, 0.1, 2, true), (options.MaximumStep, options.MinimumStep, options.MaximumDecompositions, options.KeepLoci));
    }

    [Fact]
    public void Run_FineStepsOnASmallBudget_StopsNearTheBudget()
    {
        var options = new SweepOptions { MaximumStep = 1e-3, MaximumDecompositions = 50 };
        var boundary = GainSweep.Run(GainPath.OneLoop(Nominal(), "rate", Range), options);
        // The verdicts at the end may take a few more.
        Assert.InRange(boundary.Completeness.Decompositions, 1, 100);
    }

    [Fact]
    public void OneLoop_Path_MovesThatLoopOnly()
    {
        var path = GainPath.OneLoop(Nominal(), "rate", Range);
        Assert.Equal((0.5, "N·s/m"), (path.ReleaseValue, path.Unit));
        Assert.Equal(["rate"], path.MovingLoops.AsEnumerable());
        Assert.Equal((3, 0.25), (path.At(3).Law.GainOf("rate"), path.At(3).Law.GainOf("position")));
        Assert.Equal((0.1 + 3, 4 + 0.25), (path.At(3).Damping[0, 0], path.At(3).Stiffness[0, 0]));
        Assert.Equal(0.5, path.Nominal.Law.GainOf("rate"));
        Assert.Equal("gain of loop \"rate\"", path.ToString());
    }

    [Fact]
    public void CommonFactor_Path_MultipliesTheGainsNamed()
    {
        var all = GainPath.CommonFactor(Nominal(), Range);
        var one = GainPath.CommonFactor(Nominal(), Range, "position");
        Assert.Equal((1, null), (all.ReleaseValue, all.Unit));
        Assert.Equal(["rate", "position"], all.MovingLoops.AsEnumerable());
        Assert.Equal(["position"], one.MovingLoops.AsEnumerable());
        Assert.Equal((1.5, 0.75), (all.At(3).Law.GainOf("rate"), all.At(3).Law.GainOf("position")));
        Assert.Equal((0.5, 0.75), (one.At(3).Law.GainOf("rate"), one.At(3).Law.GainOf("position")));
    }

    [Fact]
    public void CommonFactor_OnACascade_ActsSquaredOnTheOuterLoop()
    {
        var law = ControlLaw.Cascade(new(Loop("rate", new() { Rate = 1 }), 0.5), new(Loop("position", new() { Position = 1 }), 3));
        var closed = ClosedLoop.Create(Structure(), law);
        Assert.Equal(4 + (0.5 * 3 * 4), GainPath.CommonFactor(closed, Range).At(2).Stiffness[0, 0]);
        Assert.Equal(4 + (0.5 * 3 * 2), GainPath.CommonFactor(closed, Range, "position").At(2).Stiffness[0, 0]);
        Assert.Equal(4 + (2 * 3), GainPath.OneLoop(closed, "rate", Range).At(2).Stiffness[0, 0]);
    }

    [Theory]
    [InlineData("s", "6.283185 rad/s (1 Hz)")]
    [InlineData("ms", "6.283185 rad/ms,")]
    [InlineData("S", "6.283185 rad/S,")]
    [InlineData(" ", "6.283185 rad/unit time,")]
    [InlineData(null, "6.283185 rad/unit time,")]
    public void ToString_OfABoundary_ShowsHertzForSecondsOnly(string? time, string frequency)
    {
        var structure = ElasticStructure.FromRowMajor(["a"], [1], [0.1], [4 * Math.PI * Math.PI], new UnitLabels { Time = time });
        var closed = ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(Loop("rate", new() { Rate = -1 }), 0.05, "N·s/m")));
        string text = GainSweep.Run(GainPath.OneLoop(closed, "rate", Range)).ToString();
        Assert.Contains($"flutter at {frequency}", text, StringComparison.Ordinal);
        Assert.Contains("0.1 N·s/m ±", text, StringComparison.Ordinal);
        Assert.Equal(time == "s", text.Contains("Hz", StringComparison.Ordinal));
    }

    private static string Shown(double value) => double.IsNaN(value) ? "NaN" : FormattableString.Invariant($"{value:R}");

    private static FeedbackLoop Loop(string name, FeedbackRatios ratios)
        => FeedbackLoop.Create(name, Sensor.At("a"), Actuator.At("a"), ratios);

    private static ElasticStructure Structure() => ElasticStructure.FromRowMajor(["a"], [1], [0.1], [4]);

    private static ClosedLoop Nominal(double gain = 0.5, double scale = 1) => ClosedLoop.Create(Structure(), ControlLaw.Of(
        new(Loop("rate", new() { Rate = 1 }), gain, "N·s/m", scale), new(Loop("position", new() { Position = 1 }), 0.25)));
}
