using System.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Closed;

/// <summary>Modes, backward errors and the order of the roots.</summary>
public sealed class SpectrumModesTests
{
    [Fact]
    public void Modes_RandomLoops_AreNullVectorsOnBothSides()
    {
        var random = new Random(121);
        for (int trial = 0; trial < 200; trial++)
        {
            int n = random.Next(1, 9);
            var loop = Systems.Loop(
                Systems.AnyDof(random, n), Systems.AnyDof(random, n), random.NextDouble(), random.NextDouble(), 0.3 * random.NextDouble());
            var structure = Systems.Random(random, n, skew: 0.5 * random.NextDouble());
            CheckNullVectors(Systems.Closed(structure, 2 * random.NextDouble(), loop), $"trial {trial}");
        }
    }

    [Theory]
    [InlineData(0, 0)]
    [InlineData(0.2, 0)]
    [InlineData(0.2, 0.5)]
    public void Modes_FreeChain_AreNullVectorsOnBothSides(double damper, double groundDamper)
    {
        double[,] spring = { { 1, -1, 0 }, { -1, 3, -2 }, { 0, -2, 2 } };
        var damping = (damper * DenseMatrix.OfArray(spring)) + DenseMatrix.OfDiagonalArray([groundDamper, 0, 0]);
        var mass = DenseMatrix.OfArray(new[,] { { 2, 0.5, 0 }, { 0.5, 1, 0 }, { 0, 0, 3 } });
        CheckNullVectors(Systems.Open(Systems.Of(mass, damping, DenseMatrix.OfArray(spring))), $"dampers {damper}, {groundDamper}");
    }

    [Theory]
    [InlineData(0)]
    [InlineData(0.5)]
    public void Modes_RigidMotionOfAnUnsymmetricStiffness_AreNullVectorsOnBothSides(double groundDamper)
        => CheckNullVectors(Unsymmetric(groundDamper), $"ground damper {groundDamper}", r => r.Value == Complex.Zero);

    [Theory]
    [InlineData(0)]
    [InlineData(0.5)]
    public void Modes_ElasticMotionBesideAnUnsymmetricRigidOne_AreNullVectorsOnBothSides(double groundDamper)
        => CheckNullVectors(Unsymmetric(groundDamper), $"ground damper {groundDamper}", r => r.Value != Complex.Zero);

    [Fact]
    public void Modes_AnyRoot_LargestComponentIsOne()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Random(new Random(122), 6, skew: 0.4)));
        foreach (var mode in spectrum.Roots.SelectMany(r => new[] { r.RightMode, r.LeftMode }))
        {
            double largest = mode.Values.Max(Complex.Abs);
            ScaledAssert.Within(1, largest, 1e-8, "largest component");
            Assert.Contains(Complex.One, mode.Values);
        }
    }

    [Fact]
    public void Modes_SymmetricSystem_LeftModeIsTheConjugateOfTheRight()
    {
        var spectrum = ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Random(new Random(123), 5, damping: 0.1)));
        foreach (var root in spectrum.Roots)
        {
            for (int i = 0; i < 5; i++)
            {
                var difference = root.RightMode.Values[i] - Complex.Conjugate(root.LeftMode.Values[i]);
                ScaledAssert.Small(difference.Magnitude, 1e-12, $"component {i} of the modes of {root}");
            }
        }
    }

    [Fact]
    public void BackwardError_RandomLoops_IsRounding()
    {
        var random = new Random(124);
        for (int trial = 0; trial < 100; trial++)
        {
            int n = random.Next(1, 13);
            var closed = Systems.Closed(
                Systems.Random(random, n, skew: 0.3), random.NextDouble(), Systems.Loop("q1", $"q{n}", position: 1, rate: 0.2));
            foreach (var root in ClosedLoopAnalysis.Spectrum(closed).Roots)
            {
                ScaledAssert.Small(root.BackwardError, 8 * ScaledAssert.Epsilon * Math.Max(4, n), $"trial {trial}: backward error of {root}");
            }
        }
    }

    [Fact]
    public void Roots_RandomLoops_AreOrderedWithConjugatesTogether()
    {
        var random = new Random(125);
        for (int trial = 0; trial < 100; trial++)
        {
            int n = random.Next(1, 9);
            CheckOrder(ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Random(random, n, damping: random.Next(1, 4) * 0.3, skew: 0.3))));
        }
    }

    [Theory]
    [InlineData(0)]
    [InlineData(0.1)]
    public void Roots_EqualOscillators_KeepConjugatesTogether(double damping)
    {
        var identity = DenseMatrix.CreateIdentity(3);
        CheckOrder(ClosedLoopAnalysis.Spectrum(Systems.Open(Systems.Of(identity, damping * identity, identity))));
    }

    [Fact]
    public void Spectrum_SameLoopTwice_RepeatsBits()
    {
        var closed = Systems.Closed(Systems.Random(new Random(126), 7, skew: 0.2), 0.7, Systems.Loop("q1", "q5", position: 1));
        var first = ClosedLoopAnalysis.Spectrum(closed);
        var second = ClosedLoopAnalysis.Spectrum(closed);
        Assert.Equal(first.Roots.Select(r => (r.Value, r.Uncertainty)), second.Roots.Select(r => (r.Value, r.Uncertainty)));
        Assert.Equal(first.Roots.SelectMany(r => r.RightMode.Values), second.Roots.SelectMany(r => r.RightMode.Values));
    }

    private static void CheckOrder(Spectrum spectrum)
    {
        var roots = spectrum.Roots;
        for (int i = 0; i < roots.Length; i++)
        {
            string where = $"root {i} of [{string.Join("; ", roots.Select(r => r.Value))}]";
            if (i > 0)
            {
                Assert.True(roots[i].Frequency >= roots[i - 1].Frequency, $"{where} has a lower frequency than the one before");
                Assert.True(
                    roots[i].Frequency > roots[i - 1].Frequency || roots[i].Value.Real >= roots[i - 1].Value.Real,
                    $"{where} has a lower real part than the one before");
            }

            if (roots[i].Value.Imaginary != 0)
            {
                Assert.True(roots[i].Value.Imaginary > 0, $"{where} is not followed by its conjugate");
                Assert.True(Complex.Conjugate(roots[i].Value) == roots[i + 1].Value, $"{where} is not followed by its conjugate");
                i++;
            }
        }
    }

    /// <summary>No resistance along (1, 1), and no force along (2, 1) from the springs.</summary>
    private static ClosedLoop Unsymmetric(double groundDamper) => Systems.Open(Systems.Of(
        DenseMatrix.CreateIdentity(2), DenseMatrix.OfDiagonalArray([groundDamper, 0]),
        DenseMatrix.OfArray(new double[,] { { 1, -1 }, { -2, 2 } })));

    private static void CheckNullVectors(ClosedLoop closed, string what, Func<SpectrumRoot, bool>? which = null)
    {
        var roots = ClosedLoopAnalysis.Spectrum(closed).Roots.Where(which ?? (_ => true)).ToArray();
        Assert.NotEmpty(roots);
        int n = closed.Structure.Dofs.Count;
        var m = closed.Mass.ToMatrix();
        var d = closed.Damping.ToMatrix();
        var k = closed.Stiffness.ToMatrix();
        foreach (var root in roots)
        {
            var q = (root.Value * root.Value * m.ToComplex()) + (root.Value * d.ToComplex()) + k.ToComplex();
            double size = root.Value.Magnitude;
            double allowed = 32 * ScaledAssert.Epsilon * Math.Max(n, 4)
                * ((size * size * m.FrobeniusNorm()) + (size * d.FrobeniusNorm()) + k.FrobeniusNorm()) * Condition(m);
            var right = CreateVector.DenseOfEnumerable(root.RightMode.Values);
            var left = CreateVector.DenseOfEnumerable(root.LeftMode.Values);
            ScaledAssert.Small((q * right).L2Norm(), allowed * right.L2Norm(), $"{what}: ‖Q(s)v‖ at {root.Value}");
            ScaledAssert.Small((q.ConjugateTranspose() * left).L2Norm(), allowed * left.L2Norm(), $"{what}: ‖wᴴQ(s)‖ at {root.Value}");
        }
    }

    private static double Condition(Matrix<double> mass) => mass.FrobeniusNorm() * mass.Inverse().FrobeniusNorm();
}
