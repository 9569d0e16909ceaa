using FsCheck;

namespace GainMargin.Tests.Support;

/// <summary>Runs a property on the same inputs every time.</summary>
internal static class Seeded
{
    public static void Check(ulong seed, Property property, int tests = 300)
        => FsCheck.Check.One(Config.QuickThrowOnFailure.WithMaxTest(tests).WithReplay(new Replay(new Rnd(seed), null)), property);
}
