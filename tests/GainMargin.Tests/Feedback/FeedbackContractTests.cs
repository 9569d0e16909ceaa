namespace GainMargin.Tests.Feedback;

/// <summary>What loops and laws promise: which entries a loop fills, what a gain means, and that nothing given away changes.</summary>
public sealed class FeedbackContractTests
{
    private static readonly FeedbackRatios Position = new() { Position = 1 };

    [Theory]
    [InlineData(1, 0, 1, 0, true)]
    [InlineData(1, 0, 2.5, 0, true)]
    [InlineData(1, -1, 3, -3, true)]
    [InlineData(0.1, 0.3, 0.7, 2.1, true)]
    [InlineData(1, 0, -1, 0, false)]
    [InlineData(1, -1, -1, 1, false)]
    [InlineData(1, 0, 0, 1, false)]
    [InlineData(1, 0, 1, 1, false)]
    [InlineData(1, 1, 1, 2, false)]
    public void IsCollocated_Patterns_HoldsForPositiveMultiplesOnly(
        double seenA, double seenB, double pushedA, double pushedB, bool expected)
    {
        var sensor = Sensor.Weighted(new("a", seenA), new("b", seenB));
        var actuator = Actuator.Weighted(new("a", pushedA), new("b", pushedB));
        var swapped = Actuator.Weighted(new("b", pushedB), new("a", pushedA));
        Assert.Equal(expected, FeedbackLoop.Create("p", sensor, actuator, Position).IsCollocated);
        Assert.Equal(expected, FeedbackLoop.Create("p", sensor, swapped, Position).IsCollocated);
    }

    [Fact]
    public void Coupling_RowsAndColumns_AreThePointsDrivenAndSensed()
    {
        var sensor = Sensor.Weighted(new("x", 2), new("y", -1), new("z", 0.5));
        var coupling = FeedbackLoop.Create("p", sensor, Actuator.Between("foot", "floor"), Position).Coupling;
        Assert.Equal(DofNames.Of("foot", "floor"), coupling.Rows);
        Assert.Equal(DofNames.Of("x", "y", "z"), coupling.Columns);
        double[] entries = new double[6];
        coupling.CopyRowMajorTo(entries);
        Assert.Equal([2, -1, 0.5, -2, 1, -0.5], entries);
    }

    [Fact]
    public void Create_LoopBetweenTwoPlaces_FillsTheRowDrivenAndTheColumnSensed()
    {
        var loop = FeedbackLoop.Create("l", Sensor.At("b"), Actuator.At("a"), new() { Position = 2, Rate = 3, Acceleration = 0.25 });
        var closed = Close(ControlLaw.Of(new LoopSetting(loop, 10)));
        Assert.Equal((-1 + 20, -1), (closed.Stiffness["a", "b"], closed.Stiffness["b", "a"]));
        Assert.Equal((30, 0), (closed.Damping["a", "b"], closed.Damping["b", "a"]));
        Assert.Equal((2.5, 0), (closed.Mass["a", "b"], closed.Mass["b", "a"]));
        Assert.Equal((2, 1), (closed.Stiffness["a", "a"], closed.Stiffness["b", "b"]));
    }

    [Fact]
    public void Create_LoopsSideBySide_AddUp()
    {
        var first = FeedbackLoop.Create("first", Sensor.At("a"), Actuator.At("a"), Position);
        var second = FeedbackLoop.Create("second", Sensor.Difference("a", "b"), Actuator.At("a"), Position);
        var closed = Close(ControlLaw.Of(new(first, 3), new(second, 5)));
        Assert.Equal((2 + 3 + 5, -1 - 5), (closed.Stiffness["a", "a"], closed.Stiffness["a", "b"]));
    }

    [Fact]
    public void ContributionOf_OneLoop_IsItsCouplingTimesGainAndRatio()
    {
        var rate = FeedbackLoop.Create("rate", Sensor.At("a"), Actuator.At("a"), new() { Rate = 1 });
        var position = FeedbackLoop.Create("position", Sensor.Difference("b", "a"), Actuator.At("a"), new() { Position = 4, Rate = -2 });
        var added = ClosedLoopAnalysis.ContributionOf(Close(ControlLaw.Of(new(rate, 7), new(position, 10, DisplayScale: 0.5))), "position");
        Assert.Equal(DofNames.Of("a"), added.Stiffness.Rows);
        Assert.Equal(DofNames.Of("b", "a"), added.Stiffness.Columns);
        Assert.Equal((20, -20), (added.Stiffness["a", "b"], added.Stiffness["a", "a"]));
        Assert.Equal((-10, 10, 0), (added.Damping["a", "b"], added.Damping["a", "a"], added.Mass["a", "b"]));
        Assert.False(added.IsCollocated);
    }

    [Fact]
    public void DisplayScale_OfALoop_MultipliesTheGainTyped()
    {
        var law = ControlLaw.Of(new LoopSetting(Loop("p"), 4, "%", 0.5));
        Assert.Equal(-1 + 2, Close(law).Stiffness["a", "b"]);
        Assert.Equal(4, law.GainOf("p"));
        Assert.Equal(-1 + 5, Close(law.WithGain("p", 10)).Stiffness["a", "b"]);
        Assert.Equal(("%", 0.5), (law.WithGain("p", 10).Loops[0].GainUnit, law.WithGain("p", 10).Loops[0].DisplayScale));
    }

    [Fact]
    public void Cascade_OuterLoop_ActsWithTheProductOfBothGains()
    {
        var rate = FeedbackLoop.Create("rate", Sensor.At("a"), Actuator.At("a"), new() { Rate = 1 });
        var position = FeedbackLoop.Create("position", Sensor.At("b"), Actuator.At("a"), new() { Position = 3 });
        var law = ControlLaw.Cascade(inner: new(rate, 5, DisplayScale: 2), outer: new(position, 7, DisplayScale: 0.5));
        var closed = Close(law);
        Assert.Equal(-1 + (5 * 2 * 7 * 0.5 * 3), closed.Stiffness["a", "b"]);
        Assert.Equal(10, closed.Damping["a", "a"]);
        Assert.Equal(-1 + (10 * 2 * 7 * 0.5 * 3), Close(law.WithGain("rate", 10)).Stiffness["a", "b"]);
        Assert.Equal(("rate", null), (law.InnerOf("position"), law.InnerOf("rate")));
        Assert.Equal((5, 7), (law.GainOf("rate"), law.GainOf("position")));
        Assert.Equal(105, ClosedLoopAnalysis.ContributionOf(closed, "position").Stiffness["a", "b"]);
    }

    [Fact]
    public void With_FurtherLoop_LeavesTheCascadeAsItIs()
    {
        var cascade = ControlLaw.Cascade(new(Loop("inner"), 2), new(Loop("outer"), 3));
        var law = cascade.With(new LoopSetting(Loop("beside"), 100));
        Assert.Equal(["inner", "outer", "beside"], law.Loops.Select(l => l.Loop.Name));
        Assert.Equal(("inner", null), (law.InnerOf("outer"), law.InnerOf("beside")));
        Assert.Equal(-1 + 2 + (2 * 3) + 100, Close(law).Stiffness["a", "b"]);
        Assert.Equal(2, cascade.Loops.Length);
    }

    [Theory]
    [InlineData(0)]
    [InlineData(-0.1)]
    [InlineData(1e-300)]
    [InlineData(1.0 / 3)]
    public void WithGain_ThenGainOf_GivesTheSameBits(double gain)
    {
        var law = ControlLaw.Of(new(Loop("p"), 1), new(Loop("q"), 2, DisplayScale: 1e-3));
        Assert.Equal((gain, 2), (law.WithGain("p", gain).GainOf("p"), law.WithGain("p", gain).GainOf("q")));
        Assert.Equal((1, gain), (law.WithGain("q", gain).GainOf("p"), law.WithGain("q", gain).GainOf("q")));
    }

    [Fact]
    public void WithGain_OnALaw_LeavesTheLawAsItWas()
    {
        var law = ControlLaw.Of(new(Loop("p"), 1), new(Loop("q"), 2));
        var closed = Close(law);
        var changed = law.WithGain("p", 50);
        Assert.NotSame(law, changed);
        Assert.Equal([1.0, 2.0], law.Loops.Select(l => l.Gain));
        Assert.Equal((1, 50), (law.GainOf("p"), changed.GainOf("p")));
        Assert.Equal(-1 + 1 + 2, closed.Stiffness["a", "b"]);
    }

    [Fact]
    public void Of_SettingsChangedAfterwards_ChangesNothing()
    {
        LoopSetting[] settings = [new(Loop("p"), 1), new(Loop("q"), 2)];
        PatternWeight[] weights = [new("a", 1), new("b", 2)];
        var law = ControlLaw.Of(settings);
        var (sensor, actuator) = (Sensor.Weighted(weights), Actuator.Weighted(weights));
        settings[0] = settings[1];
        weights[0] = new PatternWeight("c", 9);
        Assert.Equal(["p", "q"], law.Loops.Select(l => l.Loop.Name));
        Assert.Equal([("a", 1.0), ("b", 2.0)], sensor.Weights.Select(w => (w.Point, w.Weight)));
        Assert.Equal([("a", 1.0), ("b", 2.0)], actuator.Weights.Select(w => (w.Point, w.Weight)));
    }

    [Fact]
    public void Create_ClosedLoop_LeavesTheStructureAsItWas()
    {
        var structure = Two();
        var closed = ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(Loop("p"), 10)));
        closed.Stiffness.ToMatrix().Clear();
        ClosedLoopAnalysis.Spectrum(closed);
        Assert.Equal((-1, 9), (structure.Stiffness["a", "b"], closed.Stiffness["a", "b"]));
    }

    [Fact]
    public void StateMatrix_DegreeOfFreedomWithAPrime_HasDistinctNames()
    {
        var structure = ElasticStructure.FromRowMajor(["b", "b′", "a"], [1, 0, 0, 0, 1, 0, 0, 0, 1], new double[9], new double[9]);
        var state = ClosedLoopAnalysis.StateMatrix(ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(Loop("p"), 1))));
        Assert.Equal(6, state.Rows.Distinct(StringComparer.Ordinal).Count());
    }

    [Fact]
    public void ToString_SensorLoopAndLaw_ReadLikeTheDrawing()
    {
        var actuator = Actuator.Weighted(new("foot.x", -0.5), new("floor", 2));
        var loop = FeedbackLoop.Create("pos", Sensor.Difference("tool.x", "foot.x"), actuator, Position);
        Assert.Equal("pos: tool.x - foot.x → -0.5·foot.x + 2·floor", loop.ToString());
        Assert.Equal("pos = 6000000 N/m", new LoopSetting(loop, 6e6, "N/m").ToString());
        Assert.Equal("rate = 2, pos = 3 1/s × rate", ControlLaw.Cascade(new(Loop("rate"), 2), new(loop, 3, "1/s")).ToString());
    }

    private static FeedbackLoop Loop(string name) => FeedbackLoop.Create(name, Sensor.At("b"), Actuator.At("a"), Position);

    private static ElasticStructure Two() => ElasticStructure.FromRowMajor(["a", "b"], [1, 0, 0, 1], [0, 0, 0, 0], [2, -1, -1, 1]);

    private static ClosedLoop Close(ControlLaw law) => ClosedLoop.Create(Two(), law);
}
