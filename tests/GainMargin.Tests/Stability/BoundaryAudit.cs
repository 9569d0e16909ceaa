using System.Globalization;
using GainMargin.Tests.Oracles;

namespace GainMargin.Tests.Stability;

/// <summary>One boundary compared with counts of growing roots at gains beside and between its onsets.</summary>
internal sealed class BoundaryAudit
{
    private const int MostOnsets = 3;
    private const int MostMiddles = 3;
    private const int LogarithmicGains = 4;

    private readonly int _seed;
    private readonly GainPath _path;
    private readonly StabilityBoundary _boundary;
    private readonly SortedDictionary<double, DenseCount> _counts = [];
    private readonly List<string> _complaints = [];

    private BoundaryAudit(int seed, string family, GainPath path, StabilityBoundary boundary)
    {
        _seed = seed;
        Family = family;
        _path = path;
        _boundary = boundary;
    }

    public string Family { get; }

    public int OnsetsCompared { get; private set; }

    public int Probes => _counts.Count;

    public int OpenCounts => _counts.Values.Count(c => c.Growing is null);

    public int UndecidedProbes { get; private set; }

    /// <summary>Gains whose count a sampled coverage may miss.</summary>
    public int Missed { get; private set; }

    public bool IsComplete => _boundary.Completeness.Flutter == Coverage.Complete;

    public IReadOnlyList<string> Complaints => _complaints;

    public static BoundaryAudit Of(int seed, string family, GainPath path, Func<GainPath, StabilityBoundary> finder)
    {
        var audit = new BoundaryAudit(seed, family, path, finder(path));
        audit.Run(new Random(seed));
        return audit;
    }

    private void Run(Random random)
    {
        foreach (var onset in _boundary.Onsets.OrderBy(_ => random.Next()).Take(MostOnsets))
        {
            bool isNear = CompareOnset(onset, 1e-7 * Math.Abs(onset.Gain));
            bool isWide = CompareOnset(onset, 1e-4 * Math.Abs(onset.Gain));
            OnsetsCompared += isNear || isWide ? 1 : 0;
        }

        foreach (var interval in _boundary.Intervals.OrderBy(_ => random.Next()).Take(MostMiddles))
        {
            Count(0.5 * (interval.From + interval.To));
        }

        var range = _path.Range;
        double start = Math.Clamp(0, range.From, range.To);
        for (int k = 0; k < LogarithmicGains; k++)
        {
            double share = Math.Pow(10, -2.5 * (k + random.NextDouble()));
            Count(start + (share * ((random.Next(2) == 0 && range.From < start) || range.To == start ? range.From - start : range.To - start)));
        }

        foreach (var (gain, count) in _counts)
        {
            CompareVerdict(gain, count);
        }

        foreach (var (below, above) in _counts.Zip(_counts.Skip(1)))
        {
            CompareNeighbours(below.Key, below.Value, above.Key, above.Value);
        }
    }

    private DenseCount? Count(double gain)
    {
        bool isBeside = _boundary.Onsets.Any(o => Math.Abs(o.Gain - gain) <= 2 * o.GainUncertainty);
        if (isBeside || gain < _path.Range.From || gain > _path.Range.To)
        {
            return null;
        }

        return _counts.TryGetValue(gain, out var known) ? known : _counts[gain] = DenseCount.Of(_path, gain);
    }

    /// <summary>Returns whether the counts on both sides were known.</summary>
    private bool CompareOnset(StabilityOnset onset, double distance)
    {
        double low = onset.Gain - distance;
        double high = onset.Gain + distance;
        if (Count(low) is not { } below || Count(high) is not { } above
            || _boundary.Onsets.Any(o => o != onset && o.Gain > low && o.Gain < high) || HasOpenIntervalBetween(low, high))
        {
            return false;
        }

        bool agrees = Admits(onset.Below, below) && Admits(onset.Above, above);
        if (!agrees && !IsNarrow(low, onset.Below, below) && !IsNarrow(high, onset.Above, above))
        {
            Complain($"{onset}: {below} just below at {low:R}, {above} just above at {high:R}");
        }

        return below.Growing is not null && above.Growing is not null;
    }

    private void CompareVerdict(double gain, DenseCount count)
    {
        var interval = IntervalAt(gain);
        if (interval.Inside == StabilityVerdict.Undecided)
        {
            UndecidedProbes++;
            return;
        }

        bool agrees = interval.Inside == StabilityVerdict.Unstable ? Admits(interval.Count, count) && count.Most > 0 : count.Least == 0;
        if (agrees)
        {
            return;
        }

        if (IsNarrow(gain, interval.Count, count))
        {
            Missed++;
        }
        else
        {
            Complain($"{interval.Inside} with {interval.Count} in the interval from {interval.From:R} to {interval.To:R}: {count} at {gain:R}");
        }
    }

    private void CompareNeighbours(double low, DenseCount below, double high, DenseCount above)
    {
        bool isReported = _boundary.Onsets.Any(o => o.Gain > low && o.Gain < high) || HasOpenIntervalBetween(low, high);
        bool differs = below.Most < above.Least || above.Most < below.Least;

        // Roots that an interval calls undecided may change their side within it.
        var interval = IntervalAt(low);
        bool isDeclared = interval == IntervalAt(high) && Admits(interval.Count, below) && Admits(interval.Count, above);
        if (differs && !isReported && !isDeclared && IsComplete)
        {
            Complain($"no onset between {low:R} with {below} and {high:R} with {above}");
        }
    }

    /// <summary>
    /// Whether the count belongs to an excursion that a sampled coverage may miss: at its widest step to either side, or at
    /// the ends of the interval, the counts are those of the interval.
    /// </summary>
    private bool IsNarrow(double gain, RootCount claimed, DenseCount count)
    {
        if (IsComplete || Admits(claimed, count))
        {
            return false;
        }

        var interval = IntervalAt(gain);
        double step = _boundary.Completeness.WidestStep;
        double inset = 1e-6 * (interval.To - interval.From);
        return Admits(claimed, DenseCount.Of(_path, Math.Max(interval.From + inset, gain - step)))
            && Admits(claimed, DenseCount.Of(_path, Math.Min(interval.To - inset, gain + step)));
    }

    private GainInterval IntervalAt(double gain) => _boundary.Intervals.First(i => gain >= i.From && gain <= i.To);

    private bool HasOpenIntervalBetween(double low, double high)
        => _boundary.Intervals.Any(i => i.Inside == StabilityVerdict.Undecided && i.From < high && i.To > low);

    private static bool Admits(RootCount claimed, DenseCount count)
        => count.Least <= claimed.Growing + claimed.Undecided && claimed.Growing <= count.Most;

    private void Complain(FormattableString what)
        => _complaints.Add(string.Create(CultureInfo.InvariantCulture, $"seed {_seed} ({Family}): {what.ToString(CultureInfo.InvariantCulture)}"));
}
