using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// The plain counterpart of every other finder: samples the path adaptively and locates each onset that the samples show.
/// Divergences and losses through infinity come from a small eigenproblem in the gain and are complete.
/// </summary>
public static class GainSweep
{
    /// <summary>Sweeps a path and returns its stability boundary.</summary>
    /// <param name="path">What is varied, and over which range.</param>
    /// <param name="options">How finely to sample; the defaults suit most structures.</param>
    /// <param name="progress">Receives the progress, on the calling thread.</param>
    /// <param name="cancellation">Cancels between two decompositions.</param>
    /// <returns>Onsets, intervals, loci, coverage and cautions. "No onset in this range" is a result.</returns>
    /// <exception cref="ArgumentException">The narrowest step of the options is wider than the widest.</exception>
    /// <exception cref="NumericalFailureException">An eigenvalue iteration failed; the exception carries the gain.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    /// <remarks>
    /// Derivatives of the roots: P. Lancaster, On eigenvalues of matrices dependent on a parameter, Numer. Math. 6 (1964)
    /// 377–387. The result is a linear screening, not a clearance: raise gains on the rig in stages, with limits and an
    /// emergency stop.
    /// </remarks>
    public static StabilityBoundary Run(
        GainPath path, SweepOptions? options = null, IProgress<FinderProgress>? progress = null, CancellationToken cancellation = default)
    {
        Guard.NotNull(path);
        options ??= new SweepOptions();
        options.Check(nameof(options));
        return new SweepRun(path, options, progress, cancellation).Run();
    }
}
