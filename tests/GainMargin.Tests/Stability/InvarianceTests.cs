using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Stability;

/// <summary>Invariance of the sweep.</summary>
public sealed class SweepInvarianceTests : InvarianceTests
{
    private protected override StabilityBoundary Find(GainPath path) => GainSweep.Run(path);
}

/// <summary>Invariance of the search without sampling.</summary>
public sealed class SearchInvarianceTests : InvarianceTests
{
    private protected override StabilityBoundary Find(GainPath path) => OnsetFinder.FindAll(path);
}

/// <summary>What must not change the answer: units, order of the degrees of freedom, a mode nobody sees, two signs at once.</summary>
public abstract class InvarianceTests
{
    private const int Seeds = 25;
    private static readonly DofNames Names = ["a", "b", "c", "d"];

    private sealed record Model(Matrix<double> Mass, Matrix<double> Damping, Matrix<double> Stiffness, double[] Drive, double[] Sense, double GainScale = 1)
    {
        public GainPath Path(double reach = 24)
        {
            var names = DofNames.Of([.. Enumerable.Range(0, Drive.Length).Select(i => $"q{i}")]);
            var loop = FeedbackLoop.Create(
                "g", Sensor.Weighted([.. Sense.Select((s, i) => new PatternWeight(names[i], s))]),
                Actuator.Weighted([.. Drive.Select((b, i) => new PatternWeight(names[i], b))]), Ratios);
            var structure = ElasticStructure.FromMatrices(new StructureMatrices { Dofs = names, Mass = Mass, Damping = Damping, Stiffness = Stiffness });
            return GainPath.OneLoop(
                ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(loop, 0.1 * reach, DisplayScale: GainScale))), "g", GainRange.Between(-reach, reach));
        }

        public FeedbackRatios Ratios { get; init; } = new() { Position = 1, Rate = 0.05 };
    }

    private static Model Random(int seed)
    {
        var random = new Random(seed);
        int n = Names.Count;
        Matrix<double> Root() => DenseMatrix.Create(n, n, (_, _) => random.NextDouble() - 0.5);
        Matrix<double> Square(double floor)
        {
            var root = Root();
            return (root * root.Transpose()) + (floor * DenseMatrix.CreateIdentity(n));
        }

        var mass = Square(0.5);
        var stiffness = 4 * Square(0.5);
        var damping = 0.02 * Square(0.5);
        double[] Pattern() => [.. Enumerable.Range(0, n).Select(_ => random.NextDouble() - 0.5)];
        return new Model(mass, damping, stiffness, Pattern(), Pattern());
    }

    public static TheoryData<int> AllSeeds() => [.. Enumerable.Range(1, Seeds)];

    [Fact]
    public void Random_TheseSeeds_HaveOnsetsOfBothKinds()
    {
        var onsets = Enumerable.Range(1, Seeds).SelectMany(seed => Find(Random(seed).Path()).Onsets).ToList();

        Assert.InRange(onsets.Count(o => o.Kind == OnsetKind.Flutter), 20, 200);
        Assert.InRange(onsets.Count(o => o.Kind == OnsetKind.Divergence), 10, 100);
    }

    [Theory]
    [MemberData(nameof(AllSeeds))]
    public void Run_DegreesOfFreedomInOtherUnits_SameOnsets(int seed)
    {
        var model = Random(seed);
        var random = new Random(1000 + seed);
        var scale = DenseMatrix.CreateDiagonal(4, 4, _ => Math.Pow(10, (12 * random.NextDouble()) - 6));
        var scaled = model with
        {
            Mass = Symmetric(scale * model.Mass * scale),
            Damping = scale * model.Damping * scale,
            Stiffness = scale * model.Stiffness * scale,
            Drive = [.. model.Drive.Select((b, i) => b * scale[i, i])],
            Sense = [.. model.Sense.Select((s, i) => s * scale[i, i])],
        };

        AssertSame(model.Path(), scaled.Path());
    }

    [Theory]
    [InlineData(1e3)]
    [InlineData(1e-3)]
    public void Run_TimeInOtherUnits_SameOnsets(double unit)
    {
        foreach (int seed in Enumerable.Range(1, Seeds))
        {
            var model = Random(seed);
            var scaled = model with
            {
                Damping = model.Damping * unit,
                Stiffness = model.Stiffness * (unit * unit),
                Ratios = new FeedbackRatios { Position = unit * unit * model.Ratios.Position, Rate = unit * model.Ratios.Rate },
            };

            AssertSame(model.Path(), scaled.Path(), unit);
        }
    }

    [Theory]
    [InlineData(1e9)]
    [InlineData(1e-9)]
    public void Run_MassesAndForcesInOtherUnits_SameOnsets(double unit)
    {
        foreach (int seed in Enumerable.Range(1, Seeds))
        {
            var model = Random(seed);
            var scaled = model with
            {
                Mass = model.Mass * unit,
                Damping = model.Damping * unit,
                Stiffness = model.Stiffness * unit,
                GainScale = unit,
            };

            AssertSame(model.Path(), scaled.Path());
        }
    }

    [Fact]
    public void Run_DegreesOfFreedomInOtherOrder_SameOnsets()
    {
        foreach (int seed in Enumerable.Range(1, Seeds))
        {
            var model = Random(seed);
            int[] order = [2, 0, 3, 1];
            Matrix<double> Reordered(Matrix<double> a) => DenseMatrix.Create(4, 4, (i, j) => a[order[i], order[j]]);
            double[] Shuffled(double[] a) => [.. order.Select(i => a[i])];

            AssertSame(model.Path(), new Model(
                Reordered(model.Mass), Reordered(model.Damping), Reordered(model.Stiffness), Shuffled(model.Drive), Shuffled(model.Sense)).Path());
        }
    }

    [Fact]
    public void Run_ModeThatNobodySeesAdded_SameOnsets()
    {
        foreach (int seed in Enumerable.Range(1, Seeds))
        {
            var model = Random(seed);
            Matrix<double> Grown(Matrix<double> a, double own) => DenseMatrix.Create(5, 5, (i, j) => i < 4 && j < 4 ? a[i, j] : i == j ? own : 0);

            AssertSame(model.Path(), new Model(
                Grown(model.Mass, 1), Grown(model.Damping, 0.05), Grown(model.Stiffness, 7), [.. model.Drive, 0.3], [.. model.Sense, 0]).Path());
        }
    }

    [Fact]
    public void Run_SensorAndGainSignFlipped_SameOnsets()
    {
        foreach (int seed in Enumerable.Range(1, Seeds))
        {
            var model = Random(seed);

            AssertSame(model.Path(), (model with { Sense = [.. model.Sense.Select(s => -s)], GainScale = -1 }).Path());
        }
    }

    private static Matrix<double> Symmetric(Matrix<double> a) => 0.5 * (a + a.Transpose());

    private protected abstract StabilityBoundary Find(GainPath path);

    private void AssertSame(GainPath reference, GainPath changed, double timeUnit = 1)
    {
        var (expected, actual) = (Find(reference), Find(changed));
        Assert.Equal(expected.Onsets.Select(o => (o.Kind, o.Direction)), actual.Onsets.Select(o => (o.Kind, o.Direction)));
        Assert.Equal(expected.Intervals.Select(i => (i.Inside, i.AtFrom, i.AtTo)), actual.Intervals.Select(i => (i.Inside, i.AtFrom, i.AtTo)));
        foreach (var (wanted, found) in expected.Onsets.Zip(actual.Onsets))
        {
            Assert.Equal(wanted.Gain, found.Gain, 1e-9 * Math.Max(1, Math.Abs(wanted.Gain)));
            Assert.Equal(wanted.Frequency.Radians * timeUnit, found.Frequency.Radians, 1e-8 * timeUnit * Math.Max(1, wanted.Frequency.Radians));
        }
    }
}
