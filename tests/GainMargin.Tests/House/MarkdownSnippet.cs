namespace GainMargin.Tests.House;

/// <summary>A fenced <c>csharp</c> block of a Markdown text.</summary>
/// <param name="Line">Line of its opening fence, from one.</param>
/// <param name="Code">What stands between the fences.</param>
/// <param name="Output">The <c>text</c> block that follows it with nothing but blank lines between, or <see langword="null"/>.</param>
internal sealed record MarkdownSnippet(int Line, string Code, string? Output)
{
    private const string Fence = "```";

    public static IReadOnlyList<MarkdownSnippet> In(string markdown)
    {
        string[] lines = markdown.ReplaceLineEndings("\n").Split('\n');
        var snippets = new List<MarkdownSnippet>();
        for (int i = 0; i < lines.Length; i++)
        {
            if (!IsFence(lines[i]))
            {
                continue;
            }

            int start = i;
            string code = Block(lines, ref i);
            if (Language(lines[start]) != "csharp")
            {
                continue;
            }

            int next = i + 1;
            while (next < lines.Length && string.IsNullOrWhiteSpace(lines[next]))
            {
                next++;
            }

            bool isFollowed = next < lines.Length && IsFence(lines[next]) && Language(lines[next]) == "text";
            snippets.Add(new MarkdownSnippet(start + 1, code, isFollowed ? Block(lines, ref next) : null));
            i = isFollowed ? next : i;
        }

        return snippets;
    }

    private static bool IsFence(string line) => line.TrimStart().StartsWith(Fence, StringComparison.Ordinal);

    private static string Language(string line) => line.Trim()[Fence.Length..].Trim();

    /// <summary>The lines of the block that opens at <paramref name="at"/>, which is moved to the closing fence.</summary>
    private static string Block(string[] lines, ref int at)
    {
        int open = at;
        int indent = lines[open].Length - lines[open].TrimStart().Length;
        int close = Array.FindIndex(lines, open + 1, l => l.Trim() == Fence);
        if (close < 0)
        {
            throw new FormatException($"The block that opens at line {open + 1} is never closed.");
        }

        at = close;
        return string.Concat(lines[(open + 1)..close].Select(l => l[Math.Min(indent, l.Length - l.TrimStart().Length)..] + "\n"));
    }
}
