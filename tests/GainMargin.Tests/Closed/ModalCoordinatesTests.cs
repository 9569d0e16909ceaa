using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>A structure given by its modes against the same structure given by its matrices.</summary>
public sealed class ModalCoordinatesTests
{
    private const double Ratio = 0.03;

    [Theory]
    [InlineData(1, 0.4, 0, 0)]
    [InlineData(4, 0.3, 0.2, 0)]
    [InlineData(6, 0.3, 0.1, 0.2)]
    public void Spectrum_ChainFromModesAndFromMatrices_HasTheSameRoots(int n, double position, double rate, double acceleration)
    {
        var loop = Systems.Loop("q1", $"q{n}", position, rate, acceleration);
        CheckSame(Systems.Closed(Physical(n), 1.5, loop), Systems.Closed(Modal(n, Ratios(n), null), 1.5, loop), n);
    }

    [Fact]
    public void Spectrum_LoopOverSeveralPoints_HasTheSameRoots()
    {
        const int n = 5;
        var loop = FeedbackLoop.Create(
            "loop", Sensor.Difference("q1", "q3"),
            Actuator.Weighted(new PatternWeight("q2", 1), new PatternWeight("q3", -0.5), new PatternWeight("q5", 2)),
            new FeedbackRatios { Position = 0.2, Rate = 0.1 });
        CheckSame(Systems.Closed(Physical(n), 1.5, loop), Systems.Closed(Modal(n, Ratios(n), null), 1.5, loop), n);
    }

    [Fact]
    public void Spectrum_FullModalDampingMatrix_HasTheRootsOfItsPhysicalForm()
    {
        const int n = 4;
        var shapes = Shapes(n);
        var modal = Systems.Uniform(new Random(161), n, n);
        var damping = 0.05 * modal.TransposeAndMultiply(modal);
        var matrices = Systems.Of(DenseMatrix.CreateIdentity(n), shapes * damping * shapes.Transpose(), Stiffness(n));
        var loop = Systems.Loop("q1", "q3", 0.5, 0.1);
        CheckSame(Systems.Closed(matrices, 1, loop), Systems.Closed(Modal(n, [], damping), 1, loop), n);
    }

    [Fact]
    public void Modes_PointsFromModalModes_AreThoseOfTheMatrices()
    {
        const int n = 4;
        var loop = Systems.Loop("q1", "q4", position: 0.5);
        var physical = ClosedLoopAnalysis.Spectrum(Systems.Closed(Physical(n), 1, loop));
        var modal = ClosedLoopAnalysis.Spectrum(Systems.Closed(Modal(n, Ratios(n), null), 1, loop));
        foreach (var (root, other) in physical.Roots.Zip(modal.Roots))
        {
            var points = Shapes(n).ToComplex() * CreateVector.DenseOfEnumerable(other.RightMode.Values);
            var expected = CreateVector.DenseOfEnumerable(root.RightMode.Values);
            var factor = expected.ConjugateDotProduct(points) / expected.ConjugateDotProduct(expected);
            ScaledAssert.Small((points - (factor * expected)).L2Norm(), 1e-12 * points.L2Norm(), $"mode at {root.Value}");
        }
    }

    [Fact]
    public void FromModes_ZeroFrequency_IsAFreeRigidBody()
    {
        // Two unit masses on one spring of 2: ω² = 0, 4.
        double half = Math.Sqrt(0.5);
        var structure = ElasticStructure.FromModes(new ModalTable
        {
            Points = ["left", "right"],
            Frequencies = [Frequency.FromRadians(0), Frequency.FromRadians(2)],
            DampingRatios = [0, 0.1],
            Shapes = DenseMatrix.OfArray(new[,] { { half, half }, { half, -half } }),
        });
        Assert.Equal(new RootCount(0, 2, 2, 0), ClosedLoopAnalysis.Spectrum(Systems.Open(structure)).Count);
    }

    private static void CheckSame(ClosedLoop physical, ClosedLoop modal, int n)
    {
        var first = ClosedLoopAnalysis.Spectrum(physical);
        var second = ClosedLoopAnalysis.Spectrum(modal);
        Assert.Equal((first.Verdict, first.Count), (second.Verdict, second.Count));
        Assert.Equal(2 * n, first.Roots.Length);
        ScaledAssert.Roots([.. first.Roots.Select(r => r.Value)], [.. second.Roots.Select(r => r.Value)], 1e-13 * n);
    }

    /// <summary>Unit masses and springs between two walls: ω_k = 2 sin(kπ/(2(n+1))), shapes √(2/(n+1)) sin(jkπ/(n+1)).</summary>
    private static ElasticStructure Physical(int n)
    {
        var shapes = Shapes(n);
        var damping = shapes * DenseMatrix.OfDiagonalArray([.. Frequencies(n).Select(w => 2 * Ratio * w)]) * shapes.Transpose();
        return Systems.Of(DenseMatrix.CreateIdentity(n), damping, Stiffness(n));
    }

    private static ElasticStructure Modal(int n, double[] ratios, Matrix<double>? damping) => ElasticStructure.FromModes(new ModalTable
    {
        Points = DofNames.Of([.. Enumerable.Range(1, n).Select(i => $"q{i}")]),
        Frequencies = [.. Frequencies(n).Select(Frequency.FromRadians)],
        DampingRatios = [.. ratios],
        DampingMatrix = damping,
        Shapes = Shapes(n),
    });

    private static Matrix<double> Stiffness(int n) => DenseMatrix.Create(n, n, (i, j) => i == j ? 2 : Math.Abs(i - j) == 1 ? -1 : 0);

    private static Matrix<double> Shapes(int n)
        => DenseMatrix.Create(n, n, (i, j) => Math.Sqrt(2.0 / (n + 1)) * Math.Sin((i + 1) * (j + 1) * Math.PI / (n + 1)));

    private static double[] Frequencies(int n) => [.. Enumerable.Range(1, n).Select(k => 2 * Math.Sin(k * Math.PI / (2 * (n + 1))))];

    private static double[] Ratios(int n) => [.. Enumerable.Repeat(Ratio, n)];
}
