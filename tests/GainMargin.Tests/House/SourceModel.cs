using Microsoft.CodeAnalysis;
using Microsoft.CodeAnalysis.CSharp;
using Microsoft.CodeAnalysis.CSharp.Syntax;

namespace GainMargin.Tests.House;

/// <summary>
/// C# sources, bound, so that a rule is checked on what a name means and not on how it is spelt. Paths are relative to the
/// project; the first folder of a path is the layer. Names in documentation comments do not count.
/// </summary>
internal sealed class SourceModel
{
    private static readonly string[] Layers = ["Numerics", "Structures", "Feedback", "Closed", "Stability", "Screening"];

    private static readonly HashSet<string> Factorisations =
    [
        "Evd", "Svd", "LU", "Cholesky", "QR", "GramSchmidt", "Solve", "Inverse", "PseudoInverse", "Determinant", "Rank", "Kernel",
        "ConditionNumber",
    ];

    private readonly CSharpCompilation _compilation;
    private readonly SyntaxTree[] _trees;
    private readonly Lazy<IReadOnlyList<Name>> _names;

    private SourceModel(IEnumerable<(string Path, string Text)> files)
    {
        _trees = [.. files.Select(f => CSharpSyntaxTree.ParseText(f.Text, path: f.Path))];
        var usings = CSharpSyntaxTree.ParseText(
            "global using System; global using System.Collections.Generic; global using System.IO; global using System.Linq; " +
            "global using System.Threading; global using System.Threading.Tasks;");
        var references = Repository.Assemblies
            .Where(path => !Path.GetFileName(path).StartsWith("GainMargin", StringComparison.Ordinal))
            .Select(path => MetadataReference.CreateFromFile(path));
        _compilation = CSharpCompilation.Create(
            "Sources", [usings, .. _trees], references,
            new CSharpCompilationOptions(OutputKind.DynamicallyLinkedLibrary, nullableContextOptions: NullableContextOptions.Enable));
        _names = new Lazy<IReadOnlyList<Name>>(() => [.. Names()]);
    }

    /// <summary>The sources of the library.</summary>
    public static SourceModel OfLibrary()
    {
        string project = Path.Combine(Repository.Root, "src", "GainMargin");
        string[] built = [$"bin{Path.DirectorySeparatorChar}", $"obj{Path.DirectorySeparatorChar}"];
        return new SourceModel(Directory.EnumerateFiles(project, "*.cs", SearchOption.AllDirectories)
            .Select(file => (Full: file, Short: Path.GetRelativePath(project, file)))
            .Where(file => !built.Any(folder => file.Short.StartsWith(folder, StringComparison.Ordinal)))
            .Select(file => (file.Short.Replace(Path.DirectorySeparatorChar, '/'), File.ReadAllText(file.Full))));
    }

    public static SourceModel Of(params IEnumerable<(string Path, string Text)> files) => new(files);

    public int FileCount => _trees.Length;

    /// <summary>Compiler errors. Where there are any, names may be unbound and the rules below say nothing.</summary>
    public IReadOnlyList<string> Errors
        => [.. _compilation.GetDiagnostics().Where(d => d.Severity == DiagnosticSeverity.Error).Select(d => d.ToString())];

    /// <summary>Files outside the layers, types spread over two layers, and names that belong to a later layer than the file.</summary>
    public IReadOnlyList<string> LayerOffences()
        => [.. _trees.Select(t => t.FilePath).Where(path => LayerOf(path) < 0)
            .Select(path => $"{path}: is in none of the folders {string.Join(", ", Layers)}")
            .Concat(Types(_compilation.Assembly.GlobalNamespace).SelectMany(Spread))
            .Concat(_names.Value.SelectMany(UseOfLaterLayer)).Distinct()];

    /// <summary>Calls of Math.NET that factorise a matrix, by themselves or inside, outside the first layer.</summary>
    public IReadOnlyList<string> FactorisationOffences()
        => [.. _names.Value
            .Where(n => LayerOf(n.File) != 0 && n.Symbol is IMethodSymbol && Factorisations.Contains(n.Symbol.Name)
                && n.Symbol.ContainingType.ToDisplayString().StartsWith("MathNet.Numerics.LinearAlgebra.", StringComparison.Ordinal))
            .Select(n => $"{n.Place}: {n.Symbol.Name} of {n.Symbol.ContainingType.Name}")];

    /// <summary>Uses of the console, of the clock, and of waiting.</summary>
    public IReadOnlyList<string> AmbientOffences()
        => [.. _names.Value.Where(n => IsAmbient(n.Symbol)).Select(n => $"{n.Place}: {n.Symbol.ToDisplayString()}").Distinct()];

    /// <summary>Static fields, properties and events that can change.</summary>
    public IReadOnlyList<string> MutableStatics()
        => [.. Types(_compilation.Assembly.GlobalNamespace).SelectMany(t => t.GetMembers())
            .Where(m => m.IsStatic && !m.IsImplicitlyDeclared && m switch
            {
                IFieldSymbol field => !field.IsReadOnly && !field.IsConst,
                IPropertySymbol property => property.SetMethod is not null,
                _ => m is IEventSymbol,
            })
            .Select(m => $"{PlaceOf(m.Locations[0])}: {m.ContainingType.Name}.{m.Name}")];

    private static int LayerOf(string path) => Array.IndexOf(Layers, path.Split('/')[0]);

    private static string PlaceOf(Location location)
        => $"{location.SourceTree!.FilePath}:{location.GetLineSpan().StartLinePosition.Line + 1}";

    private static bool IsAmbient(ISymbol symbol)
    {
        var type = symbol as INamedTypeSymbol ?? symbol.ContainingType;
        return type?.ToDisplayString() switch
        {
            "System.Console" => true,
            "System.DateTime" or "System.DateTimeOffset" => symbol.Name is "Now" or "UtcNow" or "Today",
            "System.Threading.Thread" => symbol.Name is "Sleep",
            _ => false,
        };
    }

    private static IEnumerable<INamedTypeSymbol> Types(INamespaceOrTypeSymbol within)
    {
        foreach (var member in within.GetMembers().OfType<INamespaceOrTypeSymbol>())
        {
            if (member is INamedTypeSymbol type)
            {
                yield return type;
            }

            foreach (var nested in Types(member))
            {
                yield return nested;
            }
        }
    }

    private static IEnumerable<string> Spread(INamedTypeSymbol type)
    {
        string[] places = [.. type.Locations.DistinctBy(l => LayerOf(l.SourceTree!.FilePath)).Select(PlaceOf)];
        return places.Length > 1 ? [$"{type.Name} is declared in two folders, at {string.Join(" and ", places)}"] : [];
    }

    private IEnumerable<string> UseOfLaterLayer(Name name)
    {
        var type = (name.Symbol as INamedTypeSymbol ?? name.Symbol.ContainingType)?.OriginalDefinition;
        if (type is null || !SymbolEqualityComparer.Default.Equals(type.ContainingAssembly, _compilation.Assembly))
        {
            yield break;
        }

        int own = LayerOf(name.File);
        int other = type.DeclaringSyntaxReferences.Select(r => LayerOf(r.SyntaxTree.FilePath)).DefaultIfEmpty(-1).Max();
        if (own >= 0 && other > own)
        {
            yield return $"{name.Place}: {Layers[own]} uses {type.Name} of {Layers[other]}";
        }
    }

    /// <summary>Every name in the sources with the symbol it stands for; <c>var</c> stands for its type.</summary>
    private IEnumerable<Name> Names()
    {
        foreach (var tree in _trees)
        {
            var model = _compilation.GetSemanticModel(tree);
            foreach (var name in tree.GetRoot().DescendantNodes().OfType<SimpleNameSyntax>())
            {
                if (model.GetSymbolInfo(name).Symbol is { } symbol)
                {
                    yield return new Name(tree.FilePath, PlaceOf(name.GetLocation()), symbol);
                }
            }
        }
    }

    private sealed record Name(string File, string Place, ISymbol Symbol);
}
