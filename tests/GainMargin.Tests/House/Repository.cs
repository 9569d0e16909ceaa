namespace GainMargin.Tests.House;

/// <summary>Files of the repository and references of the running test.</summary>
internal static class Repository
{
    /// <summary>The folder of the solution.</summary>
    /// <remarks>Found from the test assembly: the build maps the source paths, so a caller file path leads nowhere.</remarks>
    public static string Root { get; } = FindRoot();

    /// <summary>Paths of the assemblies the running test may load.</summary>
    public static IReadOnlyList<string> Assemblies { get; }
        = ((string)AppContext.GetData("TRUSTED_PLATFORM_ASSEMBLIES")!).Split(Path.PathSeparator, StringSplitOptions.RemoveEmptyEntries);

    private static string FindRoot()
    {
        for (var folder = new DirectoryInfo(AppContext.BaseDirectory); folder is not null; folder = folder.Parent)
        {
            if (File.Exists(Path.Combine(folder.FullName, "GainMargin.sln")))
            {
                return folder.FullName;
            }
        }

        throw new DirectoryNotFoundException($"No folder above {AppContext.BaseDirectory} holds GainMargin.sln.");
    }
}
