namespace GainMargin;

/// <summary>
/// A computation that could not be carried through although the input was valid: an iteration that did not converge, a
/// factorisation that broke down. Carries the stage and the last state, so that a report can say where it happened.
/// </summary>
public sealed class NumericalFailureException : Exception
{
    /// <summary>A failure without a known stage.</summary>
    public NumericalFailureException()
        : this("unknown", "A numerical computation failed.") { }

    /// <summary>A failure without a known stage.</summary>
    /// <param name="message">What failed.</param>
    public NumericalFailureException(string message)
        : this("unknown", message) { }

    /// <summary>A failure without a known stage, with its cause.</summary>
    /// <param name="message">What failed.</param>
    /// <param name="innerException">The cause.</param>
    public NumericalFailureException(string message, Exception innerException)
        : this("unknown", message, innerException: innerException) { }

    /// <summary>A failure at a named stage with the last state reached.</summary>
    /// <param name="stage">The stage of the computation, such as <c>eigenvalues</c>.</param>
    /// <param name="message">What failed.</param>
    /// <param name="lastGain">The gain at which it failed, in the unit of the path, if there was one.</param>
    /// <param name="lastResidual">The last residual, if there was one.</param>
    /// <param name="innerException">The cause, if there is one.</param>
    public NumericalFailureException(
        string stage, string message, double? lastGain = null, double? lastResidual = null, Exception? innerException = null)
        : base(message, innerException)
    {
        Stage = stage;
        LastGain = lastGain;
        LastResidual = lastResidual;
    }

    /// <summary>The stage of the computation.</summary>
    public string Stage { get; }

    /// <summary>The gain at which it failed, in the unit of the path; <see langword="null"/> if no gain was involved.</summary>
    public double? LastGain { get; }

    /// <summary>The last residual; <see langword="null"/> if there was none.</summary>
    public double? LastResidual { get; }
}
