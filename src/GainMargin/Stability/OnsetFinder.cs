using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Finds the onsets of a path by the strongest method that applies, and says which it was. For one loop the onsets are the
/// roots of one real function of frequency, which are isolated without sampling the gain: the result is complete, for the
/// model as computed and up to rounding. Otherwise the path is swept.
/// </summary>
public static class OnsetFinder
{
    /// <summary>Finds the onsets of a path.</summary>
    /// <param name="path">What is varied, and over which range.</param>
    /// <param name="options">Options; the defaults suit most structures.</param>
    /// <param name="progress">Receives the progress, on the calling thread.</param>
    /// <param name="cancellation">Cancels between two decompositions.</param>
    /// <returns>The boundary; <see cref="StabilityBoundary.Completeness"/> and <see cref="StabilityBoundary.Provenance"/> say how it was found. Root loci come from a sweep only.</returns>
    /// <exception cref="ArgumentException">The narrowest step of the options is wider than the widest.</exception>
    /// <exception cref="NumericalFailureException">An eigenvalue iteration failed; the exception carries the gain.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    /// <remarks>
    /// H. Nyquist, Regeneration theory, Bell Syst. Tech. J. 11 (1932) 126–147, for the condition <c>1 + g·L(iω) = 0</c>. The
    /// result is a linear screening, not a clearance: raise gains on the rig in stages, with limits and an emergency stop.
    /// </remarks>
    public static StabilityBoundary FindAll(
        GainPath path, OnsetOptions? options = null, IProgress<FinderProgress>? progress = null, CancellationToken cancellation = default)
    {
        Guard.NotNull(path);
        options ??= new OnsetOptions();
        return new OneLoopRun(path, options, progress, cancellation).TryRun() ?? GainSweep.Run(path, options.Sweep, progress, cancellation);
    }
}
