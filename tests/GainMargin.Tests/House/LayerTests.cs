namespace GainMargin.Tests.House;

/// <summary>A folder of the library uses only the folders above it, and a few things are used nowhere or in one place only.</summary>
public sealed class LayerTests
{
    private static readonly Lazy<SourceModel> Library = new(SourceModel.OfLibrary);

    [Fact]
    public void Sources_OfTheLibrary_BindWithoutErrors()
    {
        Assert.InRange(Library.Value.FileCount, 50, int.MaxValue);
        None(Library.Value.Errors);
    }

    [Fact]
    public void Sources_OfEveryFolder_UseOnlyFoldersAbove() => None(Library.Value.LayerOffences());

    [Fact]
    public void Sources_OutsideNumerics_CallNoFactorisation() => None(Library.Value.FactorisationOffences());

    [Fact]
    public void Sources_OfTheLibrary_UseNeitherConsoleNorClockNorSleep() => None(Library.Value.AmbientOffences());

    [Fact]
    public void Sources_OfTheLibrary_HoldNoMutableStatic() => None(Library.Value.MutableStatics());

    [Fact]
    public void LayerOffences_NamesOfALaterFolder_AreReportedWithPlaceAndType()
    {
        var model = SourceModel.Of(
            ("Structures/Beam.cs", """
                using static N.Screen;
                namespace N;
                class Beam
                {
                    object? a = new Screen();
                    int b = Count();
                    Screen.Inner? c;
                }
                """),
            ("Closed/Screen.cs", "namespace N;\nclass Screen { public static int Count() => 1; internal class Inner; Beam? above; }"));

        Assert.Empty(model.Errors);
        Assert.Equal(
            [
                "Structures/Beam.cs:1: Structures uses Screen of Closed",
                "Structures/Beam.cs:5: Structures uses Screen of Closed",
                "Structures/Beam.cs:6: Structures uses Screen of Closed",
                "Structures/Beam.cs:7: Structures uses Screen of Closed",
                "Structures/Beam.cs:7: Structures uses Inner of Closed",
            ],
            model.LayerOffences());
    }

    [Fact]
    public void LayerOffences_DocumentationOfALaterType_IsNoUse()
        => Assert.Empty(SourceModel.Of(
            ("Numerics/A.cs", "/// <summary>Used by <see cref=\"B\"/>.</summary>\nclass A;"),
            ("Feedback/B.cs", "class B { A? a; }")).LayerOffences());

    [Fact]
    public void LayerOffences_TypeInTwoFoldersOrFileInNone_IsReported()
    {
        var model = SourceModel.Of(
            ("Numerics/A.cs", "partial class A;"), ("Closed/A.cs", "\npartial class A;"), ("Extras/C.cs", "class C;"));
        Assert.Equal(
            [
                "Extras/C.cs: is in none of the folders Numerics, Structures, Feedback, Closed, Stability, Screening",
                "A is declared in two folders, at Numerics/A.cs:1 and Closed/A.cs:2",
            ],
            model.LayerOffences());
    }

    [Fact]
    public void FactorisationOffences_CallsOfMathNet_AreReportedOutsideNumericsOnly()
    {
        const string Calls = """
            using MathNet.Numerics.LinearAlgebra;
            class A
            {
                object Of(Matrix<double> m) => m.Svd();
                object Of(Matrix<float> m) => Own.LU(m.Inverse());
            }
            static class Own { public static object LU(object o) => o; }
            """;
        var model = SourceModel.Of(("Closed/A.cs", Calls));
        Assert.Empty(model.Errors);
        Assert.Equal(["Closed/A.cs:4: Svd of Matrix", "Closed/A.cs:5: Inverse of Matrix"], model.FactorisationOffences());
        Assert.Empty(SourceModel.Of(("Numerics/A.cs", Calls)).FactorisationOffences());
    }

    [Fact]
    public void AmbientOffences_ConsoleClockAndSleep_AreReportedHoweverSpelt()
    {
        const string Source = """
            using static System.Console;
            class A
            {
                void Print() => Write('a');
                long Clock => System.DateTime.UtcNow.Ticks;
                void Wait() => Thread.Sleep(1);
            }
            """;
        Assert.Equal(
            [
                "Closed/A.cs:1: System.Console", "Closed/A.cs:4: System.Console.Write(char)", "Closed/A.cs:5: System.DateTime.UtcNow",
                "Closed/A.cs:6: System.Threading.Thread.Sleep(int)",
            ],
            SourceModel.Of(("Closed/A.cs", Source)).AmbientOffences());
    }

    [Fact]
    public void MutableStatics_FieldsAndSetters_AreReportedButNotConstants()
    {
        const string Source = """
            class A
            {
                const int C = 1; static readonly int R = 1; static int Get { get; } int own;
                static int Field;
                internal static int Property { get; set; }
            }
            """;
        Assert.Equal(["Closed/A.cs:4: A.Field", "Closed/A.cs:5: A.Property"], SourceModel.Of(("Closed/A.cs", Source)).MutableStatics());
    }

    private static void None(IReadOnlyList<string> offences) => Assert.True(offences.Count == 0, string.Join('\n', offences));
}
