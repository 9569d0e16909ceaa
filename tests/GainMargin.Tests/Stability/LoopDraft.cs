using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;
using Complex = System.Numerics.Complex;

namespace GainMargin.Tests.Stability;

/// <summary>A structure with one or two loops in the making: modes first, then matrices, then the path.</summary>
internal sealed class LoopDraft
{
    private const int FewBits = 10;

    /// <summary>Less than this share of its terms is a sum that cancels.</summary>
    private const double LeastShare = 1e-6;

    private readonly Random _random;
    private readonly int _n;
    private readonly double[] _squares;
    private readonly double[] _damping;
    private double[] _drive;
    private double[] _sense;
    private Matrix<double> _mass;
    private Matrix<double> _resistance;
    private Matrix<double> _stiffness;
    private bool _isDampedByRatios = true;
    private LoopSetting? _held;

    public LoopDraft(Random random, int n, bool fromModes)
    {
        _random = random;
        _n = n;
        FromModes = fromModes;
        _squares = new double[n];
        _damping = new double[n];
        _drive = Pattern();
        _sense = random.Next(4) == 0 ? [.. _drive] : Pattern();
        _mass = DenseMatrix.CreateIdentity(n);
        _resistance = new DenseMatrix(n, n);
        _stiffness = new DenseMatrix(n, n);
    }

    public bool FromModes { get; }

    public void SetFrequencies(double lowest, double span, bool ascending)
    {
        for (int k = 0; k < _n; k++)
        {
            _squares[k] = Math.Pow(lowest * Math.Pow(span, _random.NextDouble()), 2);
        }

        if (ascending || _random.Next(2) == 0)
        {
            Array.Sort(_squares);
        }
    }

    /// <summary>Makes the second frequency, and some others, follow the one before at a relative distance.</summary>
    public void Bunch(double distance)
    {
        for (int k = 1; k < _n; k++)
        {
            if (k == 1 || _random.Next(3) == 0)
            {
                _squares[k] = _squares[k - 1] * Math.Pow(1 + distance, 2);
            }
        }
    }

    public void SetDamping(Func<double> ratio)
    {
        for (int k = 0; k < _n; k++)
        {
            _damping[k] = 2 * ratio() * Math.Sqrt(_squares[k]);
        }
    }

    public void SetOneDamping(double ratio)
    {
        int k = _random.Next(_n);
        _damping[k] = 2 * ratio * Math.Sqrt(_squares[k]);
    }

    public void MakeRigid(bool drifting)
    {
        int count = 1 + (_n > 3 ? _random.Next(2) : 0);
        for (int k = 0; k < count; k++)
        {
            _damping[k] = drifting ? 0.1 * Math.Sqrt(_squares[k]) : 0;
            _squares[k] = 0;
            _isDampedByRatios &= !drifting;
        }
    }

    public void MakeFaint()
    {
        for (int k = 0; k < _n; k++)
        {
            if (k == 0 || _random.Next(3) == 0)
            {
                _drive[k] = Math.ScaleB(_drive[k], -23);
                _sense[k] = Math.ScaleB(_sense[k], -23);
            }
        }
    }

    public void Hide()
    {
        for (int k = 0; k < _n - 1; k++)
        {
            if (k == 0 || _random.Next(3) == 0)
            {
                int which = _random.Next(3);
                _drive[k] = which == 0 ? _drive[k] : 0;
                _sense[k] = which == 1 ? _sense[k] : 0;
                _damping[k] = 0;
            }
        }
    }

    public void TurnStiffness() => _squares[_random.Next(_n)] *= -1;

    /// <summary>Takes the modes to physical coordinates.</summary>
    /// <param name="exact">Whether all products are exact in memory.</param>
    /// <param name="graded">Whether coordinates stay with their modes, so that the stiffest do not drown the softest.</param>
    public void MakeMatrices(bool exact, bool graded)
    {
        if (FromModes)
        {
            _resistance = DenseMatrix.OfDiagonalArray(_damping);
            _stiffness = DenseMatrix.OfDiagonalArray(_squares);
            return;
        }

        double[] squares = exact ? Array.ConvertAll(_squares, Rounded) : _squares;
        double[] damping = exact ? Array.ConvertAll(_damping, Rounded) : _damping;
        int layout = _random.Next(exact || graded ? 2 : 3);
        var shape = layout == 0 ? DenseMatrix.CreateIdentity(_n)
            : layout == 1 ? DenseMatrix.Create(_n, _n, (i, j) => i == j ? 1 : j == i + 1 ? 0.5 * (_random.Next(3) - 1) : 0)
            : (Matrix<double>)DenseMatrix.Create(_n, _n, (_, _) => _random.NextDouble() - 0.5).QR().Q;
        if (layout < 2 && _random.Next(3) == 0)
        {
            shape *= DenseMatrix.OfDiagonalArray([.. Enumerable.Range(0, _n).Select(_ => Math.ScaleB(1, _random.Next(-12, 13)))]);
        }

        _mass = layout == 2 ? _mass : shape.TransposeThisAndMultiply(shape);
        _resistance = Congruent(shape, damping);
        _stiffness = Congruent(shape, squares);
        _drive = shape.TransposeThisAndMultiply(Vector<double>.Build.Dense(_drive)).ToArray();
        _sense = shape.TransposeThisAndMultiply(Vector<double>.Build.Dense(_sense)).ToArray();
    }

    /// <summary>Masses in a row, with springs and dampers between them; the loop acts between two of them.</summary>
    public void MakeChain(double level, bool grounded, bool againstGround)
    {
        bool equal = _random.Next(3) == 0;
        double size = Math.ScaleB(1, _random.Next(-4, 20));
        double[] spring = [.. Enumerable.Range(0, _n + 1).Select(_ => equal ? size : size * Rounded(0.5 + _random.NextDouble()))];
        spring[0] = grounded ? spring[0] : 0;
        spring[_n] = 0;
        _mass = DenseMatrix.CreateDiagonal(_n, _n, _ => equal ? 1 : Rounded(0.5 + _random.NextDouble()));
        _stiffness = DenseMatrix.Create(
            _n, _n, (i, j) => i == j ? spring[i] + spring[i + 1] : Math.Abs(i - j) == 1 ? -spring[Math.Max(i, j)] : 0);
        double rate = Math.Sqrt(size);
        _resistance = level == 0 ? _resistance
            : (_stiffness * PowerOfTwo(level / rate)) + (againstGround ? _mass * PowerOfTwo(level * rate) : _resistance);
        int drive = _random.Next(_n);
        int sense = _random.Next(4) == 0 ? drive : _random.Next(_n);
        _drive = [.. Enumerable.Range(0, _n).Select(i => i == drive ? 1.0 : 0)];
        _sense = [.. Enumerable.Range(0, _n).Select(i => i == sense ? 1.0 : 0)];
    }

    public void AddGyroscopic(double level)
    {
        _isDampedByRatios = false;
        _resistance += Skew((i, j) => level * Math.Sqrt(RateOf(i) * RateOf(j) * _mass[i, i] * _mass[j, j]));
    }

    public void AddCirculatory(double level)
        => _stiffness += Skew((i, j) => level * Math.Sqrt(Math.Abs(_stiffness[i, i] * _stiffness[j, j])));

    public void AddDampers(double level)
    {
        _isDampedByRatios = false;
        for (int k = 0; k < 1 + (_n / 3); k++)
        {
            int from = _random.Next(_n);
            int to = _random.Next(_n);
            var stretch = Vector<double>.Build.Dense(
                _n, i => (i == from ? Math.Sqrt(_mass[i, i]) : 0) - (i == to && to != from ? 0.7 * Math.Sqrt(_mass[i, i]) : 0));
            _resistance += 2 * level * RateOf(from) * stretch.OuterProduct(stretch);
        }
    }

    /// <summary>Adds a loop whose gain stays, in units of a gain at which something happens.</summary>
    public void Hold(bool collocated, FeedbackRatios ratios, double gain, bool atRest)
    {
        double[] sense = collocated ? _drive : _sense;
        double unit = TypicalGain(sense, ratios, atRest ? 0 : TypicalRate());
        _held = new LoopSetting(
            FeedbackLoop.Create("held", Sensor.Weighted(Weights(sense, collocated)), Actuator.Weighted(Weights(_drive, true)), ratios),
            gain * Math.Abs(unit));
    }

    /// <summary>One of the frequencies, roughly.</summary>
    public double TypicalRate()
    {
        double rate = RateOf(_random.Next(_n));
        return rate > 0 ? rate : Math.Max(1e-3, Enumerable.Range(0, _n).Max(RateOf));
    }

    public GainPath Path(FeedbackRatios ratios, (double From, double To) range)
    {
        double near = _random.Next(2) == 0 ? 0.05 * (_random.NextDouble() - 0.5) : Math.Pow(10, -1 - (9 * _random.NextDouble()));
        bool atRest = ratios.Position != 0 && _random.Next(4) == 0;
        double unit = TypicalGain(_sense, ratios, atRest ? 0 : TypicalRate() * (1 + near));
        unit = _random.Next(8) == 0 ? Math.Abs(unit) : unit;
        range = unit < 0 ? (range.To * unit, range.From * unit) : (range.From * unit, range.To * unit);
        var loop = FeedbackLoop.Create("g", Sensor.Weighted(Weights(_sense, false)), Actuator.Weighted(Weights(_drive, true)), ratios);
        var law = ControlLaw.Of(new LoopSetting(loop, 0.25 * (range.From + range.To)));
        law = _held is { } held ? law.With(held) : law;
        return GainPath.OneLoop(ClosedLoop.Create(Structure(), law), "g", GainRange.Between(range.From, range.To));
    }

    private static double Rounded(double value)
    {
        int exponent = value == 0 ? 0 : Math.ILogB(value) - FewBits;
        return Math.ScaleB(Math.Round(Math.ScaleB(value, -exponent)), exponent);
    }

    private static double PowerOfTwo(double value) => Math.ScaleB(1, Math.ILogB(value));

    private static Matrix<double> Congruent(Matrix<double> shape, double[] values)
    {
        var product = shape.TransposeThisAndMultiply(DenseMatrix.OfDiagonalArray(values) * shape);
        return 0.5 * (product + product.Transpose());
    }

    private double RateOf(int k) => Math.Sqrt(Math.Abs(_stiffness[k, k] / _mass[k, k]));

    private double[] Pattern()
    {
        double scale = Math.ScaleB(1, _random.Next(-6, 7));
        return [.. Enumerable.Range(0, _n).Select(_ => scale * Rounded(0.1 + _random.NextDouble()) * (_random.Next(2) == 0 ? 1 : -1))];
    }

    private DenseMatrix Skew(Func<int, int, double> size)
    {
        var skew = new DenseMatrix(_n, _n);
        for (int i = 0; i < _n; i++)
        {
            for (int j = 0; j < i; j++)
            {
                skew[i, j] = size(i, j) * ((2 * _random.NextDouble()) - 1);
                skew[j, i] = -skew[i, j];
            }
        }

        return skew;
    }

    /// <summary>The gain that brings a harmonic motion at this frequency to the verge, but for a phase of less than a quarter turn.</summary>
    private double TypicalGain(double[] sense, FeedbackRatios ratios, double rate)
    {
        var dynamic = _stiffness - (rate * rate * _mass);
        var lag = rate * _resistance;
        var system = dynamic.Append(-lag).Stack(lag.Append(dynamic));
        var answer = system.Solve(Vector<double>.Build.DenseOfEnumerable(_drive.Concat(new double[_n])));
        var seen = new Complex(
            sense.Select((s, i) => s * answer[i]).Sum(), sense.Select((s, i) => s * answer[_n + i]).Sum());
        double most = sense.Select((s, i) => Math.Abs(s) * (Math.Abs(answer[i]) + Math.Abs(answer[_n + i]))).Sum();
        seen = Complex.Abs(seen) < LeastShare * most ? most : seen;
        var open = seen * new Complex(ratios.Position - (rate * rate * ratios.Acceleration), rate * ratios.Rate);
        double gain = (open.Real > 0 ? -1 : 1) / Complex.Abs(open);
        return double.IsFinite(gain) && Math.Abs(gain) < 1e30 ? gain : 1;
    }

    private PatternWeight[] Weights(double[] pattern, bool isDrive) => FromModes
        ? [new PatternWeight(isDrive ? "drive" : "sense", 1)]
        : [.. pattern.Select((w, i) => new PatternWeight($"q{i}", w)).Where(w => w.Weight != 0)];

    private ElasticStructure Structure() => FromModes
        ? ElasticStructure.FromModes(new ModalTable
        {
            Points = DofNames.Of("drive", "sense"),
            Frequencies = [.. _squares.Select(s => Frequency.FromRadians(Math.Sqrt(s)))],
            DampingRatios = _isDampedByRatios ? [.. _squares.Select((s, k) => s == 0 ? 0 : _damping[k] / (2 * Math.Sqrt(s)))] : [],
            DampingMatrix = _isDampedByRatios ? null : _resistance,
            Shapes = DenseMatrix.OfRowArrays(_drive, _sense),
        })
        : ElasticStructure.FromMatrices(new StructureMatrices
        {
            Dofs = DofNames.Of([.. Enumerable.Range(0, _n).Select(i => $"q{i}")]),
            Mass = _mass,
            Damping = _resistance,
            Stiffness = _stiffness,
        });
}
