using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Finds the onsets of a path by the strongest method that applies, and says which it was. For one loop the onsets are the
/// roots of one real function of frequency, which are isolated without sampling the gain: the result is complete, for the
/// loop as computed and up to rounding. Otherwise the path is swept, and the result says why.
/// </summary>
public static class OnsetFinder
{
    /// <summary>Finds the onsets of a path.</summary>
    /// <param name="path">What is varied, and over which range. An onset within its uncertainty of an end of the range belongs to that end.</param>
    /// <param name="options">Options; the defaults suit most structures.</param>
    /// <param name="progress">Receives the progress, on the calling thread.</param>
    /// <param name="cancellation">Cancels between two steps of the search.</param>
    /// <returns>
    /// The boundary; <see cref="StabilityBoundary.Completeness"/> and <see cref="StabilityBoundary.Provenance"/> say how it was found.
    /// Root loci come from a sweep only.
    /// </returns>
    /// <exception cref="ArgumentException">The narrowest step of the sweep's options is wider than the widest.</exception>
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
        Guard.NotNull(options.Sweep, nameof(options)).Check(nameof(options));
        progress?.Report(new FinderProgress("loop terms", 0, 0));
        var (loop, reason) = OneLoop.Of(path, options, cancellation);
        if (loop is not null)
        {
            var run = new OneLoopRun(loop, progress, cancellation);
            if (run.TryRun() is { } boundary)
            {
                return boundary;
            }

            reason = run.Reason;
        }

        return new SweepRun(path, options.Sweep, progress, cancellation, options, reason).Run();
    }
}
