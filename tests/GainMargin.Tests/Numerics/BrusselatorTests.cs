using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Numerics;

/// <summary>
/// Brusselator wave model, <c>A = [[τ₁T + (β−1)I, α²I], [−βI, τ₂T − α²I]]</c> with <c>T = tridiag(1, −2, 1)</c> of order <c>m</c>,
/// <c>τᵢ = δᵢ/(hL)²</c>, <c>h = 1/(m+1)</c>, <c>δ₁ = 0.008</c>, <c>δ₂ = 0.004</c>, <c>α = 2</c>, <c>β = 5.45</c>.
/// </summary>
/// <remarks>
/// Model (confirmed): Z. Bai, D. Day, J. Demmel, J. Dongarra, A test matrix collection for non-Hermitian eigenvalue problems, release 1.0
/// (1996), set BWM, after P. Raschman, M. Kubíček, M. Marek and Y. Saad; Matrix Market, page MVMBWM.
/// </remarks>
public sealed class BrusselatorTests
{
    private const int PointCount = 100;
    private const double Alpha = 2;
    private const double Beta = 5.45;

    /// <summary>Values: 0.51302 and 2.1395 as printed (from memory), the further digits recomputed for the discrete model.</summary>
    [Theory]
    [Trait("Published", "P28")]
    [InlineData(0.5129992509, 0, 2.1395092893, 1e-9)]
    [InlineData(0.51302, 1.81999e-5, 2.1394975, 1e-7)]
    public void Solve_BrusselatorAtTheHopfPoint_LeadingPairAsPublished(double length, double re, double im, double tolerance)
    {
        var leading = RealEigen.Solve(Model(length)).Values.MaxBy(v => v.Real);
        ScaledAssert.Within(re, leading.Real, tolerance, "growth rate");
        ScaledAssert.Within(im, Math.Abs(leading.Imaginary), tolerance, "frequency");
    }

    /// <summary>Derived: the eigenvectors of T reduce the model to matrices of order two, whose roots are closed forms.</summary>
    [Fact]
    [Trait("Published", "P28")]
    public void Solve_Brusselator_AllEigenvaluesWithinTheirUncertainty()
    {
        const double length = 0.51302;
        var system = RealEigen.Solve(Model(length));
        ScaledAssert.Roots([.. Enumerable.Range(1, PointCount).SelectMany(k => Reduced(length, k))], system.Values, system.Uncertainty);
    }

    private static Matrix<double> Model(double length)
    {
        (double first, double second) = Diffusion(length);
        double Coupling(int i, int j) => i == j ? -2 : Math.Abs(i - j) == 1 ? 1 : 0;
        return DenseMatrix.Create(2 * PointCount, 2 * PointCount, (i, j) => (i < PointCount, j < PointCount) switch
        {
            (true, true) => (first * Coupling(i, j)) + (i == j ? Beta - 1 : 0),
            (true, false) => i == j - PointCount ? Alpha * Alpha : 0,
            (false, true) => i - PointCount == j ? -Beta : 0,
            _ => (second * Coupling(i, j)) - (i == j ? Alpha * Alpha : 0),
        });
    }

    private static Complex[] Reduced(double length, int k)
    {
        (double first, double second) = Diffusion(length);
        double sine = Math.Sin(k * Math.PI / (2 * (PointCount + 1)));
        double a = (-4 * first * sine * sine) + Beta - 1;
        double d = (-4 * second * sine * sine) - (Alpha * Alpha);
        var root = Complex.Sqrt(((a - d) * (a - d) / 4) - (Alpha * Alpha * Beta));
        return [((a + d) / 2) + root, ((a + d) / 2) - root];
    }

    private static (double First, double Second) Diffusion(double length)
    {
        double spacing = length / (PointCount + 1);
        return (0.008 / (spacing * spacing), 0.004 / (spacing * spacing));
    }
}
