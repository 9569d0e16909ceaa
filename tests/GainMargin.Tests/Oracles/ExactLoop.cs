namespace GainMargin.Tests.Oracles;

/// <summary>
/// The matrices of a closed loop without any rounding, from the open ones and the gains. Patterns over a modal table must
/// name one point each, so that they are exact in memory.
/// </summary>
internal sealed class ExactLoop
{
    private readonly ElasticStructure _structure;
    private readonly List<(FeedbackRatios Ratios, double Gain, double[] Drive, double[] Sense)> _loops = [];

    public ExactLoop(ClosedLoop closed)
    {
        _structure = closed.Structure;
        foreach (var setting in closed.Law.Loops)
        {
            if (closed.Law.InnerOf(setting.Loop.Name) is not null || setting.DisplayScale != 1 || _structure.ResidualFlexibility is not null)
                throw new NotSupportedException("Loops in cascade, display scales and residual flexibility.");
            var loop = setting.Loop;
            _loops.Add((loop.Ratios, setting.Gain, Pattern(loop.Actuator.Weights), Pattern(loop.Sensor.Weights)));
        }
    }

    public int Order => _structure.Dofs.Count;

    /// <summary>Mass, damping and stiffness in any arithmetic.</summary>
    public (T[,] Mass, T[,] Damping, T[,] Stiffness) Matrices<T>(Func<double, T> of, Func<T, T, T> add, Func<T, T, T> multiply)
    {
        return (
            Closed(_structure.Mass, r => r.Acceleration), Closed(_structure.Damping, r => r.Rate), Closed(_structure.Stiffness, r => r.Position));

        T[,] Closed(NamedMatrix open, Func<FeedbackRatios, double> ratio)
        {
            var matrix = new T[Order, Order];
            for (var i = 0; i < Order; i++)
            {
                for (var j = 0; j < Order; j++)
                    matrix[i, j] = of(open[i, j]);
            }
            foreach (var (ratios, gain, drive, sense) in _loops.Where(l => ratio(l.Ratios) != 0))
            {
                var force = Array.ConvertAll(drive, b => multiply(multiply(of(gain), of(ratio(ratios))), of(b)));
                var seen = Array.ConvertAll(sense, s => of(s));
                for (var i = 0; i < Order; i++)
                {
                    for (var j = 0; j < Order; j++)
                        matrix[i, j] = add(matrix[i, j], multiply(force[i], seen[j]));
                }
            }
            return matrix;
        }
    }

    /// <summary><c>det(s²M + sD + K)</c> over the rationals.</summary>
    public ExactPolynomial Characteristic()
    {
        var (mass, damping, stiffness) = Matrices(Rational.FromDouble, (a, b) => a + b, (a, b) => a * b);
        var pencil = new ExactPolynomial[Order, Order];
        for (var i = 0; i < Order; i++)
        {
            for (var j = 0; j < Order; j++)
                pencil[i, j] = ExactPolynomial.Create(stiffness[i, j], damping[i, j], mass[i, j]);
        }
        return ExactPolynomial.Determinant(pencil);
    }

    private double[] Pattern(IReadOnlyList<PatternWeight> weights)
    {
        if (_structure.Shapes is not null && (weights.Count != 1 || weights[0].Weight != 1))
            throw new NotSupportedException("Patterns of more than one point of a modal table.");
        var pattern = new double[Order];
        foreach (var (point, weight) in weights)
        {
            var row = _structure.Points.IndexOf(point);
            for (var j = 0; j < Order; j++)
                pattern[j] += _structure.Shapes is null ? (row == j ? weight : 0) : _structure.Shapes[row, j];
        }
        return pattern;
    }
}
