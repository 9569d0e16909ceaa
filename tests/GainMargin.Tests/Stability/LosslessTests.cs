using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

/// <summary>Loops whose roots are mirrored in the imaginary axis at every gain.</summary>
public sealed class LosslessTests
{
    private static readonly DofNames Names = ["x", "y", "z"];

    private static GainPath Path(double[] damping, double[] stiffness, string sensor, string actuator, FeedbackRatios ratios, double from, double to, params LoopSetting[] held)
    {
        var structure = ElasticStructure.FromRowMajor(Names, [1, 0, 0, 0, 2, 0, 0, 0, 1.5], damping, stiffness);
        var law = ControlLaw.Of([Boundaries.Loop("g", sensor, actuator, ratios, 0.125), .. held]);
        return GainPath.OneLoop(ClosedLoop.Create(structure, law), "g", GainRange.Between(from, to));
    }

    private static readonly double[] Springs = [3, -1, 0, -1, 2, -1, 0, -1, 2];
    private static readonly double[] None = new double[9];

    /// <summary>Counts of growing roots by Sturm's chain in z = −s², which shares no code with the library.</summary>
    private static int Growing(GainPath path, double gain) => Oracles.DenseCount.Of(path, gain).Growing ?? -1;

    public static TheoryData<string> Cases => ["position", "acceleration", "held circulatory loop", "gyroscopic"];

    private static GainPath Of(string which) => which switch
    {
        "position" => Path(None, Springs, "z", "x", new() { Position = 1 }, -6, 8),
        "acceleration" => Path(None, Springs, "z", "x", new() { Acceleration = 1 }, -3, 3),
        "held circulatory loop" => Path(
            None, Springs, "z", "x", new() { Position = 1 }, -6, 8, Boundaries.Loop("held", "y", "x", new() { Position = 1 }, 0.25)),
        _ => Path([0, 0.75, 0, -0.75, 0, 0.5, 0, -0.5, 0], Springs, "y", "y", new() { Position = 1 }, -8, 8),
    };

    [Theory]
    [MemberData(nameof(Cases))]
    public void FindAll_MirroredRoots_CompleteWithCountsThatAnIndependentMethodConfirms(string which)
    {
        var path = Of(which);

        var boundary = OnsetFinder.FindAll(path);

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.Contains(boundary.Cautions, c => c.Kind == CautionKind.LosslessLoop);
        Assert.NotEmpty(boundary.Onsets);
        Assert.All(boundary.Intervals, i => Assert.Equal(i.Count.Growing > 0 ? StabilityVerdict.Unstable : StabilityVerdict.Marginal, i.Inside));
        foreach (var interval in boundary.Intervals)
        {
            foreach (double share in new[] { 0.001, 0.3, 0.7, 0.999 })
            {
                double gain = interval.From + (share * (interval.To - interval.From));
                Assert.Equal(interval.Count.Growing, Growing(path, gain));
            }
        }
    }

    // Damping however small: the onset jumps down, as Ziegler found.
    [Fact]
    public void FindAll_TinyDamping_OnsetBelowTheCoalescence()
    {
        double lossless = OnsetFinder.FindAll(Boundaries.Lossless()).Onsets[0].Gain;

        double damped = OnsetFinder.FindAll(Boundaries.Lossless(1e-9)).Onsets[0].Gain;

        Assert.Equal(41.0 / 28, damped, 1e-9);
        Assert.True(damped < 0.75 * lossless);
    }

    [Fact]
    public void FindAll_CollocatedUndampedLoop_NoFlutterAtAll()
    {
        var boundary = OnsetFinder.FindAll(Path(None, Springs, "y", "y", new() { Position = 1 }, -8, 8));

        Assert.Equal(OnsetKind.Divergence, Assert.Single(boundary.Onsets).Kind);
        Assert.Equal(StabilityVerdict.Marginal, boundary.Intervals[^1].Inside);
    }

    [Fact]
    public void FindAll_FreeBodyWithoutDamping_StaysMarginalWhereThePositionHoldsIt()
    {
        var structure = ElasticStructure.FromRowMajor(["x", "y"], [1, 0, 0, 1], [0, 0, 0, 0], [1, -1, -1, 1]);

        var boundary = OnsetFinder.FindAll(Boundaries.Path(structure, Boundaries.Loop("g", "x", "x", new() { Position = 1 }, 0.5), -1, 2));

        Assert.Equal(0, Assert.Single(boundary.Onsets).Gain, 1e-14);
        Assert.Equal([StabilityVerdict.Unstable, StabilityVerdict.Marginal], boundary.Intervals.Select(i => i.Inside));
        Assert.Equal([1, 0], boundary.Intervals.Select(i => i.Count.Growing));
    }
}
