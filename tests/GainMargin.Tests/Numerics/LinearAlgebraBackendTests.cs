using MathNet.Numerics.LinearAlgebra.Double;
using MathNet.Numerics.Providers.LinearAlgebra;

namespace GainMargin.Tests.Numerics;

/// <summary>The provider belongs to the whole process, so nothing may run beside these tests.</summary>
[CollectionDefinition(Name, DisableParallelization = true)]
public sealed class ProcessWideProvider
{
    public const string Name = "process-wide provider";
}

[Collection(ProcessWideProvider.Name)]
public sealed class LinearAlgebraBackendTests : IDisposable
{
    private readonly ILinearAlgebraProvider _before = LinearAlgebraControl.Provider;

    public void Dispose() => LinearAlgebraControl.Provider = _before;

    [Fact]
    public void Current_NothingAskedFor_IsManaged()
    {
        var report = LinearAlgebraBackend.Current;
        Assert.False(report.IsNative);
        Assert.StartsWith("Managed", report.Name, StringComparison.Ordinal);
        Assert.Equal(_before.ToString(), report.Name);
    }

    [Fact]
    public void TryUseNative_WithOrWithoutTheLibrary_ReportsWhatIsInUse()
    {
        var report = LinearAlgebraBackend.TryUseNative();
        Assert.Equal(LinearAlgebraControl.Provider is not ManagedLinearAlgebraProvider, report.IsNative);
        Assert.Equal(LinearAlgebraControl.Provider.ToString(), report.Name);
        Assert.Equal(report, LinearAlgebraBackend.Current);
        if (!report.IsNative)
        {
            Assert.Same(_before, LinearAlgebraControl.Provider);
        }
    }

    [Fact]
    public void TryUseNative_Afterwards_TheLibraryStillComputes()
    {
        LinearAlgebraBackend.TryUseNative();
        var product = DenseMatrix.OfArray(new double[,] { { 1, 2 }, { 3, 4 } }) * DenseMatrix.OfArray(new double[,] { { 0, 1 }, { 1, 0 } });
        Assert.Equal(DenseMatrix.OfArray(new double[,] { { 2, 1 }, { 4, 3 } }), product);
    }
}
