using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>
/// A structure with <c>r</c> loops whose gains are still free, in one set of coordinates. With actuator patterns <c>B</c>,
/// sensor patterns <c>S</c> and residual flexibility <c>R</c> from actuators to sensors, the forces are
/// <c>u = −(I + G·diag(p)·R)⁻¹ G (diag(p)Sᵀq + diag(v)Sᵀq′ + diag(a)Sᵀq″)</c>, so each matrix gains a term <c>B C Sᵀ</c>
/// with an <c>r×r</c> coupling <c>C</c>.
/// </summary>
internal sealed class LoopedPencil
{
    private readonly FeedbackRatios[] _ratios;
    private readonly Matrix<double>? _residual;

    public LoopedPencil(
        QuadraticPencil open, Matrix<double> drive, Matrix<double> sense, FeedbackRatios[] ratios, Matrix<double>? residual)
    {
        Open = open;
        Drive = drive;
        Sense = sense;
        _ratios = ratios;
        _residual = residual;
    }

    /// <summary>The structure with all loops open.</summary>
    public QuadraticPencil Open { get; }

    /// <summary>Actuator patterns, <c>n×r</c>.</summary>
    public Matrix<double> Drive { get; }

    /// <summary>Sensor patterns, <c>n×r</c>.</summary>
    public Matrix<double> Sense { get; }

    public int Order => Open.Order;

    public int LoopCount => _ratios.Length;

    public ReadOnlySpan<FeedbackRatios> Ratios => _ratios;

    public Matrix<double>? Residual => _residual;

    public static LoopedPencil Of(ElasticStructure structure, ControlLaw law)
    {
        int n = structure.Dofs.Count;
        int r = law.Loops.Length;
        var drive = Dense.Zero(n, r);
        var sense = Dense.Zero(n, r);
        for (int k = 0; k < r; k++)
        {
            var loop = law.Loops[k].Loop;
            drive.SetColumn(k, WeightedPattern.OnCoordinates(loop.Actuator.Weights, structure, $"actuator of loop \"{loop.Name}\""));
            sense.SetColumn(k, WeightedPattern.OnCoordinates(loop.Sensor.Weights, structure, $"sensor of loop \"{loop.Name}\""));
        }

        return new LoopedPencil(
            new QuadraticPencil(structure.Mass.Values, structure.Damping.Values, structure.Stiffness.Values),
            drive, sense, [.. law.Loops.Select(l => l.Loop.Ratios)], ResidualOf(structure, law));
    }

    /// <summary>The same in coordinates <c>q = T x</c> and time in units of <c>1/ω₀</c>.</summary>
    public LoopedPencil Transformed(Func<Matrix<double>, Matrix<double>> congruence, Func<Matrix<double>, Matrix<double>> transposeTimes, double rate)
    {
        var ratios = Array.ConvertAll(_ratios, p => new FeedbackRatios
        {
            Position = p.Position / rate / rate,
            Rate = p.Rate / rate,
            Acceleration = p.Acceleration,
        });
        return new LoopedPencil(
            new QuadraticPencil(congruence(Open.Mass), congruence(Open.Damping) / rate, congruence(Open.Stiffness) / rate / rate),
            transposeTimes(Drive), transposeTimes(Sense), ratios, _residual is null ? null : _residual * rate * rate);
    }

    /// <summary>
    /// The same with every root moved by <paramref name="rate"/> to the right, <c>s → s − σ</c>: <c>M, D − 2σM, K − σD + σ²M</c> and ratios
    /// <c>p − σv + σ²a, v − 2σa, a</c>. What is stable then decays at least at that rate.
    /// </summary>
    public LoopedPencil Decaying(double rate)
    {
        var ratios = Array.ConvertAll(_ratios, p => new FeedbackRatios
        {
            Position = p.Position - (rate * p.Rate) + (rate * rate * p.Acceleration),
            Rate = p.Rate - (2 * rate * p.Acceleration),
            Acceleration = p.Acceleration,
        });
        return new LoopedPencil(
            new QuadraticPencil(
                Open.Mass, Open.Damping - (Open.Mass * (2 * rate)), Open.Stiffness - (Open.Damping * rate) + (Open.Mass * (rate * rate))),
            Drive, Sense, ratios, _residual);
    }

    /// <summary>Closed matrices at given gains (in model units).</summary>
    public QuadraticPencil At(ReadOnlySpan<double> gains)
    {
        var c = CouplingAt(gains);
        return new QuadraticPencil(Added(Open.Mass, c.Mass), Added(Open.Damping, c.Damping), Added(Open.Stiffness, c.Stiffness));
    }

    /// <summary>Derivative of the closed matrices where the gains change at given slopes.</summary>
    public QuadraticPencil SlopeAt(ReadOnlySpan<double> gains, ReadOnlySpan<double> slopes)
    {
        var c = CouplingSlopeAt(gains, slopes);
        var zero = Dense.Zero(Order, Order);
        return new QuadraticPencil(Added(zero, c.Mass), Added(zero, c.Damping), Added(zero, c.Stiffness));
    }

    /// <summary>Sum of the moduli of all terms of each entry: what rounding is measured against.</summary>
    public QuadraticPencil ModuliAt(ReadOnlySpan<double> gains)
    {
        var c = CouplingAt(gains);
        var drive = Drive.PointwiseAbs();
        var sense = Sense.PointwiseAbs();
        Matrix<double> Sum(Matrix<double> open, Matrix<double> coupling)
            => open.PointwiseAbs() + (drive * coupling.PointwiseAbs()).TransposeAndMultiply(sense);
        return new QuadraticPencil(Sum(Open.Mass, c.Mass), Sum(Open.Damping, c.Damping), Sum(Open.Stiffness, c.Stiffness));
    }

    /// <summary>Couplings, each <c>r×r</c>.</summary>
    public QuadraticPencil CouplingAt(ReadOnlySpan<double> gains)
    {
        double[] g = gains.ToArray();
        var feedthrough = Feedthrough(g);
        return new QuadraticPencil(
            Coupling(feedthrough, g, p => p.Acceleration), Coupling(feedthrough, g, p => p.Rate), Coupling(feedthrough, g, p => p.Position));
    }

    public QuadraticPencil CouplingSlopeAt(ReadOnlySpan<double> gains, ReadOnlySpan<double> slopes)
    {
        double[] g = gains.ToArray();
        double[] dg = slopes.ToArray();
        var x = Feedthrough(g);
        if (x is null)
        {
            return new QuadraticPencil(Coupling(null, dg, p => p.Acceleration), Coupling(null, dg, p => p.Rate), Coupling(null, dg, p => p.Position));
        }

        // (X G)′ = X G′ − X (G′ P R) X G
        var inner = x * Scaled(dg, p => p.Position) * _residual! * x;
        Matrix<double> Slope(Func<FeedbackRatios, double> ratio) => (x * Scaled(dg, ratio)) - (inner * Scaled(g, ratio));
        return new QuadraticPencil(Slope(p => p.Acceleration), Slope(p => p.Rate), Slope(p => p.Position));
    }

    /// <summary>One loop's share of the couplings, the others' gains kept.</summary>
    public QuadraticPencil CouplingOf(int loop, ReadOnlySpan<double> gains)
    {
        var all = CouplingAt(gains);
        Matrix<double> Row(Matrix<double> c)
        {
            var row = Dense.Zero(c.RowCount, c.ColumnCount);
            row.SetRow(loop, c.Row(loop));
            return row;
        }

        return new QuadraticPencil(Row(all.Mass), Row(all.Damping), Row(all.Stiffness));
    }

    /// <summary>Adds <c>B C Sᵀ</c>.</summary>
    public Matrix<double> Added(Matrix<double> to, Matrix<double> coupling)
        => coupling.ForAll(c => c == 0) ? to : to + (Drive * coupling).TransposeAndMultiply(Sense);

    private static Matrix<double>? ResidualOf(ElasticStructure structure, ControlLaw law)
    {
        if (structure.ResidualFlexibility is null)
        {
            return null;
        }

        int r = law.Loops.Length;
        var residual = Dense.Zero(r, r);
        for (int i = 0; i < r; i++)
        {
            var loop = law.Loops[i].Loop;
            for (int j = 0; j < r; j++)
            {
                double sum = 0;
                foreach (var s in loop.Sensor.Weights)
                {
                    foreach (var b in law.Loops[j].Loop.Actuator.Weights)
                    {
                        sum += s.Weight * structure.ResidualFlexibility[s.Point, b.Point] * b.Weight;
                    }
                }

                if (sum != 0 && (loop.Ratios.Rate != 0 || loop.Ratios.Acceleration != 0))
                {
                    throw new ArgumentException(
                        $"Loop \"{loop.Name}\" feeds back rate or acceleration through a residual flexibility: the modes left out answer at once, " +
                        "so the force would depend on its own derivative. Add the missing modes, or give the loop a roll-off.",
                        nameof(law));
                }

                residual[i, j] = sum;
            }
        }

        return residual.ForAll(v => v == 0) ? null : residual;
    }

    private Matrix<double>? Feedthrough(double[] gains)
    {
        if (_residual is null)
        {
            return null;
        }

        var identity = Dense.Identity(LoopCount);
        return Dense.TrySolve(identity + (Scaled(gains, p => p.Position) * _residual), identity)
            ?? DenseMatrix.Create(LoopCount, LoopCount, double.NaN);
    }

    private Matrix<double> Scaled(double[] gains, Func<FeedbackRatios, double> ratio)
        => Dense.Diagonal([.. gains.Select((g, k) => g * ratio(_ratios[k]))]);

    private Matrix<double> Coupling(Matrix<double>? feedthrough, double[] gains, Func<FeedbackRatios, double> ratio)
        => feedthrough is null ? Scaled(gains, ratio) : feedthrough * Scaled(gains, ratio);
}
