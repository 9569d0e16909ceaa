using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Benchmarks;

/// <summary>Invented structures of any size: a chain of unequal masses between ground and tip, with light damping.</summary>
internal static class Laws
{
    public const string Position = "position";

    public static GainPath ChainPath(int order) => GainPath.OneLoop(Chain(order), Position, GainRange.Between(0, 4));

    public static ClosedLoop Chain(int order)
    {
        var names = DofNames.Of([.. Enumerable.Range(1, order).Select(i => $"x{i}")]);
        var stiffness = DenseMatrix.Create(order, order, (i, j) => i == j ? Spring(i) + Spring(i + 1) : Math.Abs(i - j) == 1 ? -Spring(Math.Max(i, j)) : 0);
        stiffness[order - 1, order - 1] -= Spring(order);
        var structure = ElasticStructure.FromMatrices(new StructureMatrices
        {
            Dofs = names,
            Mass = DenseMatrix.Create(order, order, (i, j) => i == j ? 1 + (0.3 * Math.Sin(i)) : 0),
            Damping = stiffness * 0.004,
            Stiffness = stiffness,
        });
        var motor = Actuator.At(names[order / 3]);
        return ClosedLoop.Create(structure, ControlLaw.Of(
            new LoopSetting(FeedbackLoop.Create("rate", Sensor.At(names[order / 3]), motor, new FeedbackRatios { Rate = 1 }), 0.2),
            new LoopSetting(FeedbackLoop.Create(Position, Sensor.At(names[order - 1]), motor, new FeedbackRatios { Position = 1 }), 0.05)));
    }

    /// <summary>Modes at frequencies 1, 2, 3, … with shapes of either sign at the sensor, as a modal survey gives them (invented).</summary>
    public static GainPath Modes(int count, double zeta, FeedbackRatios ratios)
    {
        var table = new ModalTable
        {
            Points = ["motor", "scale"],
            Frequencies = [.. Enumerable.Range(1, count).Select(k => Frequency.FromRadians(k))],
            DampingRatios = [.. Enumerable.Repeat(zeta, count)],
            Shapes = DenseMatrix.Create(2, count, (i, j) => i == 0 ? 1 : (j % 3 == 1 ? -0.8 : 1) / (1 + (0.05 * j))),
        };
        var loop = FeedbackLoop.Create(Position, Sensor.At("scale"), Actuator.At("motor"), ratios);
        return GainPath.OneLoop(
            ClosedLoop.Create(ElasticStructure.FromModes(table), ControlLaw.Of(new LoopSetting(loop, 0.1))), Position, GainRange.Between(0, 10));
    }

    /// <summary>The chain with a few dampers to ground, which couple its modes, and one loop.</summary>
    public static GainPath Coupled(int order)
    {
        var chain = Chain(order);
        var damping = chain.Structure.Damping.ToMatrix();
        for (int i = 0; i < order; i += 7)
        {
            damping[i, i] += 0.02;
        }

        var structure = ElasticStructure.FromMatrices(new StructureMatrices
        {
            Dofs = chain.Structure.Dofs,
            Mass = chain.Structure.Mass.ToMatrix(),
            Damping = damping,
            Stiffness = chain.Structure.Stiffness.ToMatrix(),
        });
        return GainPath.OneLoop(ClosedLoop.Create(structure, chain.Law), Position, GainRange.Between(0, 4));
    }

    /// <summary>The state matrix as a user would form it.</summary>
    public static Matrix<double> PlainStateMatrix(GainPath path, double gain) => ClosedLoopAnalysis.StateMatrix(path.At(gain)).ToMatrix();

    private static double Spring(int i) => 1 + (0.2 * Math.Cos(3 * i));
}
