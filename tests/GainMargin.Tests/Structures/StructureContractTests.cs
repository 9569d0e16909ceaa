using System.Globalization;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace GainMargin.Tests.Structures;

/// <summary>What a structure, its names and its matrices promise to their user.</summary>
public sealed class StructureContractTests
{
    private static readonly double[] M = [2, 0.5, 0.5, 3];
    private static readonly double[] D = [0.1, 0.2, -0.2, 0.3];
    private static readonly double[] K = [4, -1, -2, 5];

    [Fact]
    public void FromMatrices_InputChangedAfterwards_ChangesNothing()
    {
        var matrices = new StructureMatrices { Dofs = ["a", "b"], Mass = Square(M), Damping = Square(D), Stiffness = Square(K) };
        var structure = ElasticStructure.FromMatrices(matrices);
        matrices.Mass.Clear();
        matrices.Damping.Clear();
        matrices.Stiffness.Clear();
        AssertIs(M, structure.Mass);
        AssertIs(D, structure.Damping);
        AssertIs(K, structure.Stiffness);
    }

    [Fact]
    public void FromRowMajor_InputChangedAfterwards_ChangesNothing()
    {
        double[] m = [.. M];
        double[] d = [.. D];
        double[] k = [.. K];
        var structure = ElasticStructure.FromRowMajor(["a", "b"], m, d, k);
        Array.Clear(m);
        Array.Clear(d);
        Array.Clear(k);
        AssertIs(M, structure.Mass);
        AssertIs(D, structure.Damping);
        AssertIs(K, structure.Stiffness);
    }

    [Fact]
    public void FromMatrices_MassOfRoundingAsymmetry_IsMadeSymmetricWithoutTouchingTheInput()
    {
        double[] m = [2, 0.5, Math.BitIncrement(0.5), 3];
        var input = Square(m);
        var structure = ElasticStructure.FromMatrices(
            new() { Dofs = ["a", "b"], Mass = input, Damping = Square(D), Stiffness = Square(K) });
        Assert.Equal(structure.Mass["a", "b"], structure.Mass["b", "a"]);
        Assert.Equal(Square(m), input);
    }

    [Fact]
    public void FromMatrices_SparseAndDiagonalStorage_GiveTheSameEntries()
    {
        var structure = ElasticStructure.FromMatrices(new()
        {
            Dofs = ["a", "b"],
            Mass = DiagonalMatrix.OfDiagonal(2, 2, [2, 3]),
            Damping = SparseMatrix.OfMatrix(Square(D)),
            Stiffness = SparseMatrix.OfMatrix(Square(K)),
        });
        AssertIs([2, 0, 0, 3], structure.Mass);
        AssertIs(D, structure.Damping);
        AssertIs(K, structure.Stiffness);
    }

    [Fact]
    public void FromModes_Table_GivesModalMatricesAndPoints()
    {
        var structure = ElasticStructure.FromModes(new()
        {
            Points = ["root", "middle", "tip"],
            Frequencies = [default, Frequency.FromRadians(3)],
            DampingRatios = [0.5, 0.02],
            Shapes = DenseMatrix.OfArray(new[,] { { 1.0, 0 }, { 1, 0.4 }, { 1, 0.9 } }),
        });
        Assert.Equal(DofNames.Of("mode 1", "mode 2"), structure.Dofs);
        Assert.Equal(DofNames.Of("root", "middle", "tip"), structure.Points);
        AssertIs([1, 0, 0, 1], structure.Mass);
        AssertIs([0, 0, 0, 2 * 0.02 * 3], structure.Damping);
        AssertIs([0, 0, 0, 9], structure.Stiffness);
        Assert.Equal(0.9, structure.Shapes!["tip", "mode 2"]);
        Assert.Null(structure.ResidualFlexibility);
    }

    [Fact]
    public void FromModes_InputChangedAfterwards_ChangesNothing()
    {
        var table = new ModalTable
        {
            Points = ["root", "tip"],
            Frequencies = [Frequency.FromRadians(1), Frequency.FromRadians(2)],
            DampingMatrix = Square(D),
            Shapes = Square(K),
            ResidualFlexibility = Square(M),
        };
        var structure = ElasticStructure.FromModes(table);
        table.DampingMatrix!.Clear();
        table.Shapes.Clear();
        table.ResidualFlexibility!.Clear();
        AssertIs(D, structure.Damping);
        AssertIs(K, structure.Shapes!);
        AssertIs(M, structure.ResidualFlexibility!);
    }

    [Fact]
    public void ToMatrix_EachTime_HandsOutAFreshCopy()
    {
        var stiffness = ElasticStructure.FromRowMajor(["a", "b"], M, D, K).Stiffness;
        var first = stiffness.ToMatrix();
        Assert.Equal(Square(K), first);
        first.Clear();
        Assert.Equal(Square(K), stiffness.ToMatrix());
        AssertIs(K, stiffness);
    }

    [Fact]
    public void NamedMatrix_EntryByNames_IsThatOfRowAndColumn()
    {
        var stiffness = ElasticStructure.FromRowMajor(["a", "b"], M, D, K).Stiffness;
        Assert.Equal((-1, -2), (stiffness["a", "b"], stiffness["b", "a"]));
        Assert.Equal((-1, -2), (stiffness[0, 1], stiffness[1, 0]));
        Refusal.Of<ArgumentException>("name", () => _ = stiffness["a", "tip"], "\"tip\"", "\"a\", \"b\"");
        Refusal.Of<ArgumentException>("name", () => _ = stiffness["tip", "a"], "\"tip\"", "\"a\", \"b\"");
        Assert.ThrowsAny<ArgumentException>(() => stiffness[2, 0]);
        Assert.ThrowsAny<ArgumentException>(() => stiffness[0, -1]);
    }

    [Fact]
    public void CopyRowMajorTo_Destination_TakesRowsInOrderAndKeepsTheRest()
    {
        var stiffness = ElasticStructure.FromRowMajor(["a", "b"], M, D, K).Stiffness;
        double[] longer = [7, 7, 7, 7, 7];
        stiffness.CopyRowMajorTo(longer);
        Assert.Equal([4, -1, -2, 5, 7], longer);
        Refusal.Of<ArgumentException>("destination", () => stiffness.CopyRowMajorTo(new double[3]), "holds 3 values", "4 are needed");
    }

    [Fact]
    public void DofNames_SameNamesInTheSameOrder_AreEqual()
    {
        DofNames dofs = ["a", "b"];
        var others = new DofNames[] { ["b", "a"], ["a"], ["a", "b", "c"], ["a", "B"], [] };
        Assert.Equal(DofNames.Of("a", "b"), dofs);
        Assert.Equal(DofNames.Of("a", "b").GetHashCode(), dofs.GetHashCode());
        Assert.True(dofs.Equals((object)DofNames.Of("a", "b")));
        Assert.All(others, other => Assert.False(dofs.Equals(other)));
        Assert.False(dofs.Equals(null));
        Assert.False(dofs.Equals((object)"a"));
        Assert.Single(new HashSet<DofNames> { dofs, DofNames.Of("a", "b") });
    }

    [Fact]
    public void DofNames_CollectionExpression_IsAListInItsOrder()
    {
        string[] more = ["c", "A"];
        DofNames dofs = ["b", "a", .. more];
        Assert.Equal(["b", "a", "c", "A"], dofs.ToArray());
        Assert.Equal((4, "c", 1, 3), (dofs.Count, dofs[2], dofs.IndexOf("a"), dofs.IndexOf("A")));
        Assert.True(dofs.TryGetIndex("c", out int found));
        Assert.False(dofs.TryGetIndex("x", out int missing));
        Assert.Equal((2, -1), (found, missing));
    }

    [Theory]
    [InlineData(-1)]
    [InlineData(2)]
    public void DofNames_PositionOutsideTheList_IsAnArgumentError(int index)
        => Assert.Equal("index", Assert.Throws<ArgumentOutOfRangeException>(() => DofNames.Of("a", "b")[index]).ParamName);

    [Fact]
    public void DofNames_InputArrayChangedAfterwards_ChangesNothing()
    {
        string[] names = ["a", "b"];
        var dofs = DofNames.Of(names);
        names[0] = "b";
        Assert.Equal(["a", "b"], dofs.ToArray());
        Assert.Equal(0, dofs.IndexOf("a"));
    }

    [Fact]
    public void DofNames_MoreThanADozenAsText_AreCutAndCounted()
    {
        var dofs = DofNames.Of([.. Enumerable.Range(1, 13).Select(i => i.ToString(CultureInfo.InvariantCulture))]);
        Assert.EndsWith("\"12\", … (13 in all)", dofs.ToString(), StringComparison.Ordinal);
        Assert.Equal("\"a\", \"b\"", DofNames.Of("a", "b").ToString());
    }

    [Fact]
    public void Frequency_RadiansAndCycles_ConvertBothWays()
    {
        Assert.Equal(2 * Math.PI * 5, Frequency.FromCycles(5).Radians, 1e-14);
        Assert.Equal(5, Frequency.FromCycles(5).Cycles, 1e-15);
        Assert.Equal(0.5, Frequency.FromRadians(Math.PI).Cycles, 1e-16);
        Assert.Equal(Frequency.FromRadians(0), default);
        Assert.Equal((true, false), (Frequency.Unlimited.IsUnlimited, Frequency.FromRadians(double.MaxValue).IsUnlimited));
    }

    [Fact]
    public void Frequency_Order_IsThatOfTheNumbers()
    {
        Frequency[] ascending = [default, Frequency.FromRadians(1), Frequency.FromCycles(1), Frequency.Unlimited];
        Assert.Equal(ascending, ascending.Reverse().Order());
        for (int i = 0; i < ascending.Length; i++)
        {
            for (int j = 0; j < ascending.Length; j++)
            {
                var (a, b) = (ascending[i], ascending[j]);
                Assert.Equal((i < j, i <= j, i > j, i >= j, i == j), (a < b, a <= b, a > b, a >= b, a == b));
                Assert.Equal(i.CompareTo(j), Math.Sign(a.CompareTo(b)));
            }
        }
    }

    private static Matrix<double> Square(double[] rowMajor) => DenseMatrix.Create(2, 2, (i, j) => rowMajor[(2 * i) + j]);

    private static void AssertIs(double[] rowMajor, NamedMatrix matrix)
    {
        double[] actual = new double[matrix.Rows.Count * matrix.Columns.Count];
        matrix.CopyRowMajorTo(actual);
        Assert.Equal(rowMajor, actual);
    }
}
