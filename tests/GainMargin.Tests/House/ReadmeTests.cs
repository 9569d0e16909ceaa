namespace GainMargin.Tests.House;

/// <summary>The snippets capture what goes to the console, which the whole process shares.</summary>
[CollectionDefinition(Name, DisableParallelization = true)]
public sealed class SharedConsole
{
    public const string Name = "shared console";
}

/// <summary>Every snippet of the README runs and prints what the README says.</summary>
[Collection(SharedConsole.Name)]
public sealed class ReadmeTests
{
    [Fact]
    public void Readme_EverySnippet_RunsAndPrintsWhatThePageSays()
    {
        var snippets = MarkdownSnippet.In(File.ReadAllText(Path.Combine(Repository.Root, "README.md")));
        Assert.True(snippets.Count > 0, "README.md has no csharp block.");
        Assert.True(snippets.Any(s => s.Output is not null), "No csharp block of README.md is followed by a text block with its output.");
        string[] complaints = [.. Enumerable.Range(0, snippets.Count).Select(i => SnippetProgram.Complaint(snippets, i)).OfType<string>()];
        Assert.True(complaints.Length == 0, string.Join("\n\n", complaints));
    }

    [Fact]
    public void In_FencedBlocks_AreTakenWithTheTextThatFollowsDirectly()
        => Assert.Equal(
            [
                new MarkdownSnippet(2, "int a = 1;\n\nint b;\n", "1\n  2\n"),
                new MarkdownSnippet(12, "c();\n", null),
                new MarkdownSnippet(20, "  d();\n", "4\n"),
            ],
            MarkdownSnippet.In(
                "# Title\r\n```csharp\nint a = 1;\n\nint b;\n```\n\n```text\n1\n  2\n```\n```csharp\nc();\n```\nIt prints:\n" +
                "```text\n3\n```\n- item\n   ```csharp\n     d();\n   ```\n   ```text\n   4\n   ```\n```sh\nls\n```\n"));

    [Fact]
    public void In_BlockThatIsNeverClosed_NamesItsLine()
    {
        var failure = Assert.Throws<FormatException>(() => MarkdownSnippet.In("a\n\n```csharp\nint b;\n"));
        Assert.Contains("line 3", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Complaint_SnippetThatNeedsEarlierOnes_RunsAfterThemAndIsComparedAlone()
    {
        var page = Page(
            ("int a = 20;\nConsole.WriteLine(\"first\");", null),
            ("var a = \"not this one\";\nConsole.WriteLine(a);", "not this one"),
            ("using System.Text;\nvar text = new StringBuilder(a).Append(P.X);\nConsole.WriteLine(text);\nclass P { public const int X = 1; }",
                "not this one1"),
            ("// a comment\nConsole.WriteLine(text.Length + await Task.FromResult(1));", "14  \n"));
        Assert.Equal([null, null, null, null], Enumerable.Range(0, 4).Select(i => SnippetProgram.Complaint(page, i)));
    }

    [Theory]
    [InlineData("Console.WriteLine(1);\nConsole.WriteLine(2);", "1\n3", "line 2 of the output", "page:    3", "printed: 2")]
    [InlineData("Console.WriteLine(1);", "1\n2", "line 2 of the output", "page:    2", "printed: (nothing more)")]
    [InlineData("Console.WriteLine(1);\nConsole.WriteLine(2);", "1", "line 2 of the output", "page:    (nothing more)", "printed: 2")]
    [InlineData("int a = 1;\nint b = c;", null, "does not compile", "README.md(102,9)", "CS0103")]
    [InlineData("throw new InvalidOperationException(\"on purpose\");", null, "throws", "InvalidOperationException", "on purpose")]
    [InlineData("Console.WriteLine(GainMargin.Numerics.Guard.Show(1));", null, "does not compile", "README.md(101", "CS0122")]
    public void Complaint_SnippetThatDoesOtherwise_SaysWhat(string code, string? output, params string[] parts)
    {
        string complaint = SnippetProgram.Complaint([new MarkdownSnippet(100, code, output)], 0)!;
        Assert.StartsWith("line 100: ", complaint, StringComparison.Ordinal);
        Assert.All(parts, part => Assert.Contains(part, complaint, StringComparison.Ordinal));
    }

    [Fact]
    public void Complaint_SnippetThatThrows_GivesTheConsoleBack()
    {
        var console = Console.Out;
        Assert.NotNull(SnippetProgram.Complaint(Page(("throw new InvalidOperationException();", null)), 0));
        Assert.Same(console, Console.Out);
    }

    private static MarkdownSnippet[] Page(params (string Code, string? Output)[] blocks)
        => [.. blocks.Select((b, i) => new MarkdownSnippet(10 * (i + 1), b.Code, b.Output))];
}
