namespace TmLab.TestKit;

/// <summary>The source tree that the running tests were built from.</summary>
public static class RepositoryFolder
{
    /// <summary>The folder that holds TmLab.sln, found upwards from the test program.</summary>
    public static string Path { get; } = Find();

    /// <summary>A path within the source tree, written with forward slashes.</summary>
    public static string Combine(string relative) => System.IO.Path.Combine([Path, .. relative.Split('/')]);

    private static string Find()
    {
        for (var folder = new DirectoryInfo(AppContext.BaseDirectory); folder is not null; folder = folder.Parent)
        {
            if (File.Exists(System.IO.Path.Combine(folder.FullName, "TmLab.sln")))
            {
                return folder.FullName;
            }
        }

        throw new DirectoryNotFoundException($"no folder above {AppContext.BaseDirectory} holds TmLab.sln");
    }
}
