namespace GainMargin.Tests.Oracles;

/// <summary>
/// How many roots of a closed loop are exactly zero, and how many others have their mirror image about the imaginary axis
/// among the roots; a root on the axis is its own. Counted in the arithmetic of a prime, whose rare accident of a common
/// factor that the rationals do not have would be the same in every run.
/// </summary>
/// <param name="Zeros">Roots at zero.</param>
/// <param name="Pairs">Half the number of the mirrored roots that are not zero.</param>
internal sealed record MirroredRoots(int Zeros, int Pairs)
{
    private const ulong Prime = (1UL << 61) - 1;

    /// <summary>Returns <see langword="null"/> where the closed mass is singular.</summary>
    public static MirroredRoots? Of(ExactLoop loop)
    {
        var (mass, damping, stiffness) = loop.Matrices(FromDouble, Add, Multiply);
        if (StateMatrix(mass, damping, stiffness) is not { } state)
            return null;
        var polynomial = Characteristic(state);
        int zeros = Array.FindIndex(polynomial, c => c != 0);
        var rest = polynomial[zeros..];
        var even = Trimmed([.. rest.Where((_, k) => k % 2 == 0)]);
        var odd = Trimmed([.. rest.Where((_, k) => k % 2 == 1)]);
        return new(zeros, CommonDegree(even, odd));
    }

    private static ulong Add(ulong a, ulong b) => a + b >= Prime ? a + b - Prime : a + b;

    private static ulong Negate(ulong a) => a == 0 ? 0 : Prime - a;

    private static ulong Multiply(ulong a, ulong b)
    {
        ulong high = Math.BigMul(a, b, out ulong low);
        return Add(low & Prime, (high << 3) | (low >> 61));
    }

    private static ulong Invert(ulong a)
    {
        var (result, power) = (1UL, a);
        for (var exponent = Prime - 2; exponent > 0; exponent >>= 1)
        {
            result = (exponent & 1) == 1 ? Multiply(result, power) : result;
            power = Multiply(power, power);
        }
        return result;
    }

    private static ulong FromDouble(double value)
    {
        if (value == 0)
            return 0;
        var exponent = Math.ILogB(value) - 52;
        var mantissa = (ulong)Math.ScaleB(Math.Abs(value), -exponent);

        // Two to the power of 61 is one.
        var residue = Multiply(mantissa, 1UL << (((exponent % 61) + 61) % 61));
        return value < 0 ? Negate(residue) : residue;
    }

    /// <summary>Rows for velocities first, which spares the identity block a sign.</summary>
    private static ulong[,]? StateMatrix(ulong[,] mass, ulong[,] damping, ulong[,] stiffness)
    {
        var n = mass.GetLength(0);
        var rows = new ulong[n][];
        for (var i = 0; i < n; i++)
            rows[i] = [.. Enumerable.Range(0, 3 * n).Select(j => j < n ? mass[i, j] : j < 2 * n ? damping[i, j - n] : stiffness[i, j - (2 * n)])];
        for (var k = 0; k < n; k++)
        {
            var pivot = Array.FindIndex(rows, k, row => row[k] != 0);
            if (pivot < 0)
                return null;
            (rows[k], rows[pivot]) = (rows[pivot], rows[k]);
            var inverse = Invert(rows[k][k]);
            rows[k] = Array.ConvertAll(rows[k], x => Multiply(x, inverse));
            for (var i = 0; i < n; i++)
            {
                if (i != k && rows[i][k] != 0)
                    Subtract(rows[i], rows[i][k], rows[k]);
            }
        }

        var state = new ulong[2 * n, 2 * n];
        for (var i = 0; i < n; i++)
        {
            for (var j = 0; j < 2 * n; j++)
                state[i, j] = Negate(rows[i][n + j]);
            state[n + i, i] = 1;
        }
        return state;
    }

    private static void Subtract(ulong[] from, ulong factor, ulong[] row)
    {
        var minus = Negate(factor);
        for (var j = 0; j < from.Length; j++)
            from[j] = Add(from[j], Multiply(minus, row[j]));
    }

    /// <summary>
    /// Coefficients in ascending powers: similarity to a matrix without entries below the first subdiagonal, then its
    /// leading minors one after another (Cohen, A Course in Computational Algebraic Number Theory, sec. 2.2.4, from memory).
    /// </summary>
    private static ulong[] Characteristic(ulong[,] a)
    {
        var n = a.GetLength(0);
        for (var k = 1; k < n - 1; k++)
        {
            var pivot = k;
            while (pivot < n && a[pivot, k - 1] == 0)
                pivot++;
            if (pivot == n)
                continue;
            for (var j = 0; j < n && pivot != k; j++)
                (a[k, j], a[pivot, j]) = (a[pivot, j], a[k, j]);
            for (var i = 0; i < n && pivot != k; i++)
                (a[i, k], a[i, pivot]) = (a[i, pivot], a[i, k]);
            var inverse = Invert(a[k, k - 1]);
            for (var i = k + 1; i < n; i++)
            {
                var factor = Multiply(a[i, k - 1], inverse);
                if (factor == 0)
                    continue;
                for (var j = 0; j < n; j++)
                    a[i, j] = Add(a[i, j], Negate(Multiply(factor, a[k, j])));
                for (var j = 0; j < n; j++)
                    a[j, k] = Add(a[j, k], Multiply(factor, a[j, i]));
            }
        }

        var minors = new ulong[n + 1][];
        minors[0] = [1];
        for (var m = 1; m <= n; m++)
        {
            var next = new ulong[m + 1];
            AddShifted(next, minors[m - 1], 1, 1);
            AddShifted(next, minors[m - 1], Negate(a[m - 1, m - 1]), 0);
            var product = 1UL;
            for (var i = 1; i < m; i++)
            {
                product = Multiply(product, a[m - i, m - i - 1]);
                AddShifted(next, minors[m - i - 1], Negate(Multiply(product, a[m - i - 1, m - 1])), 0);
            }
            minors[m] = next;
        }
        return minors[n];
    }

    private static void AddShifted(ulong[] to, ulong[] polynomial, ulong factor, int shift)
    {
        for (var k = 0; k < polynomial.Length; k++)
            to[k + shift] = Add(to[k + shift], Multiply(factor, polynomial[k]));
    }

    private static int CommonDegree(ulong[] a, ulong[] b)
    {
        while (b.Length > 0)
        {
            var inverse = Invert(b[^1]);
            while (a.Length >= b.Length)
            {
                var factor = Negate(Multiply(a[^1], inverse));
                AddShifted(a, b, factor, a.Length - b.Length);
                a = Trimmed(a);
            }
            (a, b) = (b, a);
        }
        return a.Length - 1;
    }

    private static ulong[] Trimmed(ulong[] a) => a[..(Array.FindLastIndex(a, c => c != 0) + 1)];
}
