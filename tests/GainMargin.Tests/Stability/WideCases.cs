using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Stability;

/// <summary>
/// Seeded random structures of 2 to 40 degrees of freedom: chains and dense ones, with and without rigid bodies, repeated
/// frequencies, gyroscopic and circulatory parts, damping from none to overdamped; one or two loops, any ratios.
/// </summary>
internal static class WideCases
{
    public static GainPath Path(int seed, int most = 40)
    {
        var random = new Random(seed);
        int n = 2 + random.Next(most - 1);
        var stiffness = random.Next(2) == 0 ? Chain(n, random, grounded: random.Next(3) > 0) : Dense(n, random);
        var mass = DenseMatrix.Create(n, n, (i, j) => i == j ? 0.5 + random.NextDouble() : 0);
        double level = new[] { 0, 1e-8, 1e-4, 1e-2, 0.3, 3 }[random.Next(6)];
        var damping = (level * Math.Sqrt(stiffness.Diagonal().AbsoluteMaximum()) * DenseMatrix.CreateIdentity(n) * 0.1)
            + (stiffness * (level / Math.Sqrt(stiffness.Diagonal().AbsoluteMaximum())));
        if (random.Next(4) == 0)
        {
            var skew = DenseMatrix.Create(n, n, (_, _) => random.NextDouble() - 0.5);
            damping += 0.2 * (skew - skew.Transpose());
        }

        if (random.Next(5) == 0)
        {
            var skew = DenseMatrix.Create(n, n, (_, _) => random.NextDouble() - 0.5);
            stiffness += 0.01 * (skew - skew.Transpose());
        }

        var names = DofNames.Of([.. Enumerable.Range(0, n).Select(i => $"q{i}")]);
        var structure = ElasticStructure.FromMatrices(new StructureMatrices { Dofs = names, Mass = mass, Damping = damping, Stiffness = stiffness });
        int drive = random.Next(n);
        int sense = random.Next(3) == 0 ? drive : random.Next(n);
        var loop = FeedbackLoop.Create("g", Sensor.At(names[sense]), Actuator.At(names[drive]), Ratios(random));
        var law = ControlLaw.Of(new LoopSetting(loop, 0.1));
        if (random.Next(2) == 0)
        {
            law = law.With(new LoopSetting(
                FeedbackLoop.Create("held", Sensor.At(names[drive]), Actuator.At(names[drive]), new FeedbackRatios { Rate = 1 }), 0.3 * random.NextDouble()));
        }

        double reach = Math.Pow(10, (4 * random.NextDouble()) - 2);
        return GainPath.OneLoop(ClosedLoop.Create(structure, law), "g", GainRange.Between(random.Next(3) == 0 ? -reach : 0, reach));
    }

    private static FeedbackRatios Ratios(Random random) => random.Next(5) switch
    {
        0 => new FeedbackRatios { Position = 1 },
        1 => new FeedbackRatios { Rate = 1 },
        2 => new FeedbackRatios { Position = 1, Rate = random.NextDouble() - 0.3 },
        3 => new FeedbackRatios { Acceleration = 0.3, Rate = random.NextDouble() },
        _ => new FeedbackRatios { Position = random.NextDouble() - 0.5, Rate = 1, Acceleration = 0.1 },
    };

    private static Matrix<double> Chain(int n, Random random, bool grounded)
    {
        bool equal = random.Next(3) == 0;
        double[] spring = [.. Enumerable.Range(0, n + 1).Select(_ => equal ? 1 : 0.5 + random.NextDouble())];
        spring[0] = grounded ? spring[0] : 0;
        spring[n] = 0;
        return DenseMatrix.Create(n, n, (i, j) => i == j ? spring[i] + spring[i + 1] : Math.Abs(i - j) == 1 ? -spring[Math.Max(i, j)] : 0);
    }

    private static Matrix<double> Dense(int n, Random random)
    {
        var q = DenseMatrix.Create(n, n, (_, _) => random.NextDouble() - 0.5).QR().Q;
        bool repeated = random.Next(4) == 0;
        var values = DenseMatrix.Create(n, n, (i, j) => i != j ? 0 : repeated && i > 0 && i < 3 ? 4 : Math.Pow(10, (3 * random.NextDouble()) - 1));
        var full = q * values * q.Transpose();
        return 0.5 * (full + full.Transpose());
    }
}
