using FsCheck;
using FsCheck.Fluent;
using GainMargin.Numerics;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Numerics;

public sealed class AssignmentTests
{
    private const int LargestOrder = 6;

    [Fact]
    public void Solve_IntegerCostsUpToOrderSix_CostsAsMuchAsTheBestPermutation()
        => Seeded.Check(31, Prop.ForAll(Costs(20), cost => TotalOf(cost, Assignment.Solve(cost)) == Best(cost, [], 0)), tests: 500);

    [Fact]
    public void Solve_CostsFullOfTies_CostsAsMuchAsTheBestPermutation()
        => Seeded.Check(32, Prop.ForAll(Costs(2), cost => TotalOf(cost, Assignment.Solve(cost)) == Best(cost, [], 0)), tests: 500);

    [Fact]
    public void Solve_AnyCosts_ReturnsAPermutation()
        => Seeded.Check(33, Prop.ForAll(
            Costs(20), cost => Assignment.Solve(cost).Order().SequenceEqual(Enumerable.Range(0, cost.GetLength(0)))));

    [Fact]
    public void Solve_ShuffledDistances_FindsTheShuffle()
    {
        var random = new Random(34);
        int[] shuffle = [.. Enumerable.Range(0, 40)];
        random.Shuffle(shuffle);
        double[,] cost = new double[40, 40];
        for (int i = 0; i < 40; i++)
        {
            for (int j = 0; j < 40; j++)
            {
                cost[i, j] = Math.Abs(shuffle[i] - j) + (0.1 * random.NextDouble());
            }
        }

        Assert.Equal(shuffle, Assignment.Solve(cost));
    }

    [Fact]
    public void Solve_GreedyChoiceIsWorse_TakesTheSum() => Assert.Equal([1, 0], Assignment.Solve(new double[,] { { 0, 1 }, { 1, 5 } }));

    [Fact]
    public void Solve_OrderZero_IsEmpty() => Assert.Empty(Assignment.Solve(new double[0, 0]));

    private static Arbitrary<double[,]> Costs(int largest)
        => Gen.Choose(1, LargestOrder).SelectMany(n => Gen.Choose(-largest, largest).Select(c => (double)c).Array2DOf(n, n)).ToArbitrary();

    private static double TotalOf(double[,] cost, int[] columns) => columns.Select((column, row) => cost[row, column]).Sum();

    private static double Best(double[,] cost, int[] taken, double sum)
        => taken.Length == cost.GetLength(0)
            ? sum
            : Enumerable.Range(0, cost.GetLength(0)).Except(taken).Min(j => Best(cost, [.. taken, j], sum + cost[taken.Length, j]));
}
