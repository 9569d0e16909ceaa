using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Stability;

/// <summary>The isolator's cost and honesty, on loops whose terms are written down.</summary>
public sealed class OnsetIsolatorTests
{
    /// <summary>Terms of modes with frequencies 1, 2, … and residues of alternating sign, as from a modal table.</summary>
    private static LoopTerms Modes(int count, double zeta, FeedbackRatios law, double rigid = 0)
    {
        var names = DofNames.Of("motor", "scale");
        double[] omega = [.. Enumerable.Range(rigid != 0 ? 0 : 1, count).Select(k => (double)k)];
        var modes = new ModalTable
        {
            Points = names,
            Frequencies = [.. omega.Select(Frequency.FromRadians)],
            DampingRatios = [.. omega.Select(_ => zeta)],
            Shapes = DenseMatrix.Create(2, count, (i, j) => i == 0 ? 1 : (j % 3 == 1 ? -0.8 : 1) / (1 + (0.05 * j))),
        };
        var loop = FeedbackLoop.Create("g", Sensor.At("scale"), Actuator.At("motor"), law);
        var closed = ClosedLoop.Create(ElasticStructure.FromModes(modes), ControlLaw.Of(new LoopSetting(loop, 0.1)));
        return LoopTerms.Of(new SweepModel(GainPath.OneLoop(closed, "g", GainRange.Between(rigid != 0 ? 0.01 : 0, 10)), CancellationToken.None))!;
    }

    private static OnsetIsolator Isolated(LoopTerms terms, double reach = 10)
    {
        var isolator = new OnsetIsolator(terms, reach);
        isolator.Run(CancellationToken.None);
        return isolator;
    }

    // Bounds through the modulus of a complex residue would cost like 1/ζ.
    [Theory]
    [InlineData(1e-2)]
    [InlineData(1e-4)]
    [InlineData(1e-6)]
    [InlineData(1e-8)]
    [InlineData(1e-10)]
    public void Run_DampingFalls_CostStaysTheSame(double zeta)
    {
        var isolator = Isolated(Modes(20, zeta, new FeedbackRatios { Position = 1 }));

        Assert.True(isolator.IsComplete);
        Assert.InRange(isolator.Evaluations, 20, 3000);
    }

    [Fact]
    public void Run_RigidBody_CostStaysSmall()
    {
        var isolator = Isolated(Modes(20, 1e-2, new FeedbackRatios { Position = 1, Rate = 0.1 }, rigid: 1));

        Assert.True(isolator.IsComplete);
        Assert.InRange(isolator.Evaluations, 20, 3000);
    }

    [Theory]
    [InlineData(1e-2)]
    [InlineData(1e-10)]
    public void Run_Roots_AgreeWithDenseSampling(double zeta)
    {
        var terms = Modes(6, zeta, new FeedbackRatios { Position = 1, Rate = 0.02 });
        var isolator = Isolated(terms);
        var cell = new LoopCell(terms);
        int anchor = terms.Count - 1;

        // Away from poles, where sampling can be trusted: sign changes of the imaginary part with the real part in reach.
        int changes = 0;
        double previous = 0;
        const int points = 400_000;
        for (int k = 0; k <= points; k++)
        {
            double z = 0.01 + (50.0 * k / points);
            double value = cell.At(anchor, z - terms.Center[anchor], 0, clear: false).Value;
            bool inReach = Math.Abs(cell.RealAt(anchor, z - terms.Center[anchor])) >= 0.1;
            changes += k > 0 && inReach && Math.Sign(value) != Math.Sign(previous) ? 1 : 0;
            previous = value;
        }

        Assert.Equal(changes, isolator.Roots.Count(r => r.Square is > 0.01 and < 50.01));
        Assert.NotEqual(0, changes);
    }

    [Fact]
    public void Run_LosslessLoop_LeavesItUnresolved()
    {
        var isolator = Isolated(Modes(5, 0, new FeedbackRatios { Position = 1 }));

        Assert.False(isolator.IsComplete);
        Assert.Equal(Coverage.Sampled, OnsetFinder.FindAll(Boundaries.Lossless()).Completeness.Flutter);
    }

    [Fact]
    public void Run_Cancelled_Throws()
    {
        var isolator = new OnsetIsolator(Modes(5, 1e-2, new FeedbackRatios { Position = 1 }), 10);

        Assert.Throws<OperationCanceledException>(() => isolator.Run(new CancellationToken(canceled: true)));
    }

    [Fact]
    public void FindAll_TwoLoopsMoving_SweepsAndSaysSo()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Touch());

        Assert.Equal(Coverage.Sampled, boundary.Completeness.Flutter);
        Assert.Equal("sampled sweep", boundary.Provenance.Method);
    }

    [Fact]
    public void FindAll_OneLoop_SaysItIsComplete()
    {
        var boundary = OnsetFinder.FindAll(Boundaries.Flutter());

        Assert.Equal(Coverage.Complete, boundary.Completeness.Flutter);
        Assert.Equal("complete search of one loop", boundary.Provenance.Method);
        Assert.Equal(-0.1, Assert.Single(boundary.Onsets).Gain, 1e-14);
        Assert.Contains("complete, for the model as computed", boundary.ToString(), StringComparison.Ordinal);
    }
}
