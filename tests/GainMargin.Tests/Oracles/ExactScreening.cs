namespace GainMargin.Tests.Oracles;

/// <summary>
/// Exact stability of (M0 + g M1) q'' + (D0 + g D1) q' + (K0 + g K1) q = 0 in the gain g. The characteristic polynomial is formed
/// exactly; a root can cross the imaginary axis only where its constant coefficient, its leading coefficient or the Hurwitz
/// determinant of order degree - 1 vanishes (Orlando's formula: Gantmacher, The Theory of Matrices, vol. 2, ch. XV, sec. 7,
/// from memory).
/// </summary>
internal sealed class ExactScreening
{
    private const int BracketBits = 64;

    private readonly ExactPolynomial[] _coefficients;

    /// <summary>Takes n x n matrices in row-major order.</summary>
    /// <exception cref="NotSupportedException">The determinant is zero for every root and gain.</exception>
    public ExactScreening(int n, double[] m0, double[] m1, double[] d0, double[] d1, double[] k0, double[] k1)
    {
        foreach (var matrix in (double[][])[m0, m1, d0, d1, k0, k1])
            ArgumentOutOfRangeException.ThrowIfNotEqual(matrix.Length, n * n, nameof(n));

        // Kronecker's substitution g = s^stride turns the determinant into one of univariate polynomials in s.
        var stride = 2 * n + 1;
        var pencil = new ExactPolynomial[n, n];
        for (var i = 0; i < n * n; i++)
        {
            var entry = new double[stride + 3];
            (entry[0], entry[1], entry[2]) = (k0[i], d0[i], m0[i]);
            (entry[stride], entry[stride + 1], entry[stride + 2]) = (k1[i], d1[i], m1[i]);
            pencil[i / n, i % n] = ExactPolynomial.FromDoubles(entry);
        }
        var determinant = ExactPolynomial.Determinant(pencil).PrimitivePart();
        if (determinant.IsZero)
            throw new NotSupportedException("The pencil is singular for every gain.");

        var powers = Enumerable.Range(0, stride).Select(k => InGain(determinant, k, stride)).ToArray();
        PermanentZeros = Array.FindIndex(powers, c => !c.IsZero);
        _coefficients = powers[PermanentZeros..(Array.FindLastIndex(powers, c => !c.IsZero) + 1)];
    }

    /// <summary>Number of roots s = 0 that are there at every gain.</summary>
    public int PermanentZeros { get; }

    /// <summary>Degree in s for almost every gain, without the permanent zeros.</summary>
    public int Degree => _coefficients.Length - 1;

    /// <summary>
    /// Coefficients, in ascending powers of s, of a positive multiple of the characteristic polynomial divided by s^PermanentZeros;
    /// each is a polynomial in the gain.
    /// </summary>
    public IReadOnlyList<ExactPolynomial> Coefficients => _coefficients;

    /// <summary>The polynomial in s of <see cref="Coefficients"/> at one gain.</summary>
    public ExactPolynomial At(Rational gain) => ExactPolynomial.Create(Array.ConvertAll(_coefficients, c => c.Evaluate(gain)));

    /// <summary>Number of roots with a positive real part, counted with multiplicity.</summary>
    public int UnstableCount(Rational gain) => HalfPlaneCount.Of(At(gain)).Unstable;

    /// <summary>Number of roots on the imaginary axis, counted with multiplicity and without the permanent zeros.</summary>
    public int AxisCount(Rational gain) => HalfPlaneCount.Of(At(gain)).Axis;

    /// <summary>All gains in the open interval at which a root is on the imaginary axis or at infinity, in ascending order.</summary>
    /// <exception cref="NotSupportedException">
    /// Roots symmetric about the origin at every gain (a lossless system), or a gain at which every number is a root.
    /// </exception>
    public IReadOnlyList<ExactOnset> Onsets(double from, double to)
    {
        var (start, end) = (Rational.FromDouble(from), Rational.FromDouble(to));
        var hurwitz = HurwitzDeterminant();
        if (hurwitz.IsZero)
            throw new NotSupportedException("Some roots are symmetric about the origin at every gain.");
        var candidates = Candidates([_coefficients[0], _coefficients[^1], hurwitz], start, end);
        var samples = new Rational[candidates.Count + 1];
        for (var i = 0; i < samples.Length; i++)
            samples[i] = Rational.Midpoint(i > 0 ? candidates[i - 1].High : start, i < candidates.Count ? candidates[i].Low : end);
        var unstable = Array.ConvertAll(samples, UnstableCount);

        List<ExactOnset> onsets = [];
        for (var i = 0; i < candidates.Count; i++)
        {
            var gain = candidates[i];
            var (kind, frequencies) = Classify(gain, hurwitz);
            if (kind != ExactOnsetKind.None)
                onsets.Add(new(gain.ToDouble(), gain.Low, gain.High, kind, frequencies, unstable[i], unstable[i + 1]));
        }
        return onsets;
    }

    /// <summary>Distinct roots of the polynomials, in ascending order, in brackets apart from each other and from the ends.</summary>
    private static List<ExactRoot> Candidates(ExactPolynomial[] polynomials, Rational start, Rational end)
    {
        List<ExactPolynomial> factors = [];
        foreach (var polynomial in polynomials)
        {
            var squareFree = polynomial.PrimitivePart().SquareFreePart();
            foreach (var factor in factors)
                squareFree = squareFree.ExactDivide(ExactPolynomial.Gcd(squareFree, factor));
            factors.Add(squareFree);
        }

        var roots = factors.SelectMany(f => f.Roots(start, end)).Select(r => r.Refine(BracketBits)).ToList();
        foreach (var root in roots)
        {
            while (root.Low <= start || root.High >= end)
                root.RefineFurther();
            foreach (var other in roots.TakeWhile(r => r != root))
            {
                while (root.Low <= other.High && other.Low <= root.High)
                {
                    root.RefineFurther();
                    other.RefineFurther();
                }
            }
        }
        roots.Sort((a, b) => a.Low.CompareTo(b.Low));
        return roots;
    }

    private (ExactOnsetKind Kind, IReadOnlyList<double> Frequencies) Classify(ExactRoot gain, ExactPolynomial hurwitz)
    {
        if (_coefficients.All(c => gain.SignOf(c) == 0))
            throw new NotSupportedException("The pencil is singular at one gain.");
        var frequencies = gain.SignOf(hurwitz) == 0 ? AxisFrequencies(gain) : [];
        var kind = (gain.SignOf(_coefficients[0]) == 0 ? ExactOnsetKind.Divergence : ExactOnsetKind.None)
            | (frequencies.Length > 0 ? ExactOnsetKind.Flutter : ExactOnsetKind.None)
            | (gain.SignOf(_coefficients[^1]) == 0 ? ExactOnsetKind.ThroughInfinity : ExactOnsetKind.None);
        return (kind, frequencies);
    }

    /// <summary>A pair of axis roots is a common negative root of the even and odd parts, e(z) + s o(z) with z = s^2.</summary>
    private double[] AxisFrequencies(ExactRoot gain)
    {
        var even = new PolynomialAtRoot(gain, _coefficients.Where((_, k) => k % 2 == 0));
        var odd = new PolynomialAtRoot(gain, _coefficients.Where((_, k) => k % 2 == 1));
        return [.. PolynomialAtRoot.Gcd(even, odd).NegativeRoots().Select(z => Math.Sqrt(-z)).Reverse()];
    }

    private ExactPolynomial HurwitzDeterminant()
    {
        var size = Math.Max(Degree - 1, 0);
        var matrix = new ExactPolynomial[size, size];
        for (var i = 0; i < size; i++)
        {
            for (var j = 0; j < size; j++)
            {
                var power = Degree - 1 - 2 * j + i;
                matrix[i, j] = power >= 0 && power <= Degree ? _coefficients[power] : ExactPolynomial.Zero;
            }
        }
        return ExactPolynomial.Determinant(matrix);
    }

    private static ExactPolynomial InGain(ExactPolynomial determinant, int power, int stride)
    {
        var coefficients = new Rational[determinant.Degree / stride + 1];
        for (var j = 0; j < coefficients.Length; j++)
            coefficients[j] = determinant[power + j * stride];
        return ExactPolynomial.Create(coefficients);
    }
}
