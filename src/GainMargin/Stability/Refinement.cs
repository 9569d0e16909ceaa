namespace GainMargin;

/// <summary>Looks between samples for the least of a measure.</summary>
internal static class Refinement
{
    private const double Golden = 0.381966;

    /// <summary>The least sample; where it is inside, a few steps of golden section between its neighbours.</summary>
    public static T Least<T>(IReadOnlyList<T> samples, Func<T, double> place, Func<T, double> measure, Func<double, T?> at, int steps)
    {
        int least = 0;
        for (int i = 1; i < samples.Count; i++)
        {
            least = measure(samples[i]) < measure(samples[least]) ? i : least;
        }

        var best = samples[least];
        if (least == 0 || least == samples.Count - 1)
        {
            return best;
        }

        double left = place(samples[least - 1]);
        double right = place(samples[least + 1]);
        for (int step = 0; step < steps; step++)
        {
            double here = place(best);
            bool wideLeft = here - left > right - here;
            double next = here + (Golden * (wideLeft ? left - here : right - here));
            if (at(next) is { } trial && measure(trial) < measure(best))
            {
                (left, right) = wideLeft ? (left, here) : (here, right);
                best = trial;
            }
            else
            {
                (left, right) = wideLeft ? (next, right) : (left, next);
            }
        }

        return best;
    }
}
