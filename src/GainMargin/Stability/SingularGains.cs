using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using Complex = System.Numerics.Complex;

namespace GainMargin;

/// <summary>A value at which a closed-loop matrix is singular, with its null vectors in evenly scaled coordinates.</summary>
internal sealed record SingularGain(double Gain, double Uncertainty, Complex[] Right, Complex[] Left);

/// <summary>
/// All values of a path in its range at which <c>T(g) = T₀ + B(I + G(g)R)⁻¹G(g)Σᵀ</c> is singular: divergences for the
/// static matrix, losses through infinity for the mass. With <c>T₀</c> taken at a shift inside the range, and
/// <c>H = [Σᵀ R]·[T −B; GΣᵀ I+GR]⁻¹·[0; I]</c> (<c>r×r</c>), the condition is <c>det(I + ΔG(t)H) = 0</c>: a polynomial
/// eigenproblem of the size of the number of moving loops, so complete and independent of the size of the model.
/// </summary>
/// <remarks>F. Tisseur, K. Meerbergen, SIAM Rev. 43 (2001) 235–286, for the linearisation.</remarks>
internal sealed class SingularGains
{
    private static readonly double[] ShiftFractions = [0.5, 0.381966, 0.618034, 0.145898, 0.854102, 0.034, 0.966, 0.0, 1.0];

    /// <summary>Relative error above which a value is not known at all.</summary>
    private const double Unresolved = 0.1;

    /// <summary>Share of the range by which the search looks beyond its ends: what lies inside is known after polishing.</summary>
    private const double Beyond = 1e-6;

    /// <summary>Condition of the matrix at a shift below which no other is tried; zero is tried first, as small gains are known best from there.</summary>
    private const double WellConditioned = 1e4;

    private readonly SweepModel _sweep;
    private readonly GainRange _range;

    private SingularGains(SweepModel sweep, GainRange range)
    {
        _sweep = sweep;
        _range = range;
    }

    /// <summary>Whether the matrix is regular for almost every value; if not, nothing can be said of its singular values.</summary>
    public bool IsRegular { get; private set; } = true;

    public IReadOnlyList<SingularGain> Found { get; private set; } = [];

    private LoopedPencil Matrices { get; init; } = null!;

    /// <summary>
    /// Values with a zero root beyond those that are always there. Motions without stiffness are given their damping, or
    /// their mass where they meet no damping either: <c>T = K + D·P₁ + M·P₂</c> with <c>Pᵢ = RᵢRᵢᵀM</c>, or
    /// <c>T = K + P₁ᵀD + P₂ᵀM</c> where they are known from their left side.
    /// </summary>
    /// <param name="sweep">The path.</param>
    /// <param name="range">Where to look.</param>
    public static SingularGains Divergences(SweepModel sweep, GainRange range)
    {
        var even = sweep.Model.Even;
        var (drifting, free) = sweep.RigidProjections();
        Vector<double> Weighted(FeedbackRatios ratio, Vector<double> pattern)
            => (ratio.Position * pattern) + (ratio.Rate * drifting.TransposeThisAndMultiply(pattern)) + (ratio.Acceleration * free.TransposeThisAndMultiply(pattern));

        if (!sweep.Permanent.OnLeft)
        {
            return Run(even.Open.Stiffness + (even.Open.Damping * drifting) + (even.Open.Mass * free), sweep, range, (_, b) => b, Weighted, true);
        }

        var open = even.Open.Stiffness + drifting.TransposeThisAndMultiply(even.Open.Damping) + free.TransposeThisAndMultiply(even.Open.Mass);
        return even.Residual is null ? Run(open, sweep, range, Weighted, (_, s) => s, false) : new SingularGains(sweep, range) { IsRegular = false };
    }

    /// <summary>Values at which a root passes through infinity.</summary>
    /// <param name="sweep">The path.</param>
    /// <param name="range">Where to look.</param>
    public static SingularGains ThroughInfinity(SweepModel sweep, GainRange range)
        => Run(sweep.Model.Even.Open.Mass, sweep, range, (_, b) => b, (ratio, s) => ratio.Acceleration * s, true);

    private static SingularGains Run(
        Matrix<double> open, SweepModel sweep, GainRange range,
        Func<FeedbackRatios, Vector<double>, Vector<double>> driven, Func<FeedbackRatios, Vector<double>, Vector<double>> sensed, bool ratioOnSensor)
    {
        var even = sweep.Model.Even;
        int n = even.Order;
        int r = even.LoopCount;
        var drive = Dense.Zero(n, r);
        var sense = Dense.Zero(n, r);
        var residual = even.Residual is null ? null : Dense.Copy(even.Residual);
        for (int k = 0; k < r; k++)
        {
            drive.SetColumn(k, driven(even.Ratios[k], even.Drive.Column(k)));
            sense.SetColumn(k, sensed(even.Ratios[k], even.Sense.Column(k)));
            if (ratioOnSensor)
            {
                residual?.SetRow(k, even.Residual!.Row(k) * even.Ratios[k].Position);
            }
        }

        var zero = Dense.Zero(n, n);
        var unit = new FeedbackRatios[r];
        Array.Fill(unit, new FeedbackRatios { Position = 1 });
        var gains = new SingularGains(sweep, range) { Matrices = new LoopedPencil(new QuadraticPencil(zero, zero, open), drive, sense, unit, residual) };
        gains.Search();
        return gains;
    }

    private void Search()
    {
        int[] moving = [.. Enumerable.Range(0, Matrices.LoopCount).Where(k =>
            _sweep.Polynomials[k].Length > 1 && (Matrices.Sense.Column(k).L2Norm() * Matrices.Drive.Column(k).L2Norm() > 0 || Matrices.Residual?.Row(k).L2Norm() > 0))];
        if (moving.Length == 0)
        {
            return;
        }

        double shift = 0;
        Matrix<double>? flexibility = null;
        double smallest = double.PositiveInfinity;
        double[] candidates = [.. ShiftFractions.Select(f => _range.From + (f * _range.Width))];
        foreach (double at in _range.Contains(0) ? candidates.Prepend(0) : candidates)
        {
            if (smallest < WellConditioned)
            {
                break;
            }

            var (candidate, size) = FlexibilityAt(at, moving);
            if (candidate is not null && size < smallest)
            {
                (shift, flexibility, smallest) = (at, candidate, size);
            }
        }

        IsRegular = flexibility is not null && smallest < 1e-3 / Tolerances.Epsilon;
        if (flexibility is null || !IsRegular)
        {
            return;
        }

        var system = RealEigen.Solve(Companion(flexibility, moving, shift));
        var found = new List<SingularGain>();
        for (int i = 0; i < system.Values.Length; i++)
        {
            var tau = system.Values[i];
            if (tau.Real == 0 || Math.Abs(tau.Imaginary) > Tolerances.RealParameter * Math.Abs(tau.Real))
            {
                continue;
            }

            double error = system.Uncertainty[i] + Math.Abs(tau.Imaginary);
            if (error > Unresolved * Math.Abs(tau.Real))
            {
                // A value that cannot be told from infinity: it matters only if it may lie in the range.
                double reach = Math.Max(Math.Abs(_range.From - shift), Math.Abs(_range.To - shift));
                IsRegular &= (Math.Abs(tau.Real) + error) * reach < 1;
                continue;
            }

            double t = 1 / tau.Real;
            double own = Math.Abs(t) * error / Math.Abs(tau.Real);
            double slack = (10 * own) + (Beyond * _range.Width);
            if (shift + t + slack >= _range.From && shift + t - slack <= _range.To)
            {
                var polished = Polish(shift + t, own);
                if (polished.Gain + polished.Uncertainty >= _range.From && polished.Gain - polished.Uncertainty <= _range.To)
                {
                    found.Add(polished);
                }
            }
        }

        Found = Merged(found);
    }

    /// <summary><c>H</c> at a shift, and the norm of the inverse against the matrix, which says how singular it is.</summary>
    private (Matrix<double>? Flexibility, double Size) FlexibilityAt(double value, int[] moving)
    {
        int n = Matrices.Order;
        int r = Matrices.LoopCount;
        double[] gains = _sweep.GainsAt(value);
        var extended = Dense.Zero(n + r, n + r);
        var output = Dense.Zero(moving.Length, n + r);
        extended.SetSubMatrix(0, 0, Matrices.Open.Stiffness);
        extended.SetSubMatrix(0, n, -Matrices.Drive);
        for (int k = 0; k < r; k++)
        {
            extended[n + k, n + k] = 1;
            for (int j = 0; j < n; j++)
            {
                extended[n + k, j] = gains[k] * Matrices.Sense[j, k];
            }

            for (int j = 0; j < r && Matrices.Residual is not null; j++)
            {
                extended[n + k, n + j] += gains[k] * Matrices.Residual[k, j];
            }
        }

        var input = Dense.Zero(n + r, moving.Length);
        for (int m = 0; m < moving.Length; m++)
        {
            input[n + moving[m], m] = 1;
            for (int j = 0; j < n; j++)
            {
                output[m, j] = Matrices.Sense[j, moving[m]];
            }

            for (int j = 0; j < r && Matrices.Residual is not null; j++)
            {
                output[m, n + j] = Matrices.Residual[moving[m], j];
            }
        }

        if (Dense.TrySolve(extended, input) is not { } solution)
        {
            return (null, double.PositiveInfinity);
        }

        // Rows of the loops are scaled to the open matrix, so that the measure does not depend on the unit of the gain.
        double size = Dense.Norm(solution.SubMatrix(0, n, 0, moving.Length)) * Dense.Norm(Matrices.Open.Stiffness) / (Dense.Norm(Matrices.Drive) + double.Epsilon);
        return (output * solution, size);
    }

    /// <summary>Companion matrix of <c>τᵈI + Σ τᵈ⁻ᵏE_kH</c>, where <c>ΔG(t) = Σ tᵏE_k</c> and <c>τ = 1/t</c>.</summary>
    private Matrix<double> Companion(Matrix<double> flexibility, int[] moving, double shift)
    {
        int m = moving.Length;
        double[][] shifted = [.. moving.Select(k => Shifted(_sweep.Polynomials[k], shift))];
        int degree = shifted.Max(p => p.Length) - 1;
        var companion = Dense.Zero(m * degree, m * degree);
        for (int k = 1; k <= degree; k++)
        {
            for (int i = 0; i < m; i++)
            {
                double e = k < shifted[i].Length ? shifted[i][k] : 0;
                for (int j = 0; j < m; j++)
                {
                    companion[i, ((k - 1) * m) + j] = -e * flexibility[i, j];
                }
            }
        }

        for (int i = m; i < m * degree; i++)
        {
            companion[i, i - m] = 1;
        }

        return companion;
    }

    private SingularGain Polish(double start, double own)
    {
        double value = start;
        var (right, left) = Dense.SmallestSingularVectors(Matrices.At(_sweep.GainsAt(value)).Stiffness);
        double previous = double.PositiveInfinity;
        for (int step = 0; step < 12; step++)
        {
            double[] gains = _sweep.GainsAt(value);
            var closed = Matrices.At(gains);
            var system = BorderedSystem.Solve(closed.At(Complex.Zero), left, right);
            if (system is null)
            {
                break;
            }

            var slope = -BorderedSystem.Inner(system.Left, Matrices.SlopeAt(gains, _sweep.SlopesAt(value)).Times(Complex.Zero, system.Right));
            double change = (BorderedSystem.Inner(system.Left, closed.Times(Complex.Zero, system.Right)) / slope).Real;
            double rounding = BorderedSystem.Rounding(Matrices.ModuliAt(gains), 0, system.Left, system.Right) / Complex.Abs(slope);
            if (!double.IsFinite(change) || !double.IsFinite(rounding) || Math.Abs(value + change - start) > Math.Max(100 * own, 1e-3 * Math.Abs(start)))
            {
                break;
            }

            (left, right) = (system.Left, system.Right);
            value += change;
            if (Math.Abs(change) <= rounding || (Math.Abs(change) >= 0.5 * previous && Math.Abs(change) <= Tolerances.Stagnation * rounding))
            {
                return new SingularGain(value, rounding + Math.Abs(change) + (Tolerances.Epsilon * Math.Abs(value)), right, left);
            }

            previous = Math.Abs(change);
        }

        // Several null vectors at once: the small eigenproblem stands as it is.
        return new SingularGain(start, own, right, left);
    }

    private static List<SingularGain> Merged(List<SingularGain> found)
    {
        var merged = new List<SingularGain>();
        foreach (var gain in found.OrderBy(g => g.Gain))
        {
            if (merged.Count > 0 && gain.Gain - merged[^1].Gain <= 2 * (gain.Uncertainty + merged[^1].Uncertainty))
            {
                merged[^1] = gain.Uncertainty < merged[^1].Uncertainty ? gain : merged[^1];
            }
            else
            {
                merged.Add(gain);
            }
        }

        return merged;
    }

    private static double[] Shifted(double[] polynomial, double shift)
    {
        double[] c = [.. polynomial];
        for (int i = 0; i < c.Length - 1; i++)
        {
            for (int j = c.Length - 2; j >= i; j--)
            {
                c[j] += shift * c[j + 1];
            }
        }

        return c;
    }
}
