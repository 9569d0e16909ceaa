using GainMargin.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin;

/// <summary>
/// An elastic structure, <c>M q″ + D q′ + K q = f</c> with <c>n</c> named degrees of freedom. Checked once when made,
/// immutable afterwards. Sensors and actuators address its points: the degrees of freedom themselves, or for a modal
/// table the points at which the shapes are known.
/// </summary>
public sealed class ElasticStructure
{
    private readonly Lazy<byte[]> _hash;

    private ElasticStructure(
        DofNames dofs, DofNames points, Matrix<double> mass, Matrix<double> damping, Matrix<double> stiffness,
        Matrix<double>? shapes, Matrix<double>? residual, UnitLabels? units)
    {
        Dofs = dofs;
        Points = points;
        Mass = new NamedMatrix(dofs, dofs, mass);
        Damping = new NamedMatrix(dofs, dofs, damping);
        Stiffness = new NamedMatrix(dofs, dofs, stiffness);
        Shapes = shapes is null ? null : new NamedMatrix(points, dofs, shapes);
        ResidualFlexibility = residual is null ? null : new NamedMatrix(points, points, residual);
        Units = units ?? UnitLabels.None;
        _hash = new Lazy<byte[]>(() => StructureHash.Of(this));
    }

    /// <summary>Names of the <c>n</c> generalised coordinates.</summary>
    public DofNames Dofs { get; }

    /// <summary>Names that sensors and actuators may use.</summary>
    public DofNames Points { get; }

    /// <summary>Mass <c>M</c>, <c>n×n</c>.</summary>
    public NamedMatrix Mass { get; }

    /// <summary>Damping <c>D</c>, <c>n×n</c>.</summary>
    public NamedMatrix Damping { get; }

    /// <summary>Stiffness <c>K</c>, <c>n×n</c>.</summary>
    public NamedMatrix Stiffness { get; }

    /// <summary>Displacement of the points per unit of the coordinates; <see langword="null"/> where they are the same.</summary>
    public NamedMatrix? Shapes { get; }

    /// <summary>Static flexibility of the modes left out, or <see langword="null"/>.</summary>
    public NamedMatrix? ResidualFlexibility { get; }

    /// <summary>Labels of the units.</summary>
    public UnitLabels Units { get; }

    /// <summary>Hash of names and matrices, formed once.</summary>
    internal byte[] Hash => _hash.Value;

    /// <summary>A structure from its matrices, which are copied.</summary>
    /// <param name="matrices">Mass, damping and stiffness, <c>n×n</c>.</param>
    /// <param name="units">Labels of the units, if wanted.</param>
    /// <exception cref="ArgumentException">
    /// No degree of freedom, a wrong size, an entry that is not finite, a mass that is not symmetric or not positive
    /// definite. The message names the entry and its degrees of freedom.
    /// </exception>
    public static ElasticStructure FromMatrices(StructureMatrices matrices, UnitLabels? units = null)
    {
        Guard.NotNull(matrices);
        var dofs = Guard.NotNull(matrices.Dofs, nameof(matrices));
        return Checked(dofs, nameof(matrices), matrices.Mass, matrices.Damping, matrices.Stiffness, _ => nameof(matrices), units);
    }

    /// <summary>A structure from matrices laid out row by row, which are copied.</summary>
    /// <param name="dofs">Names of the <c>n</c> degrees of freedom.</param>
    /// <param name="mass"><c>n×n</c> entries of <c>M</c>.</param>
    /// <param name="damping"><c>n×n</c> entries of <c>D</c>.</param>
    /// <param name="stiffness"><c>n×n</c> entries of <c>K</c>.</param>
    /// <param name="units">Labels of the units, if wanted.</param>
    /// <exception cref="ArgumentException">As for <see cref="FromMatrices"/>.</exception>
    public static ElasticStructure FromRowMajor(
        DofNames dofs, ReadOnlySpan<double> mass, ReadOnlySpan<double> damping, ReadOnlySpan<double> stiffness, UnitLabels? units = null)
    {
        int n = Guard.NotNull(dofs).Count;
        return Checked(
            dofs, nameof(dofs), RowMajor(mass, n, nameof(mass)), RowMajor(damping, n, nameof(damping)), RowMajor(stiffness, n, nameof(stiffness)),
            matrix => matrix, units);
    }

    /// <summary>A structure from <c>m</c> of its modes; its coordinates are the modal ones, named <c>mode 1</c> to <c>mode m</c>.</summary>
    /// <param name="modes">Frequencies, damping and shapes.</param>
    /// <param name="units">Labels of the units, if wanted.</param>
    /// <exception cref="ArgumentException">
    /// No mode or point, a wrong size, an entry that is not finite, both or neither of damping ratios and damping matrix.
    /// </exception>
    public static ElasticStructure FromModes(ModalTable modes, UnitLabels? units = null)
    {
        Guard.NotNull(modes);
        var points = Guard.NotNull(modes.Points, nameof(modes));
        int m = modes.Frequencies.IsDefault ? 0 : modes.Frequencies.Length;
        if (m == 0 || points.Count == 0)
        {
            throw new ArgumentException("A modal table needs at least one mode and one point.", nameof(modes));
        }

        var dofs = DofNames.Of([.. Enumerable.Range(1, m).Select(k => Guard.Invariant($"mode {k}"))]);
        for (int k = 0; k < m; k++)
        {
            double radians = modes.Frequencies[k].Radians;
            if (!double.IsFinite(radians * radians))
            {
                string how = modes.Frequencies[k].IsUnlimited ? "unlimited" : Guard.Show(radians);
                throw new ArgumentException($"The frequency of {dofs[k]} is {how}; its square must be finite.", nameof(modes));
            }
        }

        Guard.Matrix(modes.Shapes, points, dofs, "shapes", nameof(modes));
        if (modes.ResidualFlexibility is not null)
        {
            Guard.Matrix(modes.ResidualFlexibility, points, points, "residual flexibility", nameof(modes));
        }

        return new ElasticStructure(
            dofs, points, Dense.Identity(m), ModalDamping(modes, dofs),
            Dense.Diagonal([.. modes.Frequencies.Select(f => f.Radians * f.Radians)]),
            Dense.Copy(modes.Shapes), modes.ResidualFlexibility is null ? null : Dense.Copy(modes.ResidualFlexibility), units);
    }

    /// <summary>Number of coordinates and points.</summary>
    public override string ToString()
        => Shapes is null
            ? $"structure with {Guard.Count(Dofs.Count, "degree of freedom", "degrees of freedom")}"
            : $"structure with {Guard.Count(Dofs.Count, "mode", "modes")} and {Guard.Count(Points.Count, "point", "points")}";

    /// <summary>Displacement of one point per unit of each coordinate.</summary>
    internal double[] RowAt(string point)
    {
        int p = Points.IndexOf(point);
        double[] row = new double[Dofs.Count];
        for (int j = 0; j < row.Length; j++)
        {
            row[j] = Shapes is null ? (p == j ? 1 : 0) : Shapes[p, j];
        }

        return row;
    }

    /// <param name="dofs">Names of the degrees of freedom.</param>
    /// <param name="dofsParameter">The caller's argument that holds them.</param>
    /// <param name="mass">Mass.</param>
    /// <param name="damping">Damping.</param>
    /// <param name="stiffness">Stiffness.</param>
    /// <param name="parameterOf">The caller's argument that holds the matrix of a name.</param>
    /// <param name="units">Labels of the units.</param>
    private static ElasticStructure Checked(
        DofNames dofs, string dofsParameter, Matrix<double> mass, Matrix<double> damping, Matrix<double> stiffness,
        Func<string, string> parameterOf, UnitLabels? units)
    {
        if (dofs.Count == 0)
        {
            throw new ArgumentException("A structure needs at least one degree of freedom.", dofsParameter);
        }

        Guard.Matrix(mass, dofs, dofs, nameof(mass), parameterOf(nameof(mass)));
        Guard.Matrix(damping, dofs, dofs, nameof(damping), parameterOf(nameof(damping)));
        Guard.Matrix(stiffness, dofs, dofs, nameof(stiffness), parameterOf(nameof(stiffness)));
        var symmetric = MassCheck.Symmetrised(mass, dofs, parameterOf(nameof(mass)));
        return new ElasticStructure(dofs, dofs, symmetric, Dense.Copy(damping), Dense.Copy(stiffness), null, null, units);
    }

    private static Matrix<double> ModalDamping(ModalTable modes, DofNames dofs)
    {
        int m = dofs.Count;
        bool hasRatios = !modes.DampingRatios.IsDefaultOrEmpty;
        if (hasRatios == modes.DampingMatrix is not null)
        {
            throw new ArgumentException("A modal table needs either damping ratios or a damping matrix, and not both.", nameof(modes));
        }

        if (modes.DampingMatrix is not null)
        {
            Guard.Matrix(modes.DampingMatrix, dofs, dofs, "damping", nameof(modes));
            return Dense.Copy(modes.DampingMatrix);
        }

        if (modes.DampingRatios.Length != m)
        {
            throw new ArgumentException(
                Guard.Invariant($"There are {modes.DampingRatios.Length} damping ratios for {m} modes."), nameof(modes));
        }

        for (int k = 0; k < m; k++)
        {
            if (!double.IsFinite(2 * modes.DampingRatios[k] * modes.Frequencies[k].Radians))
            {
                throw new ArgumentException(
                    $"The damping ratio of {dofs[k]} is {Guard.Show(modes.DampingRatios[k])}; 2ζω must be finite.", nameof(modes));
            }
        }

        return Dense.Diagonal([.. Enumerable.Range(0, m).Select(k => 2 * modes.DampingRatios[k] * modes.Frequencies[k].Radians)]);
    }

    private static DenseMatrix RowMajor(ReadOnlySpan<double> values, int n, string parameter)
    {
        if (values.Length != n * n)
        {
            throw new ArgumentException(Guard.Invariant($"{parameter} has {values.Length} entries; {n}×{n} = {n * n} were expected."), parameter);
        }

        var matrix = new DenseMatrix(n, n);
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                matrix[i, j] = values[(i * n) + j];
            }
        }

        return matrix;
    }
}
