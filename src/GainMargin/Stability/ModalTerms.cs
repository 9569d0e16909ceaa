using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using Complex = System.Numerics.Complex;

namespace GainMargin;

/// <summary>Terms of a loop from the modes of a structure that damping does not couple.</summary>
internal static class ModalTerms
{
    /// <summary>Share of the distance between two modes that their rounding must stay below.</summary>
    private const double BlurredShare = 1e-3;

    /// <summary>Terms straight from a diagonal structure with the other loops open, or <see langword="null"/>.</summary>
    public static LoopTerms? OfStructure(LoopedPencil pencil, double[][] polynomials, int loop)
    {
        bool othersOpen = Enumerable.Range(0, pencil.LoopCount).All(k => k == loop || (polynomials[k].Length == 1 && polynomials[k][0] == 0));
        if (!othersOpen || !IsDiagonal(pencil.Open.Mass) || !IsDiagonal(pencil.Open.Damping) || !IsDiagonal(pencil.Open.Stiffness))
        {
            return null;
        }

        int n = pencil.Order;
        var mass = pencil.Open.Mass.Diagonal();
        double leastDrive = 16 * Tolerances.Epsilon * pencil.Drive.Column(loop).AbsoluteMaximum();
        double leastSense = 16 * Tolerances.Epsilon * pencil.Sense.Column(loop).AbsoluteMaximum();
        double[] kappa = [.. pencil.Open.Stiffness.Diagonal().Select((k, i) => k / mass[i])];
        double[] d = [.. pencil.Open.Damping.Diagonal().Select((c, i) => c / mass[i])];
        double size = Math.Max(Math.Sqrt(kappa.Max(Math.Abs)), d.Max(Math.Abs));
        double rate = size > 0 ? Math.ScaleB(1, Math.ILogB(size)) : 1;
        var modes = Enumerable.Range(0, n)
            .Select(i =>
            {
                // What is below the rounding of the pattern's largest entry is rounding.
                double f = pencil.Sense[i, loop] * pencil.Drive[i, loop] / mass[i];
                bool seen = Math.Abs(pencil.Drive[i, loop]) > leastDrive && Math.Abs(pencil.Sense[i, loop]) > leastSense;
                double rounding = Math.ILogB(mass[i]) is var e && Math.ScaleB(1, e) == mass[i] ? 0 : Tolerances.Epsilon;
                return new LoopMode(
                    d[i] / rate, kappa[i] / rate / rate, seen ? f : 0, rounding * d[i] / rate, rounding * kappa[i] / rate / rate,
                    seen ? 2 * Tolerances.Epsilon * Math.Abs(f) : Math.Abs(f), seen);
            });
        return Of([.. modes], pencil.Transformed(m => m, b => b, rate), polynomials[loop], loop, rate, true);
    }

    /// <summary>
    /// Terms from the modes of a symmetric structure that its damping does not couple, the other loops included, or
    /// <see langword="null"/>: exact for matrices within rounding of those given, whatever the damping.
    /// </summary>
    public static LoopTerms? OfMatrices(SweepModel sweep, int loop)
    {
        double[] held = sweep.GainsAt(0);
        var closed = sweep.Model.ClosedHat(held);
        bool symmetric = ReferenceEquals(closed.Mass, sweep.Model.Hat.Open.Mass) && Dense.IsSymmetric(closed.Stiffness) && Dense.IsSymmetric(closed.Damping);
        if (!symmetric || sweep.Model.Hat.Residual is not null || sweep.Permanent.OnLeft)
        {
            return null;
        }

        int n = closed.Order;
        var (kappa, shapes) = Dense.SymmetricEigen(closed.Stiffness);
        double near = Tolerances.NullSpace(n, Dense.Norm(closed.Stiffness));
        var damping = shapes.TransposeThisAndMultiply(closed.Damping) * shapes;
        for (int i = 0; i < n;)
        {
            int last = i;
            while (last + 1 < n && kappa[last + 1] - kappa[last] <= near)
            {
                last++;
            }

            if (last > i)
            {
                int size = last - i + 1;
                var rotation = Dense.SymmetricEigen(Dense.SymmetricPart(damping.SubMatrix(i, size, i, size))).Vectors;
                shapes.SetSubMatrix(0, i, shapes.SubMatrix(0, n, i, size) * rotation);
                double mean = kappa[i..(last + 1)].Average();
                for (int k = i; k <= last; k++)
                {
                    kappa[k] = mean;
                }
            }

            i = last + 1;
        }

        damping = shapes.TransposeThisAndMultiply(closed.Damping) * shapes;
        double rounding = Tolerances.NullSpace(n, Dense.Norm(closed.Damping));
        for (int i = 0; i < n; i++)
        {
            kappa[i] = Math.Abs(kappa[i]) <= near && IsRigid(sweep, shapes.Column(i)) ? 0 : kappa[i];
            for (int j = 0; j < n; j++)
            {
                if (i != j && Math.Abs(damping[i, j]) > rounding)
                {
                    return null;
                }
            }
        }

        var drive = sweep.Model.Hat.Drive.Column(loop);
        var sense = sweep.Model.Hat.Sense.Column(loop);
        bool othersOpen = Array.TrueForAll(held, g => g == 0);
        double stiffnessError = Tolerances.Backward(n, Dense.Norm(closed.Stiffness));
        double dampingError = Tolerances.Backward(n, Dense.Norm(closed.Damping));
        var driven = shapes.TransposeThisAndMultiply(drive);
        var sensed = shapes.TransposeThisAndMultiply(sense);

        // Rounding turns a shape towards its neighbours, the more the nearer they are.
        double Blur(int i, Vector<double> patterns, double size)
            => Tolerances.Backward(n, size) + Enumerable.Range(0, n).Where(j => kappa[j] != kappa[i]).Sum(j => stiffnessError / Math.Abs(kappa[j] - kappa[i]) * Math.Abs(patterns[j]));

        LoopMode Mode(int i)
        {
            double b = driven[i];
            double s = sensed[i];
            double errorOfDrive = Blur(i, driven, drive.L2Norm());
            double errorOfSense = Blur(i, sensed, sense.L2Norm());
            double error = (errorOfDrive * (Math.Abs(s) + errorOfSense)) + (errorOfSense * Math.Abs(b));
            bool seen = Math.Abs(b * s) > error;
            bool free = kappa[i] == 0;
            return new LoopMode(
                damping[i, i], kappa[i], seen ? b * s : 0, dampingError, free ? 0 : stiffnessError,
                (b == 0 || s == 0) && othersOpen ? 0 : seen ? error : error + Math.Abs(b * s), seen);
        }

        LoopMode[] modes = [.. Enumerable.Range(0, n).Select(Mode)];
        bool isBlurred = Array.Exists(modes, m => m.D != 0 && Math.Abs(m.D) <= rounding);
        if (isBlurred || HasBlurredNeighbours(modes))
        {
            return null;
        }

        return Array.Exists(modes, m => m.StiffnessError > LoopTerms.TrustedPoles * Math.Abs(m.Kappa))
            ? null
            : Of(modes, sweep.Model.Hat, sweep.Polynomials[loop], loop, sweep.Model.Rate, false);
    }

    private static LoopTerms Of(LoopMode[] modes, LoopedPencil scaled, double[] polynomial, int loop, double rate, bool ownModes)
    {
        var builder = new LoopTermsBuilder();
        var law = scaled.Ratios[loop];
        double Moved(LoopMode mode)
        {
            var s = new Complex(0, Math.Sqrt(Math.Abs(mode.Kappa)));
            return Math.Abs(polynomial[1]) * mode.CouplingError * Complex.Abs(law.Position + (s * (law.Rate + (s * law.Acceleration))));
        }

        foreach (var group in modes.GroupBy(m => (m.D, m.Kappa)))
        {
            var seen = group.Where(m => m.IsSeen).ToArray();
            if (seen.Length > 0)
            {
                builder.AddMode(polynomial[1] * seen.Sum(m => m.F), group.Key.D, group.Key.Kappa);
            }

            // Of several equal modes the loop moves one; if they are equal within rounding only, rounding may move the others.
            foreach (double moved in group.Where(m => !m.IsSeen).Select(Moved).Concat(seen.Skip(1).Select(m => m.StiffnessError)))
            {
                builder.AddHidden(group.Key.D, group.Key.Kappa, moved);
            }
        }

        double constant = scaled.Residual is null ? 0 : polynomial[1] * scaled.Residual[loop, loop];
        var mirrored = law.Rate == 0 && Array.TrueForAll(modes, m => m.D == 0 || m.F == 0)
            ? modes.Where(m => m.F != 0).GroupBy(m => m.Kappa)
                .Select(g => new MirroredPole(g.Key, -polynomial[1] * g.Sum(m => m.F), g.Max(m => m.StiffnessError))).Where(p => p.Residue != 0).ToArray()
            : null;
        return new LoopTerms(builder, constant, law, 0, rate, modes, ownModes, mirrored);
    }

    /// <summary>
    /// Whether two modes that the loop sees lie so near to each other, against their rounding and their damping, that rounding
    /// decides how they couple. Equal ones are one mode to the loop.
    /// </summary>
    private static bool HasBlurredNeighbours(LoopMode[] modes)
    {
        var seen = modes.Where(m => m.IsSeen).OrderBy(m => m.Kappa).ToArray();
        return seen.Zip(seen.Skip(1)).Any(p =>
        {
            double apart = p.Second.Kappa - p.First.Kappa + (Math.Sqrt(Math.Abs(p.Second.Kappa)) * (Math.Abs(p.First.D) + Math.Abs(p.Second.D)));
            bool equal = p.First.Kappa == p.Second.Kappa && p.First.D == p.Second.D;
            return !equal && apart * BlurredShare < p.First.StiffnessError + p.Second.StiffnessError;
        });
    }

    private static bool IsRigid(SweepModel sweep, Vector<double> shape)
    {
        double[] held = sweep.GainsAt(0);
        return sweep.Model.IsAnnihilated(sweep.Model.Even.At(held).Stiffness, sweep.Model.Even.ModuliAt(held).Stiffness, shape.ToColumnMatrix());
    }

    private static bool IsDiagonal(Matrix<double> a)
    {
        double[] values = Dense.Columnwise(a);
        int n = a.RowCount;
        for (int j = 0, at = 0; j < n; j++)
        {
            for (int i = 0; i < n; i++, at++)
            {
                if (i != j && values[at] != 0)
                {
                    return false;
                }
            }
        }

        return true;
    }
}
