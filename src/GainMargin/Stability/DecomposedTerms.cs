using GainMargin.Numerics;
using Complex = System.Numerics.Complex;

namespace GainMargin;

/// <summary>Terms of a loop from one decomposition of the state matrix at a base value.</summary>
internal static class DecomposedTerms
{
    /// <summary>Values tried as a base where zero will not do: fractions of the range, of no relation to each other.</summary>
    private static readonly double[] Fractions = [0.381966, 0.618034, 0.145898, 0.854102, 0.0557, 0.0081];

    /// <summary>Uncertainty below which no other base is tried; what is left of it is part of every bound.</summary>
    private const double WellKnownPoles = 1e-7;

    /// <summary>A pole nearer to the axis than this multiple of its uncertainty hides what happens there.</summary>
    private const double ClearOfAxis = 16;

    /// <summary>Terms from one decomposition of the state matrix, or <see langword="null"/> where no base gives trusted poles.</summary>
    public static LoopTerms? Of(SweepModel sweep, int loop)
    {
        // A base beyond a loss through infinity is of no use: the search goes from zero gain to that loss.
        var range = sweep.Path.Range;
        var losses = SingularGains.ThroughInfinity(sweep, GainRange.Between(Math.Min(0, range.From), Math.Max(0, range.To))).Found;
        double from = losses.Select(g => g.Gain).Where(g => g < 0).Append(range.From).Max();
        double to = losses.Select(g => g.Gain).Where(g => g > 0).Append(range.To).Min();
        double[] candidates = [0, .. Fractions.Where(_ => from < to).Select(f => from + (f * (to - from)))];
        LoopTerms? best = null;
        double bestScore = LoopTerms.TrustedPoles;
        foreach (double candidate in candidates)
        {
            if (TryBase(sweep, loop, candidate) is not { } terms)
            {
                continue;
            }

            double score = terms.Poles.Select(p => p.Uncertainty / Complex.Abs(p.Value)).Where(double.IsFinite).DefaultIfEmpty(0).Max();
            if (score < bestScore)
            {
                (best, bestScore) = (terms, score);
            }

            if (bestScore < WellKnownPoles)
            {
                break;
            }
        }

        return best;
    }

    private static LoopTerms? TryBase(SweepModel sweep, int loop, double value)
    {
        double[] gains = sweep.GainsAt(value);
        RootSet roots;
        (double Simple, double Double) zero;
        try
        {
            var rigid = RigidMotion.Of(sweep.Model, gains);
            roots = sweep.Decomposed(value, rigid);
            zero = roots.Solution.ZeroCoefficients(loop);
        }
        catch (NumericalFailureException)
        {
            return null;
        }

        int n = sweep.Model.Hat.Order;
        var ratios = sweep.Model.Hat.Ratios[loop];
        double reach = Math.Max(Math.Abs(sweep.Path.Range.From - value), Math.Abs(sweep.Path.Range.To - value));
        double scale = sweep.Polynomials[loop][1];
        var residues = roots.Solution.Residues(loop);
        var builder = new LoopTermsBuilder();
        double blur = Enumerable.Range(0, residues.Length).Select(i => roots.Uncertainty[i] / Complex.Abs(roots.Values[i])).DefaultIfEmpty(0).Max();
        builder.AddZeroRoots(roots.Rigid.ZeroRoots, scale * zero.Simple, scale * zero.Double, blur);
        var real = new List<(double Pole, double Residue, double Uncertainty, double Error)>();

        // Rounding turns a root's vectors, and so its residue, the more the nearer another root is.
        double ErrorOf(int i)
        {
            double gap = Enumerable.Range(0, residues.Length).Where(j => j != i).Select(j => Complex.Abs(roots.Values[i] - roots.Values[j]))
                .Append(roots.Rigid.ZeroRoots > 0 ? Complex.Abs(roots.Values[i]) : double.PositiveInfinity).Min();
            return Complex.Abs(scale * residues[i].Value) * Math.Min(1, roots.Uncertainty[i] / gap);
        }

        for (int i = 0; i < residues.Length; i++)
        {
            var pole = roots.Values[i];
            double uncertainty = roots.Uncertainty[i];
            if (pole.Imaginary < 0)
            {
                continue;
            }

            // A pole on the axis stays there if the loop cannot move it by more than rounding, even where another root meets it.
            var law = ratios.Position + (pole * (ratios.Rate + (pole * ratios.Acceleration)));
            bool isSeen = Complex.Abs(residues[i].Value) > Tolerances.Backward(n, residues[i].Size);
            if (Complex.Abs(pole) <= ClearOfAxis * uncertainty)
            {
                return null;
            }

            bool isMoved = Math.Abs(pole.Real) > ClearOfAxis * uncertainty || pole.Imaginary == 0
                || Math.Sqrt(Complex.Abs(reach * scale * residues[i].Value * law)) > ClearOfAxis * uncertainty;
            if (!isSeen || !isMoved)
            {
                double moved = reach * Math.Abs(scale) * Complex.Abs(law) * (Complex.Abs(residues[i].Value) + Tolerances.Backward(n, residues[i].Size));
                builder.AddInvisible(new LoopPole(pole, uncertainty + moved, false));
            }
            else if (Math.Abs(pole.Real) <= ClearOfAxis * uncertainty)
            {
                return null;
            }
            else if (pole.Imaginary == 0)
            {
                real.Add((pole.Real, scale * residues[i].Value.Real, uncertainty, ErrorOf(i)));
            }
            else
            {
                builder.AddPole(scale * residues[i].Value, pole, uncertainty, ErrorOf(i));
            }
        }

        AddReal(builder, real);
        return new LoopTerms(builder, 0, ratios, value, sweep.Model.Rate, [], false, null);
    }

    private static void AddReal(LoopTermsBuilder builder, List<(double Pole, double Residue, double Uncertainty, double Error)> real)
    {
        real.Sort((a, b) => a.Pole.CompareTo(b.Pole));
        for (int i = 0; i < real.Count; i++)
        {
            if (i + 1 < real.Count && LoopTermsBuilder.IsNear(real[i].Pole, real[i + 1].Pole))
            {
                builder.AddNearPair(
                    real[i].Residue, real[i].Pole, real[i + 1].Residue, real[i + 1].Pole, Math.Max(real[i].Uncertainty, real[i + 1].Uncertainty),
                    real[i].Error + real[i + 1].Error);
                i++;
            }
            else
            {
                builder.AddPole(real[i].Residue, real[i].Pole, real[i].Uncertainty, real[i].Error);
            }
        }
    }
}
