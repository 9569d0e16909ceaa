namespace GainMargin.Tests.Stability;

public sealed class LoopFamiliesTests
{
    [Fact]
    public void Path_SameSeed_IsTheSameCase()
    {
        for (int seed = 1; seed <= 40; seed++)
        {
            var (first, family) = LoopFamilies.Path(seed);
            var (second, again) = LoopFamilies.Path(seed);

            Assert.Equal(family, again);
            Assert.Equal(first.Range, second.Range);
            Assert.Equal(first.Nominal.Stiffness.ToMatrix(), second.Nominal.Stiffness.ToMatrix());
            Assert.Equal(first.Nominal.Damping.ToMatrix(), second.Nominal.Damping.ToMatrix());
            Assert.Equal(first.Nominal.Mass.ToMatrix(), second.Nominal.Mass.ToMatrix());
        }
    }

    [Fact]
    public void Path_ThousandSeeds_CoversOrdersFamiliesSignsAndLaws()
    {
        var cases = Enumerable.Range(1, 1000).Select(LoopFamilies.Path).ToList();

        Assert.Equal(2 * Enum.GetValues<LoopFamily>().Length, cases.Select(c => c.Family).Distinct().Count());
        Assert.Equal([2, 40], new[] { cases.Min(c => Order(c.Path)), cases.Max(c => Order(c.Path)) });
        Assert.Contains(cases, c => c.Path.Range.To <= 0);
        Assert.Contains(cases, c => c.Path.Range.From >= 0);
        Assert.Contains(cases, c => c.Path.Range is { From: < 0, To: > 0 });
        Assert.Equal(6, cases.Select(c => Law(c.Path)).Distinct().Count());
        Assert.Contains(cases, c => c.Path.Nominal.Law.Loops.Length == 2);
    }

    private static int Order(GainPath path) => path.Nominal.Structure.Dofs.Count;

    private static (bool, bool, bool) Law(GainPath path)
    {
        var ratios = path.Nominal.Law.Loops[0].Loop.Ratios;
        return (ratios.Position != 0, ratios.Rate != 0, ratios.Acceleration != 0);
    }
}
