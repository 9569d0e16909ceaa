using GainMargin.Tests.Stability;
using GainMargin.Tests.Support;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Oracles;

public sealed class DenseCountTests
{
    private const int LargestOrder = 6;

    [Fact]
    public void WithoutRationals_SmallLoopsOfEveryFamily_AdmitsTheExactCount()
    {
        int seeds = Seeds.Count(300);
        var (counts, decided) = (0, 0);
        for (int seed = 1; seed <= seeds; seed++)
        {
            var (path, family) = LoopFamilies.Path(seed);
            if (path.Nominal.Structure.Dofs.Count > LargestOrder)
            {
                continue;
            }

            foreach (double share in (double[])[0, 1e-9, 1e-3, 0.03, 0.4, 1])
            {
                double gain = path.Range.From + (share * path.Range.Width);
                var closed = path.At(gain);
                int exact = HalfPlaneCount.Of(new ExactLoop(closed).Characteristic()).Unstable;
                var count = DenseCount.WithoutRationals(closed);
                Assert.True(count.Least <= exact && exact <= count.Most, $"seed {seed} ({family}), gain {gain:R}: {count}, but {exact} roots grow");
                counts++;
                decided += count.Growing is null ? 0 : 1;
            }
        }

        Assert.True(decided > 0.8 * counts, $"only {decided} of {counts} counts were decided");
    }

    [Theory]
    [InlineData(1, 0)]
    [InlineData(3, 2)]
    [InlineData(6, 2)]
    public void WithoutRationals_NoDamping_IsDecidedOnBothSidesOfTheCoalescence(double gain, int growing)
        => Assert.Equal(growing, DenseCount.WithoutRationals(Boundaries.Lossless().At(gain)).Growing);

    [Fact]
    public void Of_MarginNarrowerThanRounding_IsDecidedExactly()
    {
        var path = Boundaries.Flutter();
        double verge = -0.1;

        Assert.Equal(0, DenseCount.Of(path, verge).Growing);
        Assert.Null(DenseCount.WithoutRationals(path.At(Math.BitDecrement(verge))).Growing);
        Assert.Equal(2, DenseCount.Of(path, Math.BitDecrement(verge)).Growing);
    }

    [Fact]
    public void MirroredRoots_FreeHiddenAndDampedModes_AreToldApart()
    {
        var structure = ElasticStructure.FromModes(new ModalTable
        {
            Points = DofNames.Of("x"),
            Frequencies = [Frequency.FromRadians(0), Frequency.FromRadians(1), Frequency.FromRadians(2)],
            DampingRatios = [0, 0, 0.01],
            Shapes = DenseMatrix.OfArray(new double[,] { { 0, 0, 1 } }),
        });
        var closed = Systems.Closed(structure, 0.25, Systems.Loop("x", "x", rate: 1));

        Assert.Equal(new MirroredRoots(Zeros: 2, Pairs: 1), MirroredRoots.Of(new ExactLoop(closed)));
        Assert.Equal(new DenseCount(0, 0), DenseCount.WithoutRationals(closed));
    }
}
