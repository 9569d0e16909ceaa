using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Support;

/// <summary>Small structures and loops; the degrees of freedom are <c>q1</c>, <c>q2</c>, ….</summary>
internal static class Systems
{
    public static ElasticStructure One(double mass, double damping, double stiffness)
        => Of(new[,] { { mass } }, new[,] { { damping } }, new[,] { { stiffness } });

    public static ElasticStructure Of(double[,] mass, double[,] damping, double[,] stiffness)
        => Of(DenseMatrix.OfArray(mass), DenseMatrix.OfArray(damping), DenseMatrix.OfArray(stiffness));

    public static ElasticStructure Of(Matrix<double> mass, Matrix<double> damping, Matrix<double> stiffness)
        => Of(DofNames.Of([.. Enumerable.Range(1, mass.RowCount).Select(i => $"q{i}")]), mass, damping, stiffness);

    public static ElasticStructure Of(DofNames dofs, Matrix<double> mass, Matrix<double> damping, Matrix<double> stiffness)
        => ElasticStructure.FromMatrices(new StructureMatrices { Dofs = dofs, Mass = mass, Damping = damping, Stiffness = stiffness });

    /// <summary>Undamped structure of unit masses.</summary>
    public static ElasticStructure OfStiffness(double[,] stiffness)
    {
        int n = stiffness.GetLength(0);
        return Of(DenseMatrix.CreateIdentity(n), new DenseMatrix(n, n), DenseMatrix.OfArray(stiffness));
    }

    /// <summary>
    /// Positive definite mass and stiffness with eigenvalues between about 1 and a few n, damping positive semidefinite;
    /// <paramref name="skew"/> adds a skew part to the stiffness.
    /// </summary>
    public static ElasticStructure Random(Random random, int n, double damping = 0.02, double skew = 0)
    {
        var s = Uniform(random, n, n);
        return Of(
            Definite(random, n), damping * Gram(Uniform(random, n, n)), Definite(random, n) + (skew * (s - s.Transpose())));
    }

    /// <summary>The name of one of <c>n</c> degrees of freedom.</summary>
    public static string AnyDof(Random random, int n) => $"q{random.Next(1, n + 1)}";

    public static FeedbackLoop Loop(
        string sensor, string actuator, double position = 0, double rate = 0, double acceleration = 0, string name = "loop")
        => FeedbackLoop.Create(
            name, Sensor.At(sensor), Actuator.At(actuator),
            new FeedbackRatios { Position = position, Rate = rate, Acceleration = acceleration });

    public static ClosedLoop Closed(ElasticStructure structure, double gain, FeedbackLoop loop)
        => ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(loop, gain)));

    /// <summary>The structure alone: its loop has no gain.</summary>
    public static ClosedLoop Open(ElasticStructure structure)
        => Closed(structure, 0, Loop(structure.Points[0], structure.Points[0], position: 1));

    /// <summary>The same closed loop with <c>q = diag(unit)·x</c>.</summary>
    public static ClosedLoop InUnits(ClosedLoop closed, IReadOnlyList<double> unit)
    {
        var t = DenseMatrix.OfDiagonalArray([.. unit]);
        var dofs = closed.Structure.Dofs;
        PatternWeight Scaled(PatternWeight w) => w with { Weight = w.Weight * unit[dofs.IndexOf(w.Point)] };
        LoopSetting Rescaled(LoopSetting setting) => setting with
        {
            Loop = FeedbackLoop.Create(
                setting.Loop.Name, Sensor.Weighted([.. setting.Loop.Sensor.Weights.Select(Scaled)]),
                Actuator.Weighted([.. setting.Loop.Actuator.Weights.Select(Scaled)]), setting.Loop.Ratios),
        };
        var structure = Of(
            dofs, t * closed.Structure.Mass.ToMatrix() * t, t * closed.Structure.Damping.ToMatrix() * t,
            t * closed.Structure.Stiffness.ToMatrix() * t);
        return ClosedLoop.Create(structure, ControlLaw.Of([.. closed.Law.Loops.Select(Rescaled)]));
    }

    /// <summary>The same closed loop with rates multiplied by <paramref name="rate"/>: a unit of time so many times as long.</summary>
    public static ClosedLoop InTime(ClosedLoop closed, double rate)
    {
        LoopSetting Rescaled(LoopSetting setting) => setting with
        {
            Loop = FeedbackLoop.Create(setting.Loop.Name, setting.Loop.Sensor, setting.Loop.Actuator, setting.Loop.Ratios with
            {
                Position = setting.Loop.Ratios.Position * rate * rate,
                Rate = setting.Loop.Ratios.Rate * rate,
            }),
        };
        var s = closed.Structure;
        return ClosedLoop.Create(
            Of(s.Dofs, s.Mass.ToMatrix(), s.Damping.ToMatrix() * rate, s.Stiffness.ToMatrix() * (rate * rate)),
            ControlLaw.Of([.. closed.Law.Loops.Select(Rescaled)]));
    }

    public static Matrix<double> Uniform(Random random, int rows, int columns)
        => DenseMatrix.Create(rows, columns, (_, _) => (2 * random.NextDouble()) - 1);

    private static Matrix<double> Definite(Random random, int n) => Gram(Uniform(random, n, n)) + DenseMatrix.CreateIdentity(n);

    private static Matrix<double> Gram(Matrix<double> a) => a.TransposeAndMultiply(a);
}
