using System.Collections.Immutable;
using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;

namespace GainMargin;

/// <summary>A path made ready for sampling: normalised once, permanent rigid motion found once, decompositions counted.</summary>
internal sealed class SweepModel
{
    /// <summary>Most pairs polished in one sample.</summary>
    private const int MostPolished = 4;

    private readonly double[][] _polynomials;
    private readonly CancellationToken _cancellation;

    /// <param name="path">The path.</param>
    /// <param name="cancellation">Cancels between two decompositions.</param>
    /// <param name="decay">Decay rate that every root is to have, in the time unit of the model; roots are moved right by it.</param>
    public SweepModel(GainPath path, CancellationToken cancellation, double decay = 0)
    {
        Path = path;
        Decay = decay;
        _cancellation = cancellation;
        _polynomials = Array.ConvertAll(path.GainPolynomials(), Trimmed);
        Model = new NormalisedModel(decay == 0 ? path.Nominal.Pencil : path.Nominal.Pencil.Decaying(decay));
        Permanent = FindPermanent();
    }

    public GainPath Path { get; }

    /// <summary>Decay rate demanded; zero for stability alone.</summary>
    public double Decay { get; }

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
        var roots = Counted(value, () => RootSet.Polished(Model, gains, Permanent, MostPolished));
        return new SweepSample(value, roots, roots.Solution.Slopes(gains, SlopesAt(value)));
    }

    /// <summary>The verdict at one value: by count with polished roots, or by a theorem where the count leaves it open.</summary>
    /// <remarks>
    /// Rigid motion that is free only at this value is split off as well. Where a root is at infinity nothing is claimed.
    /// </remarks>
    public StabilityVerdict JudgeAt(double value)
    {
        double[] gains = GainsAt(value);
        try
        {
            var count = Counted(value, () => RootSet.Polished(Model, gains, RigidMotion.Of(Model, gains))).Count;
            return count.Verdict == StabilityVerdict.Undecided ? SpectrumFinder.Decide(count, FactsAt(value)) : count.Verdict;
        }
        catch (NumericalFailureException failure) when (failure.Stage == ModalSolution.SingularMass)
        {
            return StabilityVerdict.Undecided;
        }
    }

    /// <summary>Root count at one value, polished; only the permanent rigid motion is split off.</summary>
    public RootCount CountAt(double value)
    {
        double[] gains = GainsAt(value);
        return Counted(value, () => RootSet.Polished(Model, gains, Permanent)).Count;
    }

    /// <summary>
    /// Verdict of a theorem that holds for every value between two: the conditions of those that give <em>stable</em> and
    /// <em>marginal</em> are convex in the matrices, so where these are affine in the value it is enough that both ends meet
    /// them. Undecided if there is none.
    /// </summary>
    public StabilityVerdict TheoremOver(double from, double to)
    {
        if (Model.Hat.Residual is not null || _polynomials.Any(p => p.Length > 2))
        {
            return StabilityVerdict.Undecided;
        }

        var there = FactsAt(to);
        return FactsAt(from)
            .Where(f => f.Verdict is StabilityVerdict.Stable or StabilityVerdict.Marginal && there.Any(t => t.Name == f.Name && t.Verdict == f.Verdict))
            .Select(f => f.Verdict).FirstOrDefault(StabilityVerdict.Undecided);
    }

    /// <summary>All roots at one value with the rigid motion of that value split off, straight from the decomposition.</summary>
    public RootSet Decomposed(double value, RigidMotion rigid) => Counted(value, () => RootSet.Raw(Model, GainsAt(value), rigid));

    public RootSet RootsAt(double value) => Counted(value, () => RootSet.Polished(Model, GainsAt(value), Permanent, MostPolished));

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

    /// <summary>Without leading zeros: a loop whose gain stays zero does not move.</summary>
    public static double[] Trimmed(double[] polynomial)
    {
        int last = Array.FindLastIndex(polynomial, c => c != 0);
        return polynomial[..Math.Max(1, last + 1)];
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

    /// <summary>The theorems are about stability, not about a decay rate.</summary>
    private ImmutableArray<DecidingFact> FactsAt(double value) => Decay == 0 ? SplitFinder.Run(Path.At(value)).Facts : [];

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
        var hat = Model.ClosedHat(held);
        var even = Model.Even.At(held);
        var moduli = Model.Even.ModuliAt(held);
        bool Positions(int k) => moves[k] && Model.Hat.Ratios[k].Position != 0;
        bool Rates(int k) => moves[k] && Model.Hat.Ratios[k].Rate != 0;

        RigidMotion Side(bool onLeft)
        {
            Matrix<double> Of(Matrix<double> a) => onLeft ? a.Transpose() : a;
            Matrix<double> Patterns(LoopedPencil pencil) => onLeft ? pencil.Drive : pencil.Sense;
            Func<Matrix<double>, bool> MeetsNo(Matrix<double> matrix, Matrix<double> sizes, Func<int, bool> counts)
            {
                var rows = Stacked(Of(matrix), Patterns(Model.Even), counts);
                var rowModuli = Stacked(Of(sizes), Patterns(Model.Even), counts).PointwiseAbs();
                return basis => Model.IsAnnihilated(rows, rowModuli, basis);
            }

            return RigidMotion.Find(
                Stacked(Of(hat.Stiffness), Patterns(Model.Hat), Positions), Stacked(Of(hat.Damping), Patterns(Model.Hat), Rates), onLeft,
                MeetsNo(even.Stiffness, moduli.Stiffness, Positions), MeetsNo(even.Damping, moduli.Damping, Rates));
        }

        return RigidMotion.Larger(Side(onLeft: false), Side(onLeft: true));
    }

    /// <summary>The held matrix with the patterns of the moving loops below it, each of the size of the matrix.</summary>
    private static Matrix<double> Stacked(Matrix<double> held, Matrix<double> patterns, Func<int, bool> counts)
    {
        double size = Dense.Norm(held);
        size = size > 0 ? size : 1;
        var stacked = held;
        for (int k = 0; k < patterns.ColumnCount; k++)
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
