using System.Numerics;
using GainMargin.Numerics;
using GainMargin.Tests.Oracles;

namespace GainMargin.Tests.Support;

/// <summary>A term on the imaginary axis three times: as the library keeps it, exactly, and as a function of complex <c>s</c>.</summary>
internal sealed record AxisTerm(string Kind, PairTerm Term, ExactTransfer Exact, Func<Complex, Complex> Direct)
{
    public static AxisTerm Second(double e, double f, double d, double kappa, double uncertainty = 0)
        => new(
            FormattableString.Invariant($"({e}s + {f})/(s² + {d}s + {kappa})"), PairTerm.Second(e, f, d, kappa, uncertainty),
            ExactTransfer.Second(e, f, d, kappa), s => ((e * s) + f) / ((s * s) + (d * s) + kappa));

    public static AxisTerm First(double residue, double pole, double uncertainty = 0)
        => new(
            FormattableString.Invariant($"{residue}/(s - {pole})"), PairTerm.First(residue, pole, uncertainty),
            ExactTransfer.First(residue, pole), s => residue / (s - pole));

    public static AxisTerm Pair(Complex residue, Complex pole, double uncertainty = 0)
        => new(
            FormattableString.Invariant($"{residue}/(s - {pole}) and its conjugate"), PairTerm.Pair(residue, pole, uncertainty),
            ExactTransfer.Pair(residue, pole), s => (residue / (s - pole)) + (Complex.Conjugate(residue) / (s - Complex.Conjugate(pole))));

    public static PairTerms Of(IEnumerable<AxisTerm> terms, double constant = 0) => PairTerms.Of(terms.Select(t => t.Term), constant);

    public static ExactTransfer Exactly(IEnumerable<AxisTerm> terms, double constant = 0)
        => terms.Aggregate(ExactTransfer.Constant(constant), (sum, t) => sum + t.Exact);

    /// <summary>
    /// Any kind of term, with short numbers so that centres are exact; <paramref name="proper"/> leaves out residues at infinity, as a
    /// receptance has none.
    /// </summary>
    public static AxisTerm Any(Random random, bool proper = false)
    {
        double kappa = Short(random, 1, 400);
        double damping = random.Next(4) switch { 0 => 0.25, 1 => 1.0 / 64, 2 => Math.ScaleB(1, -20), _ => -0.125 };
        double e = proper || random.Next(2) == 0 ? 0 : Sign(random) * Short(random, 1, 64);
        double f = Sign(random) * Short(random, 1, 128);
        return random.Next(proper ? 4 : 7) switch
        {
            0 or 1 => Second(e, f, damping, kappa),
            2 => Second(e, f, 0, kappa),
            3 => NearlyEqual(random, e, f),
            4 => First(f, -Short(random, 1, 64)),
            5 => First(f, Short(random, 1, 64)),
            _ => Pair(new Complex(Sign(random) * Short(random, 1, 64), f), new Complex(-damping, Short(random, 16, 256))),
        };
    }

    /// <summary>A multiple of 1/64.</summary>
    private static double Short(Random random, int from, int to) => random.Next(from, to) / 64.0;

    private static int Sign(Random random) => random.Next(2) == 0 ? 1 : -1;

    private static AxisTerm NearlyEqual(Random random, double e, double f)
    {
        var (near, far) = (Short(random, 64, 96), Short(random, 64, 96));
        return Second(e, f, near + far, near * far);
    }
}
