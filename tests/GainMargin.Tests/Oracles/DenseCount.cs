using MathNet.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;
using Complex = System.Numerics.Complex;

namespace GainMargin.Tests.Oracles;

/// <summary>
/// How many roots grow at one gain, between the least and the most that rounding leaves open. Shares no code with the
/// library: two eigenvalue decompositions of two similar matrices must agree within first-order bounds; what they leave
/// open is settled by exact arithmetic, by that of a prime for roots at zero and on the axis, by that of the rationals
/// for small structures.
/// </summary>
/// <param name="Least">Roots that surely grow.</param>
/// <param name="Most">Roots that may grow.</param>
internal readonly record struct DenseCount(int Least, int Most)
{
    private const double Epsilon = 2.220446049250313e-16;
    private const double Safety = 16;
    private const double MirrorReach = 5;
    private const int LargestRational = 4;

    /// <summary>The number of growing roots, or <see langword="null"/> where it is open.</summary>
    public int? Growing => Least == Most ? Least : null;

    public static DenseCount Of(GainPath path, double gain)
    {
        var closed = path.At(gain);
        var numerical = WithoutRationals(closed);
        if (numerical.Growing is null && closed.Structure.Dofs.Count <= LargestRational)
        {
            int growing = HalfPlaneCount.Of(new ExactLoop(closed).Characteristic()).Unstable;
            return new(growing, growing);
        }

        return numerical;
    }

    /// <summary>The count without the last resort, for its own tests.</summary>
    public static DenseCount WithoutRationals(ClosedLoop closed)
    {
        int states = 2 * closed.Structure.Dofs.Count;
        var roots = Roots(closed);
        if (roots is null)
            return new(0, states);
        if (roots.Any(r => r.Side is null) && MirroredRoots.Of(new ExactLoop(closed)) is { } mirrored)
            roots = Settled(roots, mirrored);
        return new(roots.Count(r => r.Side == 1), roots.Count(r => r.Side is null or 1));
    }

    /// <summary>Takes roots off the list of the open ones that are exactly zero, and that are exactly on the axis.</summary>
    private static List<Root> Settled(List<Root> roots, MirroredRoots exact)
    {
        roots = [.. roots.OrderBy(r => Complex.Abs(r.Value))];
        bool zerosApart = roots.Take(exact.Zeros).All(r => Complex.Abs(r.Value) <= r.Radius)
            && roots.Skip(exact.Zeros).All(r => Complex.Abs(r.Value) > r.Radius);
        if (!zerosApart)
            return roots;
        var others = roots.Skip(exact.Zeros).ToList();
        int open = others.Count(r => r.Side is null);

        // A root that is surely off the axis can be one of the mirrored ones only if its mirror image is there too.
        int twofold = 2 * others.Count(r => r.Side == 1 && others.Any(o => o.Side == -1 && o.Touches(r with { Value = -Complex.Conjugate(r.Value) })));
        bool allOpenAreMirrored = open == (2 * exact.Pairs) - twofold;
        for (int i = 0; allOpenAreMirrored && i < others.Count; i++)
        {
            // Its mirror image would be nearly as near, so a mirrored root that stands alone is its own image.
            if (others[i].Side is null && !others.Where((o, k) => k != i && o.Touches(others[i] with { Radius = MirrorReach * others[i].Radius })).Any())
                others[i] = others[i] with { Side = 0 };
        }
        return others;
    }

    private static List<Root>? Roots(ClosedLoop closed)
    {
        if (StateMatrix(closed) is not var (a, moduli) || !a.Enumerate().Concat(moduli.Enumerate()).All(double.IsFinite))
            return null;
        var scale = BalancingScale(a);
        a = a.MapIndexed((i, j, x) => x * scale[j] / scale[i], Zeros.Include);
        moduli = moduli.MapIndexed((i, j, x) => x * scale[j] / scale[i], Zeros.Include);

        // Transposed and in reverse order the iteration takes other steps to the same roots.
        int n = a.RowCount;
        Matrix<double> Turned(Matrix<double> m) => DenseMatrix.Create(n, n, (i, j) => m[n - 1 - j, n - 1 - i]);
        var first = Decomposed(a, moduli, 1);
        var second = Decomposed(Turned(a), Turned(moduli), 2);
        if (first is null || second is null)
            return null;
        List<Root> roots = [];
        foreach (var root in first.OrderBy(r => r.Radius))
        {
            int nearest = Enumerable.Range(0, second.Count).MinBy(k => Complex.Abs(second[k].Value - root.Value));
            var other = second[nearest];
            if (!root.Touches(other))
                return null;
            second.RemoveAt(nearest);
            roots.Add(new(root.Value, root.Radius + other.Radius, root.Side == other.Side ? root.Side : null));
        }
        return roots;
    }

    /// <summary>The matrix of first order in coordinates of unit mass, and what its entries may be wrong by.</summary>
    private static (Matrix<double> Values, Matrix<double> Moduli)? StateMatrix(ClosedLoop closed)
    {
        int n = closed.Structure.Dofs.Count;
        var factor = closed.Structure.Mass.ToMatrix().Cholesky().Factor;
        var inverse = factor.Inverse();
        Matrix<double> Normalised(Matrix<double> m) => inverse * m * inverse.Transpose();
        Matrix<double> Error(NamedMatrix open, NamedMatrix shut)
        {
            var size = inverse.PointwiseAbs();
            return Safety * Epsilon * (size * (open.ToMatrix().PointwiseAbs() + (shut.ToMatrix() - open.ToMatrix()).PointwiseAbs()) * size.Transpose());
        }

        var mass = Normalised(closed.Mass.ToMatrix());
        var massError = Error(closed.Structure.Mass, closed.Mass);
        var back = mass.Inverse();
        if (!back.Enumerate().All(double.IsFinite))
            return null;
        var backSize = back.PointwiseAbs();
        var stiffness = back * Normalised(closed.Stiffness.ToMatrix());
        var damping = back * Normalised(closed.Damping.ToMatrix());
        Matrix<double> Solved(Matrix<double> error, Matrix<double> solution) => backSize * (error
            + ((massError + (Safety * Epsilon * mass.PointwiseAbs())) * solution.PointwiseAbs()));
        var values = new DenseMatrix(2 * n, 2 * n);
        var moduli = new DenseMatrix(2 * n, 2 * n);
        values.SetSubMatrix(0, n, DenseMatrix.CreateIdentity(n));
        values.SetSubMatrix(n, 0, -stiffness);
        values.SetSubMatrix(n, n, -damping);
        moduli.SetSubMatrix(n, 0, Solved(Error(closed.Structure.Stiffness, closed.Stiffness), stiffness));
        moduli.SetSubMatrix(n, n, Solved(Error(closed.Structure.Damping, closed.Damping), damping));
        return (values, moduli);
    }

    /// <summary>Powers of two that make rows and columns about equally large.</summary>
    private static double[] BalancingScale(Matrix<double> a)
    {
        int n = a.RowCount;
        double[] scale = [.. Enumerable.Repeat(1.0, n)];
        for (int round = 0; round < 40; round++)
        {
            bool settled = true;
            for (int i = 0; i < n; i++)
            {
                var (row, column) = (0.0, 0.0);
                for (int k = 0; k < n; k++)
                {
                    if (k == i)
                        continue;
                    row += Math.Abs(a[i, k]) * scale[k] / scale[i];
                    column += Math.Abs(a[k, i]) * scale[i] / scale[k];
                }
                int shift = row == 0 || column == 0 ? 0 : (int)Math.Round(0.5 * Math.Log2(row / column));
                scale[i] = Math.ScaleB(scale[i], shift);
                settled &= shift == 0;
            }
            if (settled)
                break;
        }
        return scale;
    }

    private static List<Root>? Decomposed(Matrix<double> a, Matrix<double> moduli, int seed)
    {
        int n = a.RowCount;
        double size = a.FrobeniusNorm();
        var random = new Random(seed);

        // Within the bounds, and enough to keep the vectors of a defective root apart.
        var moved = a.Map(x => x + Epsilon * size / n * (2 * random.NextDouble() - 1), Zeros.Include);
        Complex[] values;
        Matrix<double> right;
        try
        {
            var evd = moved.Evd(Symmetricity.Asymmetric);
            (values, right) = ([.. evd.EigenValues], evd.EigenVectors);
        }
        catch (NonConvergenceException)
        {
            return null;
        }

        var left = right.Inverse();
        if (!left.Enumerate().All(double.IsFinite))
            return null;
        var error = moduli.Map(x => x + Safety * Epsilon * size, Zeros.Include);
        var radii = new double[n];
        for (int j = 0; j < n; j++)
        {
            bool isPair = values[j].Imaginary != 0;
            int k = isPair ? j + 1 : j;
            var rightSize = Vector<double>.Build.Dense(n, i => isPair ? Hypotenuse(right[i, j], right[i, k]) : Math.Abs(right[i, j]));
            var leftSize = Vector<double>.Build.Dense(n, i => isPair ? 0.5 * Hypotenuse(left[j, i], left[k, i]) : Math.Abs(left[j, i]));
            radii[j] = radii[k] = leftSize * (error * rightSize);
            j = k;
        }

        List<Root> roots = [];
        for (int j = 0; j < n; j++)
        {
            // Roots that near each other move by more than first order says.
            double gap = Enumerable.Range(0, n).Where(k => k != j).Min(k => Complex.Abs(values[k] - values[j]));
            double radius = gap < 8 * radii[j] ? 8 * radii[j] : radii[j];
            roots.Add(new(values[j], radius, Math.Abs(values[j].Real) > radius ? Math.Sign(values[j].Real) : null));
        }
        return roots;
    }

    private static double Hypotenuse(double a, double b) => Math.Sqrt((a * a) + (b * b));

    /// <param name="Value">Where the root is.</param>
    /// <param name="Radius">What it may be wrong by.</param>
    /// <param name="Side">The sign of its real part, or <see langword="null"/> where that is open.</param>
    private sealed record Root(Complex Value, double Radius, int? Side)
    {
        public bool Touches(Root other) => Complex.Abs(Value - other.Value) <= Radius + other.Radius;
    }
}
