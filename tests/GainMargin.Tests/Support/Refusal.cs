namespace GainMargin.Tests;

/// <summary>Asserts that the library refuses an argument and says which.</summary>
internal static class Refusal
{
    /// <summary>
    /// The call throws exactly <typeparamref name="T"/>, for <paramref name="parameter"/>, with a message that contains every
    /// one of the <paramref name="culprits"/>.
    /// </summary>
    public static void Of<T>(string parameter, Action call, params string[] culprits)
        where T : ArgumentException
    {
        var refused = Assert.Throws<T>(call);
        Assert.All(culprits, culprit => Assert.Contains(culprit, refused.Message, StringComparison.Ordinal));
        Assert.Equal(parameter, refused.ParamName);
    }

    /// <summary>The same for an entry inside an argument, which the message names rather than the parameter.</summary>
    public static void OfEntry(Action call, params string[] culprits)
    {
        Assert.NotEmpty(culprits);
        var refused = Assert.Throws<ArgumentException>(call);
        Assert.All(culprits, culprit => Assert.Contains(culprit, refused.Message, StringComparison.Ordinal));
    }
}
