using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Structures;

/// <summary>What a structure refuses, and how it says so.</summary>
public sealed class StructureInputTests
{
    private static readonly double[] Unit = [1, 0, 0, 1];

    [Theory]
    [InlineData("mass", double.NaN, "is NaN")]
    [InlineData("mass", double.PositiveInfinity, "is +infinity")]
    [InlineData("damping", double.NaN, "is NaN")]
    [InlineData("damping", double.NegativeInfinity, "is -infinity")]
    [InlineData("stiffness", double.NaN, "is NaN")]
    [InlineData("stiffness", double.PositiveInfinity, "is +infinity")]
    public void FromRowMajor_EntryNotFinite_NamesMatrixEntryAndValue(string matrix, double value, string how)
    {
        for (int k = 0; k < 4; k++)
        {
            double[] bad = [.. Unit];
            bad[k] = value;
            string entry = $"{matrix}[\"{"ab"[k / 2]}\", \"{"ab"[k % 2]}\"] {how}";
            Refusal.Of<ArgumentException>(
                matrix,
                () => ElasticStructure.FromRowMajor(
                    ["a", "b"], matrix == "mass" ? bad : Unit, matrix == "damping" ? bad : Unit, matrix == "stiffness" ? bad : Unit),
                entry);
        }
    }

    [Fact]
    public void FromMatrices_EntryNotFinite_NamesMatrixEntryAndValue()
    {
        var bad = DenseMatrix.OfArray(new[,] { { 1.0, double.NaN }, { 0, 1 } });
        Refusal.OfEntry(() => ElasticStructure.FromMatrices(Two() with { Stiffness = bad }), "stiffness[\"a\", \"b\"] is NaN");
    }

    [Theory]
    [InlineData("mass", 3, 2, "mass is 3×2; 2×2 was expected")]
    [InlineData("damping", 1, 1, "damping is 1×1; 2×2 was expected")]
    [InlineData("stiffness", 2, 3, "stiffness is 2×3; 2×2 was expected")]
    public void FromMatrices_WrongSize_SaysBothSizes(string matrix, int rows, int columns, string message)
        => Refusal.OfEntry(() => ElasticStructure.FromMatrices(With(matrix, DenseMatrix.Create(rows, columns, 1))), message);

    [Theory]
    [InlineData("mass")]
    [InlineData("damping")]
    [InlineData("stiffness")]
    public void FromMatrices_MatrixMissing_NamesIt(string matrix)
        => Refusal.Of<ArgumentNullException>("matrices", () => ElasticStructure.FromMatrices(With(matrix, null!)), $"{matrix} is null");

    [Theory]
    [InlineData("mass", 3)]
    [InlineData("damping", 5)]
    [InlineData("stiffness", 0)]
    public void FromRowMajor_WrongLength_SaysBothLengths(string matrix, int length)
    {
        double[] wrong = new double[length];
        Refusal.Of<ArgumentException>(
            matrix,
            () => ElasticStructure.FromRowMajor(
                ["a", "b"], matrix == "mass" ? wrong : Unit, matrix == "damping" ? wrong : Unit, matrix == "stiffness" ? wrong : Unit),
            $"{matrix} has {length} entries", "2×2 = 4");
    }

    [Fact]
    public void Structure_WithoutDegreesOfFreedom_IsRefused()
    {
        Refusal.OfEntry(() => ElasticStructure.FromRowMajor([], [], [], []), "at least one degree of freedom");
        Refusal.Of<ArgumentException>(
            "matrices", () => ElasticStructure.FromMatrices(Two() with { Dofs = [] }), "at least one degree of freedom");
    }

    [Fact]
    public void Structure_NullArguments_NamesTheParameter()
    {
        Refusal.Of<ArgumentNullException>("matrices", () => ElasticStructure.FromMatrices(null!));
        Refusal.Of<ArgumentNullException>("matrices", () => ElasticStructure.FromMatrices(Two() with { Dofs = null! }));
        Refusal.Of<ArgumentNullException>("dofs", () => ElasticStructure.FromRowMajor(null!, [1], [1], [1]));
        Refusal.Of<ArgumentNullException>("modes", () => ElasticStructure.FromModes(null!));
        Refusal.Of<ArgumentNullException>("modes", () => ElasticStructure.FromModes(OneMode() with { Points = null! }));
        Refusal.Of<ArgumentNullException>("modes", () => ElasticStructure.FromModes(OneMode() with { Shapes = null! }), "shapes is null");
    }

    [Fact]
    public void Mass_Zero_NamesTheDegreeOfFreedomAndAWayOut()
        => Refusal.Of<ArgumentException>("mass", () => OfMass(1, 0, 0, 0), "mass[\"b\", \"b\"] is 0", "give it a mass or condense it out");

    [Fact]
    public void Mass_NegativeOnTheDiagonal_NamesTheEntry()
        => Refusal.Of<ArgumentException>("mass", () => OfMass(1, 0, 0, -2), "mass[\"b\", \"b\"] is -2", "positive definite");

    [Theory]
    [InlineData(1, 2, 2, 3, "b")]
    [InlineData(3, -2, -2, 1, "a")]
    public void Mass_Indefinite_NamesADirectionAndTheEigenvalue(double aa, double ab, double ba, double bb, string other)
    {
        // Both components of the direction are equal in size once the diagonal is one, so either name may lead.
        var refused = Assert.Throws<ArgumentException>(() => OfMass(aa, ab, ba, bb));
        Assert.Equal("mass", refused.ParamName);
        Assert.Contains("not positive definite", refused.Message, StringComparison.Ordinal);
        Assert.Contains("smallest eigenvalue is -0.1547", refused.Message, StringComparison.Ordinal);
        Assert.Matches($"led by \"({other}|{(other == "a" ? "b" : "a")})\"", refused.Message);
    }

    [Fact]
    public void Mass_IndefiniteInOneCorner_NamesADegreeOfFreedomOfThatCorner()
    {
        var refused = Assert.Throws<ArgumentException>(() => ElasticStructure.FromRowMajor(
            ["sound", "left", "right"], [9, 0, 0, 0, 1, -1.5, 0, -1.5, 1], new double[9], new double[9]));
        Assert.Matches("led by \"(left|right)\"", refused.Message);
    }

    [Theory]
    [InlineData(1e-9)]
    [InlineData(1)]
    [InlineData(1e9)]
    public void Mass_SingularInAnyUnit_IsRefusedAsSingular(double unit)
        => Refusal.Of<ArgumentException>("mass", () => OfMass(1, unit, unit, unit * unit), "singular to working precision", "led by \"");

    [Theory]
    [InlineData(1e-6)]
    [InlineData(1e6)]
    public void Mass_Asymmetric_NamesBothEntries(double unit)
        => Refusal.Of<ArgumentException>(
            "mass", () => OfMass(unit, 0.25 * unit, 0.5 * unit, unit),
            FormattableString.Invariant($"mass[\"b\", \"a\"] is {0.5 * unit:R}"),
            FormattableString.Invariant($"mass[\"a\", \"b\"] is {0.25 * unit:R}"), "symmetric");

    [Fact]
    public void Mass_NearTheLargestDouble_IsKept()
        => Assert.Equal(1.5e308, ElasticStructure.FromRowMajor(["a"], [1.5e308], [0], [1]).Mass["a", "a"]);

    [Fact]
    public void Names_Blank_SaysWhichPosition()
    {
        Refusal.Of<ArgumentException>("names", () => DofNames.Of("a", " "), "Name 1 is blank");
        Refusal.Of<ArgumentException>("names", () => DofNames.Of(null!, "b"), "Name 0 is blank");
    }

    [Fact]
    public void Names_Twice_SaysWhichAndWhere()
        => Refusal.Of<ArgumentException>("names", () => DofNames.Of("a", "tool.x", "b", "tool.x"), "\"tool.x\"", "1 and 3");

    [Fact]
    public void Names_Unknown_ListsTheNamesThereAre()
    {
        Refusal.Of<ArgumentException>(
            "name", () => DofNames.Of("foot.x", "tool.x").IndexOf("Tool.x"), "\"Tool.x\"", "\"foot.x\", \"tool.x\"");
        Refusal.Of<ArgumentNullException>("name", () => DofNames.Of("a").IndexOf(null!));
        Refusal.Of<ArgumentNullException>("name", () => DofNames.Of("a").TryGetIndex(null!, out _));
    }

    [Fact]
    public void Modes_NoneOrNoPoint_IsRefused()
    {
        RefusesModes(OneMode() with { Frequencies = [] }, "at least one mode and one point");
        RefusesModes(OneMode() with { Frequencies = default }, "at least one mode and one point");
        RefusesModes(OneMode() with { Points = [] }, "at least one mode and one point");
    }

    [Fact]
    public void Modes_BothOrNeitherKindOfDamping_IsRefused()
    {
        RefusesModes(OneMode() with { DampingMatrix = Filled(1, 1, 1) }, "damping ratios or a damping matrix", "not both");
        RefusesModes(OneMode() with { DampingRatios = [] }, "damping ratios or a damping matrix");
        RefusesModes(OneMode() with { DampingRatios = default }, "damping ratios or a damping matrix");
    }

    [Fact]
    public void Modes_WrongCounts_SaysBoth()
    {
        RefusesModes(OneMode() with { DampingRatios = [0.01, 0.02, 0.03] }, "3 damping ratios for 1 modes");
        RefusesModes(OneMode() with { Shapes = Filled(2, 2, 1) }, "shapes is 2×2; 2×1 was expected");
        RefusesModes(OneMode() with { DampingRatios = [], DampingMatrix = Filled(2, 2, 1) }, "damping is 2×2; 1×1 was expected");
        RefusesModes(OneMode() with { ResidualFlexibility = Filled(1, 1, 1) }, "residual flexibility is 1×1; 2×2 was expected");
    }

    [Fact]
    public void Modes_NotFinite_NamesModeOrEntry()
    {
        RefusesModes(OneMode() with { DampingRatios = [double.NaN] }, "damping ratio of mode 1 is NaN");
        RefusesModes(OneMode() with { Frequencies = [Frequency.Unlimited] }, "frequency of mode 1 is unlimited");
        RefusesModes(OneMode() with { Shapes = DenseMatrix.OfColumnMajor(2, 1, [1, double.NaN]) }, "shapes[\"b\", \"mode 1\"] is NaN");
        RefusesModes(
            OneMode() with { DampingRatios = [], DampingMatrix = Filled(1, 1, double.NaN) }, "damping[\"mode 1\", \"mode 1\"] is NaN");
        RefusesModes(
            OneMode() with { ResidualFlexibility = Filled(2, 2, double.PositiveInfinity) },
            "residual flexibility[\"a\", \"a\"] is +infinity");
    }

    [Fact]
    public void Modes_StiffnessOrDampingBeyondDouble_NamesTheMode()
    {
        RefusesModes(OneMode() with { Frequencies = [Frequency.FromRadians(1e200)] }, "mode 1");
        RefusesModes(OneMode() with { DampingRatios = [1e308] }, "mode 1");
    }

    [Theory]
    [InlineData(-1)]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    public void Frequency_NegativeOrNotFinite_IsRefused(double value)
    {
        string shown = double.IsNaN(value) ? "NaN" : value < 0 ? "-1" : "+infinity";
        Refusal.Of<ArgumentOutOfRangeException>("perTime", () => Frequency.FromRadians(value), $"perTime is {shown}");
        Refusal.Of<ArgumentOutOfRangeException>("perTime", () => Frequency.FromCycles(value), $"perTime is {shown}");
    }

    [Fact]
    public void Frequency_CyclesBeyondDouble_IsRefused()
        => Refusal.Of<ArgumentOutOfRangeException>("perTime", () => Frequency.FromCycles(1e308), "perTime");

    private static void RefusesModes(ModalTable modes, params string[] culprits)
        => Refusal.OfEntry(() => ElasticStructure.FromModes(modes), culprits);

    private static DenseMatrix Filled(int rows, int columns, double value) => DenseMatrix.Create(rows, columns, value);

    private static ElasticStructure OfMass(params double[] mass) => ElasticStructure.FromRowMajor(["a", "b"], mass, Unit, Unit);

    private static StructureMatrices Two() => new()
    {
        Dofs = ["a", "b"],
        Mass = DenseMatrix.CreateIdentity(2),
        Damping = DenseMatrix.CreateIdentity(2),
        Stiffness = DenseMatrix.CreateIdentity(2),
    };

    private static StructureMatrices With(string matrix, Matrix<double> values) => matrix switch
    {
        "mass" => Two() with { Mass = values },
        "damping" => Two() with { Damping = values },
        _ => Two() with { Stiffness = values },
    };

    private static ModalTable OneMode() => new()
    {
        Points = ["a", "b"],
        Frequencies = [Frequency.FromRadians(2)],
        DampingRatios = [0.01],
        Shapes = DenseMatrix.Create(2, 1, 1),
    };
}
