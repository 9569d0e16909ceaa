using System.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>Energy balances at the onsets that a sweep finds.</summary>
public sealed class EnergyBalanceTests
{
    [Fact]
    public void Energy_FlutterOnsets_Closes()
    {
        foreach (var (closed, onset, what) in Onsets())
        {
            var energy = onset.Energy!;
            double size = Math.Abs(energy.Dissipative) + Math.Abs(energy.Circulatory) + Math.Abs(energy.SkewMass);
            double fromLoops = energy.Loops.Sum(l => l.Work);
            // The onset is known to rounding, so what is left over is rounding of the works and of the frequency.
            ScaledAssert.Small(Math.Abs(energy.Residual), 1e-11 * (1 + size), $"{what}: residual of {energy}");
            ScaledAssert.Within(
                energy.Residual, energy.Structure + fromLoops,
                64 * ScaledAssert.Epsilon * closed.Structure.Dofs.Count
                    * (size + Math.Abs(energy.Structure) + energy.Loops.Sum(l => Math.Abs(l.Work))),
                $"{what}: structure and loops of {energy}");
        }
    }

    [Fact]
    public void Energy_FlutterOnsets_AgreesWithTheWorkIntegratedOverACycle()
    {
        foreach (var (closed, onset, what) in Onsets())
        {
            var energy = onset.Energy!;
            double omega = onset.Frequency.Radians;
            var v = onset.RightMode.Values;
            var m = closed.Mass.ToMatrix();
            var d = closed.Damping.ToMatrix();
            var k = closed.Stiffness.ToMatrix();
            double kinetic = PeakKinetic(m, omega, [.. v]);
            var zero = 0 * m;
            double allowed = 1e-12 * (1 + Math.Abs(energy.Dissipative) + Math.Abs(energy.Circulatory) + energy.Loops.Sum(l => Math.Abs(l.Work)));
            Check(zero, (d + d.Transpose()) / 2, zero, energy.Dissipative, "dissipative");
            Check(zero, zero, (k - k.Transpose()) / 2, energy.Circulatory, "circulatory");
            Check((m - m.Transpose()) / 2, zero, zero, energy.SkewMass, "skew mass");
            Check(m, d, k, energy.Residual, "whole");
            var s = closed.Structure;
            Check(s.Mass.ToMatrix(), s.Damping.ToMatrix(), s.Stiffness.ToMatrix(), energy.Structure, "structure");
            for (int l = 0; l < energy.Loops.Length; l++)
            {
                var setting = closed.Law.Loops[l];
                Assert.Equal(setting.Loop.Name, energy.Loops[l].Loop);
                var pattern = setting.Gain * Pattern(s.Dofs, setting.Loop);
                var ratios = setting.Loop.Ratios;
                Check(ratios.Acceleration * pattern, ratios.Rate * pattern, ratios.Position * pattern, energy.Loops[l].Work, setting.Loop.Name);
            }

            void Check(Matrix<double> mass, Matrix<double> damping, Matrix<double> stiffness, double work, string part)
                => ScaledAssert.Within(
                    CycleWork(mass, damping, stiffness, omega, [.. v]) / kinetic, work, allowed, $"{what}: {part} work of {energy}");
        }
    }

    [Fact]
    public void Energy_FlutterFedByNonCollocatedPosition_CirculatoryWorkIsPositive()
    {
        var (closed, range) = Position();
        var onset = Assert.Single(GainSweep.Run(GainPath.OneLoop(closed, "loop", range)).Onsets, o => o.Kind == OnsetKind.Flutter);
        Assert.Equal(CrossingDirection.Destabilising, onset.Direction);
        Assert.True(onset.Energy!.Circulatory > 0, onset.Energy.ToString());
        Assert.True(onset.Energy.Dissipative < 0, onset.Energy.ToString());
        Assert.True(onset.Energy.Structure < 0, onset.Energy.ToString());
        Assert.True(Assert.Single(onset.Energy.Loops).Work > 0, onset.Energy.ToString());
        Assert.Equal(0, onset.Energy.SkewMass);
    }

    [Fact]
    public void Energy_OneDofWithNegativeRate_IsKnownInClosedForm()
    {
        // m = 2, d = 0.3, k = 8: at g = −0.3 the damping is gone, ω = 2, and the loop feeds π·d·ω per ½·m·ω².
        var closed = Systems.Closed(Systems.One(2, 0.3, 8), 0, Systems.Loop("q1", "q1", rate: 1));
        var onset = Assert.Single(GainSweep.Run(GainPath.OneLoop(closed, "loop", GainRange.Between(-1, 0))).Onsets);
        ScaledAssert.Within(-0.3, onset.Gain, 1e-13);
        ScaledAssert.Within(0.3 * Math.PI / 2, onset.Energy!.Loops[0].Work, 1e-12);
        ScaledAssert.Within(-0.3 * Math.PI / 2, onset.Energy.Structure, 1e-12);
        ScaledAssert.Within(0, onset.Energy.Dissipative, 1e-12);
        Assert.Equal(0, onset.Energy.Circulatory);
    }

    [Fact]
    public void Energy_DivergenceOnset_HasNoCycle()
    {
        var closed = Systems.Closed(Systems.One(1, 0.1, 4), 0, Systems.Loop("q1", "q1", position: 1));
        var onset = Assert.Single(GainSweep.Run(GainPath.OneLoop(closed, "loop", GainRange.Between(-10, 0))).Onsets);
        Assert.Equal(OnsetKind.Divergence, onset.Kind);
        Assert.Null(onset.Energy);
    }

    /// <summary>Flutter onsets of a few loops, each with the closed loop at its gain.</summary>
    private static IEnumerable<(ClosedLoop Closed, StabilityOnset Onset, string What)> Onsets()
    {
        var cases = new[] { ("position", Position()), ("rate", Rate()), ("acceleration", Acceleration()), ("two loops", TwoLoops()) };
        foreach (var (name, (closed, range)) in cases)
        {
            var path = GainPath.OneLoop(closed, "loop", range);
            var onsets = GainSweep.Run(path).Onsets.Where(o => o.Kind == OnsetKind.Flutter).ToArray();
            Assert.NotEmpty(onsets);
            foreach (var onset in onsets)
            {
                yield return (path.At(onset.Gain), onset, $"{name} at {onset.Gain:G6}");
            }
        }
    }

    private static ElasticStructure Chain()
    {
        double[,] stiffness = { { 5, -2, 0 }, { -2, 4, -2 }, { 0, -2, 3 } };
        var spring = DenseMatrix.OfArray(stiffness);
        return Systems.Of(DenseMatrix.OfDiagonalArray([1, 2, 1]), (0.02 * spring) + (0.01 * DenseMatrix.CreateIdentity(3)), spring);
    }

    private static (ClosedLoop Closed, GainRange Range) Position()
        => (Systems.Closed(Chain(), 0, Systems.Loop("q3", "q1", position: 1)), GainRange.Between(0, 5));

    private static (ClosedLoop Closed, GainRange Range) Rate()
        => (Systems.Closed(Chain(), 0, Systems.Loop("q3", "q1", rate: 1)), GainRange.Between(-2, 2));

    private static (ClosedLoop Closed, GainRange Range) Acceleration()
        => (Systems.Closed(Chain(), 0, Systems.Loop("q3", "q1", rate: 0.2, acceleration: 1)), GainRange.Between(-1, 1));

    private static (ClosedLoop Closed, GainRange Range) TwoLoops()
    {
        var law = ControlLaw.Of(
            new LoopSetting(Systems.Loop("q3", "q1", position: 1), 0),
            new LoopSetting(Systems.Loop("q2", "q3", 0.3, 0.1, name: "other"), 0.5));
        return (ClosedLoop.Create(Chain(), law), GainRange.Between(-3, 3));
    }

    private static Matrix<double> Pattern(DofNames dofs, FeedbackLoop loop)
    {
        var pattern = new DenseMatrix(dofs.Count, dofs.Count);
        foreach (var b in loop.Actuator.Weights)
        {
            foreach (var s in loop.Sensor.Weights)
            {
                pattern[dofs.IndexOf(b.Point), dofs.IndexOf(s.Point)] += b.Weight * s.Weight;
            }
        }

        return pattern;
    }

    /// <summary>
    /// Work of the force <c>−(Mq″ + Dq′ + Kq)</c> over one cycle of <c>q = Re(v·e^(iωt))</c>, by the trapezoidal rule in time; for a
    /// trigonometric integrand of second order it is exact from three points on.
    /// </summary>
    private static double CycleWork(Matrix<double> m, Matrix<double> d, Matrix<double> k, double omega, Complex[] v)
    {
        const int steps = 64;
        double period = 2 * Math.PI / omega;
        double work = 0;
        for (int i = 0; i < steps; i++)
        {
            var turn = Complex.FromPolarCoordinates(1, 2 * Math.PI * i / steps);
            var q = CreateVector.Dense(Array.ConvertAll(v, c => (c * turn).Real));
            var rate = CreateVector.Dense(Array.ConvertAll(v, c => (Complex.ImaginaryOne * omega * c * turn).Real));
            var second = -omega * omega * q;
            work -= ((m * second) + (d * rate) + (k * q)).DotProduct(rate) * period / steps;
        }

        return work;
    }

    private static double PeakKinetic(Matrix<double> m, double omega, Complex[] v)
    {
        var re = CreateVector.Dense(Array.ConvertAll(v, c => c.Real));
        var im = CreateVector.Dense(Array.ConvertAll(v, c => c.Imaginary));
        return 0.5 * omega * omega * ((m * re).DotProduct(re) + (m * im).DotProduct(im));
    }
}
