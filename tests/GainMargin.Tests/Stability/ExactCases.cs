using GainMargin.Tests.Oracles;

namespace GainMargin.Tests.Stability;

/// <summary>Seeded random structures with one screened loop, small enough for the exact oracle.</summary>
internal sealed record ExactCase(int Order, double[] Mass, double[] Damping, double[] Stiffness, double[] Drive, double[] Sense, FeedbackRatios Ratios, GainRange Range)
{
    public static ExactCase Random(int seed)
    {
        var random = new Random(seed);
        int n = 1 + random.Next(3);
        double Number(double size) => Math.Round((random.NextDouble() - 0.5) * 2 * size * 1024) / 1024;
        double[] mass = Definite(n, random, 1, 0.5);
        double[] damping = random.Next(4) == 0 ? Scaled(Definite(n, random, 1, 0.1), 1.0 / 64) : Definite(n, random, 0.25, 0.02);
        double[] stiffness = Definite(n, random, 4, random.Next(3) == 0 ? 0 : 1);
        if (random.Next(3) == 0)
        {
            for (int i = 0; i < n; i++)
            {
                for (int j = 0; j < n; j++)
                {
                    stiffness[(i * n) + j] += i == j ? 0 : Number(1);
                    damping[(i * n) + j] += i == j ? 0 : Number(0.25);
                }
            }
        }

        double[] drive = Pattern(n, random);
        double[] sense = random.Next(4) == 0 ? drive : Pattern(n, random);
        var ratios = random.Next(5) switch
        {
            0 => new FeedbackRatios { Position = 1 },
            1 => new FeedbackRatios { Rate = 1 },
            2 => new FeedbackRatios { Position = 1, Rate = Number(1) },
            3 => new FeedbackRatios { Position = Number(1), Rate = 0.5, Acceleration = 0.25 },
            _ => new FeedbackRatios { Acceleration = 1, Rate = Number(0.5) },
        };
        double reach = Math.ScaleB(1, random.Next(-2, 7));
        return new ExactCase(n, mass, damping, stiffness, drive, sense, ratios, GainRange.Between(-reach * 0.9375, reach));
    }

    /// <summary>The cases of the first seeds that exact arithmetic can screen: those with some damping.</summary>
    public static IEnumerable<(int Seed, ExactCase Test, ExactScreening Exact, IReadOnlyList<ExactOnset> Expected)> Solvable(int seeds)
    {
        for (int seed = 1; seed <= seeds; seed++)
        {
            var test = Random(seed);
            var exact = test.Exact();
            IReadOnlyList<ExactOnset>? expected = null;
            try
            {
                expected = exact.Onsets(test.Range.From, test.Range.To);
            }
            catch (NotSupportedException)
            {
                // Roots symmetric about the origin at every gain.
            }

            if (expected is not null)
            {
                yield return (seed, test, exact, expected);
            }
        }
    }

    /// <summary>
    /// Diagonal structures of the kinds that random matrices never are: equal modes, damped and undamped ones side by side,
    /// free and drifting bodies, critical and strong overdamping, negative stiffness; sensors and actuators that miss some.
    /// </summary>
    public static ExactCase Special(int seed)
    {
        var random = new Random(seed);
        int n = 1 + random.Next(3);
        double Pick(params double[] values) => values[random.Next(values.Length)];
        double[] mass = new double[n];
        double[] damping = new double[n];
        double[] stiffness = new double[n];
        for (int i = 0; i < n; i++)
        {
            bool twin = i > 0 && random.Next(2) == 0;
            mass[i] = Pick(1, 1, 1, 2, 0.75);
            stiffness[i] = twin ? stiffness[i - 1] : Pick(0, 0.25, 1, 2.75, 1e-6, 1e6, -0.375);
            damping[i] = twin && random.Next(2) == 0 ? damping[i - 1]
                : Pick(0, 0.375, Math.ScaleB(1, -26), Math.ScaleB(1, -45), 64, 1 << 20, 2 * Math.Sqrt(Math.Abs(stiffness[i])), -0.0625);
        }

        double Weight() => Pick(0, 1, 1, -1, 2, Math.ScaleB(1, -30));
        double[] Weights()
        {
            double[] p = [.. Enumerable.Range(0, n).Select(_ => Weight())];
            return p.All(x => x == 0) ? [1, .. p.Skip(1)] : p;
        }

        double[] drive = Weights();
        double[] sense = random.Next(4) == 0 ? drive : Weights();
        var ratios = random.Next(5) switch
        {
            0 => new FeedbackRatios { Position = 1 },
            1 => new FeedbackRatios { Rate = 1 },
            2 => new FeedbackRatios { Position = 1, Rate = Pick(0.5, -0.015625) },
            3 => new FeedbackRatios { Acceleration = 1 },
            _ => new FeedbackRatios { Position = 1, Rate = Pick(0, 0.25), Acceleration = Pick(0.8125, -0.25) },
        };
        double reach = Math.ScaleB(1, random.Next(-6, 8));
        var (from, to) = random.Next(4) switch
        {
            0 => (0, reach),
            1 => (-reach, 0),
            2 => (0.25 * reach, reach),
            _ => (-0.9375 * reach, reach),
        };
        return new ExactCase(n, Diagonal(mass), Diagonal(damping), Diagonal(stiffness), drive, sense, ratios, GainRange.Between(from, to));
    }

    private static double[] Diagonal(double[] d) => [.. Enumerable.Range(0, d.Length * d.Length).Select(k => k / d.Length == k % d.Length ? d[k / d.Length] : 0)];

    public ExactScreening Exact() => new(
        Order, Mass, Outer(Ratios.Acceleration), Damping, Outer(Ratios.Rate), Stiffness, Outer(Ratios.Position));

    public GainPath Path()
    {
        var names = DofNames.Of([.. Enumerable.Range(0, Order).Select(i => $"q{i}")]);
        var loop = FeedbackLoop.Create(
            "g", Sensor.Weighted([.. Sense.Select((s, i) => new PatternWeight(names[i], s))]),
            Actuator.Weighted([.. Drive.Select((b, i) => new PatternWeight(names[i], b))]), Ratios);
        var structure = ElasticStructure.FromRowMajor(names, Mass, Damping, Stiffness);
        return GainPath.OneLoop(ClosedLoop.Create(structure, ControlLaw.Of(new LoopSetting(loop, 0.125))), "g", Range);
    }

    private double[] Outer(double ratio) => [.. Drive.SelectMany(b => Sense.Select(s => ratio * b * s))];

    private static double[] Definite(int n, Random random, double size, double floor)
    {
        double[] root = [.. Enumerable.Range(0, n * n).Select(_ => Math.Round((random.NextDouble() - 0.5) * 32) / 16)];
        double[] a = new double[n * n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                for (int k = 0; k < n; k++)
                {
                    a[(i * n) + j] += size * root[(i * n) + k] * root[(j * n) + k];
                }
            }

            a[(i * n) + i] += Math.Round(floor * 64) / 64;
        }

        return a;
    }

    private static double[] Scaled(double[] a, double factor) => Array.ConvertAll(a, x => x * factor);

    private static double[] Pattern(int n, Random random)
    {
        double[] p = new double[n];
        while (p.All(x => x == 0))
        {
            p = [.. Enumerable.Range(0, n).Select(_ => (double)(random.Next(3) - 1))];
        }

        return p;
    }
}
