using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>A path made ready for sampling: normalised once, permanent rigid motion found once, decompositions counted.</summary>
internal sealed class SweepModel
{
    private readonly double[][] _polynomials;
    private readonly CancellationToken _cancellation;

    public SweepModel(GainPath path, CancellationToken cancellation)
    {
        Path = path;
        _cancellation = cancellation;
        _polynomials = path.GainPolynomials();
        Model = new NormalisedModel(path.Nominal.Pencil);
        Permanent = FindPermanent();
    }

    public GainPath Path { get; }

    public NormalisedModel Model { get; }

    /// <summary>Rigid motion that no gain of the path can restrain.</summary>
    public RigidMotion Permanent { get; }

    public IReadOnlyList<double[]> Polynomials => _polynomials;

    public int Decompositions { get; private set; }

    public double[] GainsAt(double value) => Array.ConvertAll(_polynomials, p => Evaluate(p, value));

    public double[] SlopesAt(double value) => Array.ConvertAll(_polynomials, p => Evaluate([.. p.Skip(1).Select((c, k) => (k + 1) * c)], value));

    public SweepSample SampleAt(double value)
    {
        double[] gains = GainsAt(value);
        var roots = Counted(value, () => RootSet.Raw(Model, gains, Permanent));
        return new SweepSample(value, roots, roots.Solution.Slopes(gains, SlopesAt(value)));
    }

    /// <summary>The verdict at one value: by count with polished roots, or by a theorem where the count leaves it open.</summary>
    /// <param name="value">The value.</param>
    /// <param name="ownMotion">Whether rigid motion that is free only at this value is split off as well.</param>
    public (RootCount Count, StabilityVerdict Verdict, RootSet Roots) JudgeAt(double value, bool ownMotion)
    {
        double[] gains = GainsAt(value);
        var rigid = Permanent;
        if (ownMotion)
        {
            rigid = RigidMotion.Of(Model.Hat.At(gains));
        }

        var roots = Counted(value, () => RootSet.Polished(Model, gains, rigid));
        var count = roots.Count;
        var verdict = count.Verdict == StabilityVerdict.Undecided
            ? SpectrumFinder.Decide(count, SplitFinder.Run(Path.At(value)).Facts)
            : count.Verdict;
        return (count, verdict, roots);
    }

    public RootSet RootsAt(double value) => Counted(value, () => RootSet.Raw(Model, GainsAt(value), Permanent));

    /// <summary>Projections <c>RRᵀM</c> onto drifting and free rigid motion, in evenly scaled coordinates.</summary>
    public (Matrix<double> Drifting, Matrix<double> Free) RigidProjections()
    {
        Matrix<double> Onto(Matrix<double> hat)
        {
            var basis = Model.HatToEven(hat);
            return basis * basis.TransposeThisAndMultiply(Model.Even.Open.Mass);
        }

        return (Onto(Permanent.Drifting), Onto(Permanent.Free));
    }

    private static double Evaluate(double[] polynomial, double value)
    {
        double sum = 0;
        for (int k = polynomial.Length - 1; k >= 0; k--)
        {
            sum = (sum * value) + polynomial[k];
        }

        return sum;
    }

    private T Counted<T>(double value, Func<T> solve)
    {
        _cancellation.ThrowIfCancellationRequested();
        Decompositions++;
        try
        {
            return solve();
        }
        catch (NumericalFailureException failure)
        {
            throw new NumericalFailureException(
                failure.Stage, Guard.Invariant($"{failure.Message} ({Path} = {value:R})"), value, failure.LastResidual, failure);
        }
    }

    private RigidMotion FindPermanent()
    {
        bool[] moves = Array.ConvertAll(_polynomials, p => p.Length > 1);
        double[] held = [.. _polynomials.Select((p, k) => moves[k] ? 0 : p[0])];
        var closed = Model.Hat.At(held);
        return RigidMotion.Larger(
            RigidMotion.Find(
                Stacked(closed.Stiffness, Model.Hat.Sense, k => moves[k] && Model.Hat.Ratios[k].Position != 0),
                Stacked(closed.Damping, Model.Hat.Sense, k => moves[k] && Model.Hat.Ratios[k].Rate != 0), false),
            RigidMotion.Find(
                Stacked(closed.Stiffness.Transpose(), Model.Hat.Drive, k => moves[k] && Model.Hat.Ratios[k].Position != 0),
                Stacked(closed.Damping.Transpose(), Model.Hat.Drive, k => moves[k] && Model.Hat.Ratios[k].Rate != 0), true));
    }

    /// <summary>The held matrix with the patterns of the moving loops below it, each of the size of the matrix.</summary>
    private Matrix<double> Stacked(Matrix<double> held, Matrix<double> patterns, Func<int, bool> counts)
    {
        double size = held.FrobeniusNorm();
        size = size > 0 ? size : 1;
        var stacked = held;
        for (int k = 0; k < Model.Hat.LoopCount; k++)
        {
            var row = patterns.Column(k);
            double length = row.L2Norm();
            if (counts(k) && length > 0)
            {
                stacked = stacked.Stack((row * (size / length)).ToRowMatrix());
            }
        }

        return stacked;
    }
}
