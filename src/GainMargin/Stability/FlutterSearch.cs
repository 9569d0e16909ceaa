namespace GainMargin;

/// <summary>Adaptive search of pieces of the range in which no root passes through zero or infinity: steps are split until settled.</summary>
internal sealed class FlutterSearch
{
    private const double SharpTouch = 1e-4;

    private readonly SweepModel _sweep;
    private readonly SweepOptions _options;
    private readonly Action<double> _settled;
    private StepAssessment _assessment;

    public FlutterSearch(SweepModel sweep, SweepOptions options, Action<double> settled)
    {
        _sweep = sweep;
        _options = options;
        _settled = settled;
        _assessment = new StepAssessment(sweep, sweep.Path.Range.From, sweep.Path.Range.To);
    }

    public List<FlutterCrossing> Crossings { get; } = [];

    /// <summary>Stretches that the narrowest step or the budget left open.</summary>
    public List<GainStretch> Open { get; } = [];

    /// <summary>Stretches along which a pair lies on the axis within rounding.</summary>
    public List<GainStretch> OnAxis { get; } = [];

    public List<SweepStep> Steps { get; } = [];

    private bool BudgetSpent { get; set; }

    /// <summary>Searches one piece and returns the samples at its ends.</summary>
    public (SweepSample First, SweepSample Last) Run(double from, double to)
    {
        _assessment = new StepAssessment(_sweep, from, to);
        var first = _sweep.SampleAt(from);
        var left = first;
        double[] grid = SweepGrid.Between(from, to, _sweep.Path.Range.Width, _options, _sweep.Path.ReleaseValue);
        for (int i = 1; i < grid.Length; i++)
        {
            BudgetSpent |= _sweep.Decompositions >= _options.MaximumDecompositions;
            if (BudgetSpent)
            {
                Open.Add(new GainStretch(left.Gain, to));
                return (first, _sweep.SampleAt(to));
            }

            bool last = i == grid.Length - 1;
            var right = last ? _sweep.SampleAt(to) : GridSample(grid[i], SweepGrid.Aside * (grid[i] - grid[i - 1]));
            Resolve(left, right);
            left = right;
            _settled(left.Gain);
        }

        return (first, left);
    }

    /// <summary>
    /// Crosses the narrow gap around a divergence or a loss through infinity: pairs that change sides inside it flutter at
    /// the very gain at which another root diverges.
    /// </summary>
    public void Bridge(SweepSample below, SweepSample above)
    {
        int[] match = BranchMatch.Between(below, above);
        double middle = 0.5 * (below.Gain + above.Gain);
        for (int i = 0; i < match.Length; i++)
        {
            var a = below.Values[i];
            var b = above.Values[match[i]];
            if (a.Imaginary <= 0 || b.Imaginary <= 0 || a.Real * b.Real >= 0 || below.IsOnAxis(i) || above.IsOnAxis(match[i]))
            {
                continue;
            }

            var crossing = FlutterPolish.Run(
                _sweep, middle, 0.5 * (a.Imaginary + b.Imaginary),
                _sweep.Model.HatToEven(below.Roots.Solution.Right[i]), _sweep.Model.HatToEven(below.Roots.Solution.Left[i]), below.Gain, above.Gain);
            if (crossing is null)
            {
                Open.Add(new GainStretch(below.Gain, above.Gain));
            }
            else
            {
                Crossings.Add(crossing);
            }
        }
    }

    private void Resolve(SweepSample first, SweepSample last)
    {
        var pending = new Stack<(SweepSample Left, SweepSample Right)>();
        pending.Push((first, last));
        while (pending.Count > 0)
        {
            var (left, right) = pending.Pop();
            int[] match = BranchMatch.Between(left, right);
            var found = new List<FlutterCrossing>();
            double? split = _assessment.Split(left, right, match, found);
            if (split is null)
            {
                Crossings.AddRange(found);
                Steps.Add(new SweepStep(left, right, match));
                if (_assessment.LiesOnAxis)
                {
                    OnAxis.Add(new GainStretch(left.Gain, right.Gain));
                }

                continue;
            }

            double width = right.Gain - left.Gain;
            BudgetSpent |= _sweep.Decompositions >= _options.MaximumDecompositions;
            double at = left.Gain + (split.Value * width);
            if (BudgetSpent || width <= _options.MinimumStep * _sweep.Path.Range.Width || at <= left.Gain || at >= right.Gain)
            {
                Open.Add(new GainStretch(left.Gain, right.Gain));
                Steps.Add(new SweepStep(left, right, match));
                continue;
            }

            var middle = split == 0.5 ? SampleOffAxis(at, 0.1 * width) : AtExtremum(left, right, at);
            pending.Push((middle, right));
            pending.Push((left, middle));
        }
    }

    /// <summary>A first sample, moved aside where that takes a pair off the axis: it may have met the very gain at which one touches.</summary>
    private SweepSample GridSample(double at, double aside)
    {
        var sample = _sweep.SampleAt(at);
        int onAxis = PairsOnAxis(sample);
        if (onAxis == 0)
        {
            return sample;
        }

        var moved = _sweep.SampleAt(at + (0.618 * aside));
        return PairsOnAxis(moved) < onAxis ? moved : sample;
    }

    private static int PairsOnAxis(SweepSample sample)
        => Enumerable.Range(0, sample.Values.Length).Count(i => sample.Values[i].Imaginary > 0 && sample.IsOnAxis(i));

    /// <summary>A sample at which no pair lies on the axis within rounding by accident: moved aside where one does.</summary>
    private SweepSample SampleOffAxis(double at, double aside)
    {
        var sample = _sweep.SampleAt(at);
        if (!CrossesAt(sample, aside))
        {
            return sample;
        }

        var moved = _sweep.SampleAt(at + (0.618 * aside));
        return CrossesAt(moved, aside) ? sample : moved;
    }

    /// <summary>
    /// A sample at a predicted extremum. A pair found on the axis there, with both ends of the step on one side, touches it
    /// and turns back; any other pair on the axis is an accident, and the sample is moved aside.
    /// </summary>
    private SweepSample AtExtremum(SweepSample left, SweepSample right, double at)
    {
        var sample = _sweep.SampleAt(at);
        double width = right.Gain - left.Gain;
        int[] fromLeft = BranchMatch.Between(left, sample);
        int[] toRight = BranchMatch.Between(sample, right);
        var touches = new List<FlutterCrossing>();
        for (int k = 0; k < sample.Values.Length; k++)
        {
            int before = Array.IndexOf(fromLeft, k);
            int after = toRight[k];
            if (sample.Values[k].Imaginary <= 0 || !sample.IsOnAxis(k) || (left.IsOnAxis(before) && right.IsOnAxis(after)))
            {
                continue;
            }

            double turn = Math.Min(Math.Abs(left.Values[before].Real), Math.Abs(right.Values[after].Real));
            bool turns = left.Values[before].Real * right.Values[after].Real > 0 && !left.IsOnAxis(before) && !right.IsOnAxis(after);
            if (!turns || Math.Abs(sample.Slopes[k].Real) * width > StepAssessment.SmallDeparture * turn || sample.Uncertainty[k] > SharpTouch * turn)
            {
                return SampleOffAxis(at, 0.1 * width);
            }

            touches.Add(Touch(sample, k, turn / width / width));
        }

        Crossings.AddRange(touches);
        if (touches.Count > 0)
        {
            _assessment.Touches(sample);
        }

        return sample;
    }

    private FlutterCrossing Touch(SweepSample sample, int k, double curvature)
        => new(
            sample.Gain, Math.Sqrt(sample.Uncertainty[k] / curvature), sample.Values[k].Imaginary, sample.Slopes[k],
            _sweep.Model.HatToEven(sample.Roots.Solution.Right[k]), _sweep.Model.HatToEven(sample.Roots.Solution.Left[k]), true);

    private static bool CrossesAt(SweepSample sample, double width)
        => Enumerable.Range(0, sample.Values.Length).Any(i => sample.Values[i].Imaginary > 0 && sample.IsOnAxis(i) && !sample.IsFlat(i, width));
}
