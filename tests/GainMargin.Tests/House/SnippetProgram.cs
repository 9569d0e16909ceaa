using System.Globalization;
using System.Reflection;
using System.Runtime.Loader;
using System.Text;
using System.Text.RegularExpressions;
using Microsoft.CodeAnalysis;
using Microsoft.CodeAnalysis.CSharp;
using Microsoft.CodeAnalysis.CSharp.Syntax;

namespace GainMargin.Tests.House;

/// <summary>
/// A snippet compiled as a program a reader would write: alone, or where it does not compile alone after the snippets before
/// it, as few of them as it takes.
/// </summary>
internal static partial class SnippetProgram
{
    private const char Mark = '\u001e';

    private const string ImplicitUsings =
        "global using System; global using System.Collections.Generic; global using System.IO; global using System.Linq; " +
        "global using System.Threading; global using System.Threading.Tasks;";

    /// <summary>Compiles and runs one of the snippets of a page.</summary>
    /// <param name="snippets">All snippets of the page.</param>
    /// <param name="index">Which one.</param>
    /// <returns><see langword="null"/> if it runs and prints what the page says, otherwise what is wrong.</returns>
    public static string? Complaint(IReadOnlyList<MarkdownSnippet> snippets, int index)
    {
        var snippet = snippets[index];
        string[] errors = [];
        for (int first = index; first >= 0; first--)
        {
            using var image = new MemoryStream();
            errors = Compile(Compose(snippets.Take(index).Skip(first), snippet), image);
            if (errors.Length > 0)
            {
                continue;
            }

            string printed;
            try
            {
                printed = Run(image);
            }
            catch (TargetInvocationException failure)
            {
                return $"line {snippet.Line}: the snippet throws {failure.InnerException}";
            }

            return snippet.Output is null ? null : Difference(snippet, printed);
        }

        return $"line {snippet.Line}: the snippet does not compile, not even after all those before it:\n{string.Join('\n', errors)}";
    }

    /// <summary>Using directives first, then the statements in order, then the types; each is told its line of the page.</summary>
    private static string Compose(IEnumerable<MarkdownSnippet> before, MarkdownSnippet snippet)
    {
        var usings = new StringBuilder();
        var statements = new StringBuilder();
        var types = new StringBuilder();
        foreach (var part in before.Append(snippet))
        {
            if (ReferenceEquals(part, snippet))
            {
                statements.Append(CultureInfo.InvariantCulture, $"\nglobal::System.Console.Write('\\u{(int)Mark:x4}');\n");
            }

            var tree = CSharpSyntaxTree.ParseText(part.Code);
            var unit = tree.GetCompilationUnitRoot();
            Add(usings, unit.Usings);
            Add(statements, unit.Members.OfType<GlobalStatementSyntax>());
            Add(types, unit.Members.Where(m => m is not GlobalStatementSyntax));

            void Add(StringBuilder to, IEnumerable<SyntaxNode> nodes)
            {
                foreach (var node in nodes)
                {
                    int line = part.Line + 1 + tree.GetLineSpan(node.FullSpan).StartLinePosition.Line;
                    to.Append(CultureInfo.InvariantCulture, $"\n#line {line} \"README.md\"\n{node.ToFullString()}\n");
                }
            }
        }

        return $"{usings}{statements}{types}";
    }

    private static string[] Compile(string program, Stream image)
    {
        var result = CSharpCompilation.Create(
            "ReadmeSnippet", [CSharpSyntaxTree.ParseText(ImplicitUsings), CSharpSyntaxTree.ParseText(program)],
            Repository.Assemblies.Select(path => MetadataReference.CreateFromFile(path)),
            new CSharpCompilationOptions(OutputKind.ConsoleApplication, nullableContextOptions: NullableContextOptions.Enable)).Emit(image);
        return [.. result.Diagnostics.Where(d => d.Severity == DiagnosticSeverity.Error).Select(d => d.ToString())];
    }

    private static string Run(MemoryStream image)
    {
        image.Position = 0;
        var context = new AssemblyLoadContext("snippet", isCollectible: true);
        var console = Console.Out;
        using var printed = new StringWriter(CultureInfo.InvariantCulture);
        Console.SetOut(printed);
        try
        {
            var main = context.LoadFromStream(image).EntryPoint!;
            main.Invoke(null, main.GetParameters().Length == 0 ? [] : [Array.Empty<string>()]);
        }
        finally
        {
            Console.SetOut(console);
            context.Unload();
        }

        return printed.ToString().Split(Mark)[^1];
    }

    private static string? Difference(MarkdownSnippet snippet, string printed)
    {
        string[] expected = Lines(snippet.Output!);
        string[] actual = Lines(printed);
        for (int i = 0; i < Math.Max(expected.Length, actual.Length); i++)
        {
            string says = i < expected.Length ? expected[i] : "(nothing more)";
            string prints = i < actual.Length ? actual[i] : "(nothing more)";
            if (says != prints)
            {
                return $"line {snippet.Line}: line {i + 1} of the output differs.\n  page:    {says}\n  printed: {prints}\n" +
                    $"All that was printed:\n{printed}";
            }
        }

        return null;
    }

    // What stands behind ± is a bound of rounding, which the next processor may round otherwise.
    private static string[] Lines(string text)
        => [.. text.ReplaceLineEndings("\n").TrimEnd().Split('\n').Select(l => RoundingBound().Replace(l.TrimEnd(), "± …"))];

    [GeneratedRegex(@"± [0-9.E+-]+")]
    private static partial Regex RoundingBound();
}
