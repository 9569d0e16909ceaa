namespace GainMargin.Numerics;

/// <summary>Cubic through two values and two slopes on <c>[0, h]</c>.</summary>
internal readonly record struct CubicHermite(double From, double SlopeFrom, double To, double SlopeTo, double Width)
{
    /// <summary>
    /// Departure of the data from a parabola, <c>|Δ − h·(s₀+s₁)/2|</c>: zero for every quadratic, so an error estimate
    /// of the cubic that needs no further sample.
    /// </summary>
    public double Departure => Math.Abs(To - From - (Width * (SlopeFrom + SlopeTo) / 2));

    public double At(double t)
    {
        double u = 1 - t;
        return (From * u * u * (1 + (2 * t))) + (To * t * t * (3 - (2 * t))) + (Width * t * u * ((SlopeFrom * u) - (SlopeTo * t)));
    }

    /// <summary>Smallest and largest value on the interval.</summary>
    public (double Least, double Greatest) Range()
    {
        double least = Math.Min(From, To);
        double greatest = Math.Max(From, To);
        foreach (double t in Extrema())
        {
            double value = At(t);
            least = Math.Min(least, value);
            greatest = Math.Max(greatest, value);
        }

        return (least, greatest);
    }

    /// <summary>Interior extrema as fractions of the width.</summary>
    public IEnumerable<double> Extrema()
    {
        double d0 = Width * SlopeFrom;
        double d1 = Width * SlopeTo;
        double rise = To - From;
        double a = 3 * (d0 + d1 - (2 * rise));
        double b = 2 * ((3 * rise) - (2 * d0) - d1);
        double c = d0;
        if (a == 0)
        {
            double t = -c / b;
            if (t is > 0 and < 1)
            {
                yield return t;
            }

            yield break;
        }

        double discriminant = (b * b) - (4 * a * c);
        if (!(discriminant > 0))
        {
            yield break;
        }

        double q = -0.5 * (b + (b >= 0 ? Math.Sqrt(discriminant) : -Math.Sqrt(discriminant)));
        foreach (double t in new[] { q / a, c / q })
        {
            if (t is > 0 and < 1)
            {
                yield return t;
            }
        }
    }
}
