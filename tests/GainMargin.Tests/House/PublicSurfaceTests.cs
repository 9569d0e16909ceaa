using System.Collections;
using System.Reflection;
using System.Runtime.CompilerServices;
using System.Xml.Linq;

namespace GainMargin.Tests.House;

/// <summary>What every public type of the library promises: few namespaces, closed hierarchies, nothing that changes.</summary>
public sealed class PublicSurfaceTests
{
    private const BindingFlags Declared =
        BindingFlags.Public | BindingFlags.NonPublic | BindingFlags.Instance | BindingFlags.Static | BindingFlags.DeclaredOnly;

    private static readonly Assembly Library = typeof(ElasticStructure).Assembly;

    private static readonly Type[] Public = Library.GetExportedTypes();

    [Fact]
    public void PublicTypes_OfTheLibrary_LiveInTheNamespacesOfTheLibrary()
        => None(Public.Where(t => t.Namespace is not ("GainMargin" or "GainMargin.Models" or "GainMargin.Screening"))
            .Select(t => t.FullName));

    [Fact]
    public void Types_OfTheLibrary_AreNeverCalledLikeTheLibrary()
        => None(Library.GetTypes().Where(t => t.Name == "GainMargin").Select(t => t.FullName));

    [Fact]
    public void Namespaces_OfTheLibrary_CarryNoNameOfAPublicType()
    {
        var segments = Library.GetTypes().Where(t => t.Namespace is not null).SelectMany(t => t.Namespace!.Split('.')).ToHashSet();
        Assert.Contains("GainMargin", segments);
        None(Public.Where(t => segments.Contains(t.Name)).Select(t => t.FullName));
    }

    [Fact]
    public void PublicClasses_OfTheLibrary_AreSealedStaticOrClosed()
        => None(Public.Where(t => t.IsClass && !t.IsSealed)
            .SelectMany(t => t.GetConstructors(Declared)).Where(IsVisible).Select(c => $"{c.DeclaringType!.Name}: {c}"));

    [Fact]
    public void PublicProperties_WithASetter_AreInitOnly()
        => None(Public.SelectMany(t => t.GetProperties(Declared))
            .Where(p => p.SetMethod is { } set && IsVisible(set)
                && !set.ReturnParameter.GetRequiredCustomModifiers().Contains(typeof(IsExternalInit)))
            .Select(Show));

    [Fact]
    public void PublicFields_OfTheLibrary_AreConstantsOrStaticReadonly()
        => None(Public.Where(t => !t.IsEnum).SelectMany(t => t.GetFields(Declared))
            .Where(f => (f.IsPublic || f.IsFamily || f.IsFamilyOrAssembly) && !f.IsLiteral && !(f.IsStatic && f.IsInitOnly)).Select(Show));

    [Fact]
    public void InstanceFields_OfPublicTypes_AreReadonly()
    {
        var fields = Public.Where(t => !t.IsEnum && !typeof(Exception).IsAssignableFrom(t))
            .SelectMany(t => t.GetFields(Declared)).Where(f => !f.IsStatic).ToArray();
        Assert.Contains(fields, f => f.DeclaringType == typeof(StructureMatrices));
        None(fields.Where(f => !f.IsInitOnly).Select(Show));
    }

    [Fact]
    public void PublicProperties_OutsideInputRecords_HoldNoMatrixOfMathNet()
    {
        var matrices = Public.SelectMany(t => t.GetProperties(Declared))
            .Where(p => IsVisible(p) && Parts(p.PropertyType).Any(t => $"{t.Namespace}".StartsWith("MathNet", StringComparison.Ordinal)))
            .ToArray();
        Assert.Contains(matrices, p => p.DeclaringType == typeof(ModalTable));
        None(matrices.Where(p => p.DeclaringType != typeof(StructureMatrices) && p.DeclaringType != typeof(ModalTable)).Select(Show));
    }

    [Fact]
    public void PublicProperties_OfTheLibrary_ShareNoMutableCollection()
        => None(Public.SelectMany(t => t.GetProperties(Declared)).Where(IsVisible)
            .Where(p => Parts(p.PropertyType).Any(t => t.IsArray
                || (typeof(ICollection).IsAssignableFrom(t) && t.Namespace != "System.Collections.Immutable")
                || (t.IsInterface && t != typeof(string) && typeof(IEnumerable).IsAssignableFrom(t))))
            .Select(Show));

    [Theory]
    [InlineData(typeof(GainSweep), nameof(GainSweep.Run))]
    [InlineData(typeof(ClosedLoopAnalysis), nameof(ClosedLoopAnalysis.Spectrum))]
    public void LongWork_OfAFinder_EndsWithAnOptionalCancellationToken(Type finder, string method)
    {
        var overloads = finder.GetMethods().Where(m => m.Name == method).ToArray();
        Assert.NotEmpty(overloads);
        Assert.All(overloads, m => AssertCancellable(m.GetParameters()));
    }

    [Fact]
    public void PublicMethods_WithProgress_EndWithAnOptionalCancellationToken()
    {
        var reporting = Public.SelectMany(t => t.GetMethods(Declared)).Where(m => m.IsPublic)
            .Where(m => m.GetParameters().Any(p => p.ParameterType.Name.StartsWith("IProgress", StringComparison.Ordinal))).ToArray();
        Assert.NotEmpty(reporting);
        Assert.All(reporting, m => AssertCancellable(m.GetParameters()));
    }

    [Fact]
    public void Verdict_ByDefault_IsUndecided()
    {
        Assert.Equal(StabilityVerdict.Undecided, default);
        Assert.Equal(StabilityVerdict.Undecided, default(RootCount).Verdict);
        Assert.Equal(Coverage.Sampled, default);
    }

    [Fact]
    public void PublicEnums_OfTheLibrary_NameTheirDefault()
        => None(Public.Where(t => t.IsEnum && !Enum.IsDefined(t, Activator.CreateInstance(t)!)).Select(t => t.Name));

    [Fact]
    public void PublicTypes_InTheDocumentationFile_HaveASummary()
    {
        var summaries = XDocument.Load(Path.ChangeExtension(Library.Location, ".xml")).Descendants("member")
            .ToDictionary(m => m.Attribute("name")!.Value, m => m.Element("summary")?.Value.Trim());
        None(Public.Select(t => t.FullName!.Replace('+', '.'))
            .Where(name => string.IsNullOrEmpty(summaries.GetValueOrDefault($"T:{name}"))));
    }

    private static void AssertCancellable(ParameterInfo[] parameters)
    {
        Assert.Equal(typeof(CancellationToken), parameters[^1].ParameterType);
        Assert.True(parameters[^1].HasDefaultValue);
    }

    private static bool IsVisible(MethodBase method) => method.IsPublic || method.IsFamily || method.IsFamilyOrAssembly;

    private static bool IsVisible(PropertyInfo property) => property.GetMethod is { } get && IsVisible(get);

    /// <summary>A type with its element type and type arguments, all the way down.</summary>
    private static IEnumerable<Type> Parts(Type type)
        => (type.HasElementType ? Parts(type.GetElementType()!) : type.GetGenericArguments().SelectMany(Parts)).Prepend(type);

    private static string Show(MemberInfo member) => $"{member.DeclaringType!.Name}.{member.Name}";

    private static void None(IEnumerable<string?> offences)
    {
        string[] found = [.. offences.Select(o => o ?? "?").Order(StringComparer.Ordinal)];
        Assert.True(found.Length == 0, string.Join('\n', found));
    }
}
