using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using Complex = System.Numerics.Complex;

namespace GainMargin;

/// <summary>Terms of a loop that is even in <c>s</c>.</summary>
internal static class MirroredTerms
{
    /// <summary>
    /// Terms in <c>z = −s²</c> of a structure whose roots are mirrored in the imaginary axis at every gain: without damping and rates
    /// (from the eigenvalues <c>μ</c> of <c>M⁻¹K</c>), or conservative but for gyroscopic terms and a collocated loop (from pairs
    /// <c>±λ</c>, <c>μ = −λ²</c>). <see langword="null"/> otherwise.
    /// </summary>
    public static LoopTerms? Of(SweepModel sweep, int loop)
    {
        double[] held = sweep.GainsAt(0);
        var even = sweep.Model.Even.At(held);
        var ratios = sweep.Model.Hat.Ratios[loop];
        bool undamped = even.Damping.ForAll(d => d == 0);
        var skew = even.Damping + even.Damping.Transpose();
        bool gyroscopic = Dense.IsSymmetric(even.Mass) && Dense.IsSymmetric(even.Stiffness) && skew.ForAll(d => d == 0)
            && AreParallel(sweep.Model.Even.Drive.Column(loop), sweep.Model.Even.Sense.Column(loop));
        bool hasRigidMotion = RigidMotion.Of(sweep.Model, held).ZeroRoots > 0;
        if (ratios.Rate != 0 || !(undamped || gyroscopic) || hasRigidMotion || sweep.Model.Hat.Residual is not null
            || !ReferenceEquals(even.Mass, sweep.Model.Even.Open.Mass))
        {
            return null;
        }

        double scale = sweep.Polynomials[loop][1];
        var poles = undamped ? OfStiffness(sweep, held, loop) : OfPairs(sweep, loop);
        if (poles is null || poles.SelectMany((p, i) => poles.Take(i), (p, q) => Complex.Abs(p.Place - q.Place) <= 4 * (p.Uncertainty + q.Uncertainty)).Any(near => near))
        {
            return null;
        }

        var builder = new LoopTermsBuilder();
        foreach (var pole in poles)
        {
            if (pole.Residue == 0 && pole.Place.Imaginary == 0)
            {
                builder.AddHidden(0, pole.Place.Real, pole.Uncertainty);
            }
            else if (pole.Place.Imaginary == 0)
            {
                builder.AddMode(-scale * pole.Residue.Real, 0, pole.Place.Real);
            }

            if (pole.Place.Imaginary == 0)
            {
                continue;
            }

            var root = Complex.Sqrt(-pole.Place);
            var residue = scale * pole.Residue / (-2 * root);
            double uncertainty = pole.Uncertainty / Complex.Abs(2 * root);
            var (upper, upperResidue) = root.Imaginary > 0 ? (root, residue) : (-root, -residue);
            builder.AddPole(upperResidue, upper, uncertainty);
            builder.AddPole(-Complex.Conjugate(upperResidue), -Complex.Conjugate(upper), uncertainty);
        }

        return new LoopTerms(
            builder, 0, ratios, 0, sweep.Model.Rate, [], false,
            [.. poles.Where(p => p.Residue != 0).Select(p => p with { Residue = scale * p.Residue })]);
    }

    private static MirroredPole[]? OfStiffness(SweepModel sweep, double[] held, int loop)
    {
        var stiffness = sweep.Model.ClosedHat(held).Stiffness;
        var system = RealEigen.Solve(stiffness);
        var drive = sweep.Model.Hat.Drive;
        var sense = sweep.Model.Hat.Sense;
        double patterns = drive.Column(loop).L2Norm() * sense.Column(loop).L2Norm();
        var poles = new List<MirroredPole>();
        for (int i = 0; i < system.Values.Length; i++)
        {
            if (system.Values[i].Imaginary >= 0)
            {
                // Right vectors of unit length, left ones scaled to wᴴv = 1.
                var coupled = Dense.TransposeTimes(sense, system.Right[i])[loop] * Complex.Conjugate(Dense.TransposeTimes(drive, system.Left[i])[loop]);
                double rounding = Tolerances.Backward(stiffness.RowCount, patterns * Dense.Norm2(system.Left[i]));
                poles.Add(new MirroredPole(system.Values[i], Complex.Abs(coupled) <= rounding ? 0 : -coupled, system.Uncertainty[i]));
            }
        }

        return [.. poles];
    }

    private static MirroredPole[]? OfPairs(SweepModel sweep, int loop)
    {
        var roots = sweep.Decomposed(0, RigidMotion.Of(sweep.Model, sweep.GainsAt(0)));
        var residues = roots.Solution.Residues(loop);
        var poles = new List<MirroredPole>();
        for (int i = 0; i < residues.Length; i++)
        {
            var root = roots.Values[i];
            bool onAxis = Math.Abs(root.Real) <= roots.Uncertainty[i];
            if (root.Imaginary < 0 || (!onAxis && root.Real < 0))
            {
                continue;
            }

            root = onAxis ? new Complex(0, root.Imaginary) : root;
            var residue = -2 * residues[i].Value * root;
            var place = -root * root;
            bool isReal = onAxis || root.Imaginary == 0;
            residue = isReal ? residue.Real : residue;
            bool isSeen = Complex.Abs(residues[i].Value) > Tolerances.Backward(sweep.Model.Hat.Order, residues[i].Size);

            // The conjugate of −λ² with Re λ > 0 lies above the real axis.
            var (above, aboveResidue) = isReal ? (place.Real, residue) : (Complex.Conjugate(place), Complex.Conjugate(residue));
            poles.Add(new MirroredPole(above, isSeen ? aboveResidue : 0, 2 * Complex.Abs(root) * roots.Uncertainty[i]));
        }

        return [.. poles];
    }

    private static bool AreParallel(Vector<double> a, Vector<double> b)
    {
        double ratio = (a * b) / (a * a);
        return ratio != 0 && Enumerable.Range(0, a.Count).All(i => b[i] == ratio * a[i]);
    }
}
