namespace TmLab.EndToEndTests.Running;

/// <summary>Whole folders.</summary>
internal static class FolderTree
{
    /// <summary>The names of all files and folders within, sorted.</summary>
    public static IReadOnlyList<string> Entries(string folder) =>
    [
        .. Directory.EnumerateFileSystemEntries(folder, "*", SearchOption.AllDirectories)
            .Select(e => Path.GetRelativePath(folder, e).Replace('\\', '/'))
            .Order(StringComparer.Ordinal),
    ];

    public static void Copy(string from, string to)
    {
        Directory.CreateDirectory(to);
        foreach (string file in Directory.EnumerateFiles(from, "*", SearchOption.AllDirectories))
        {
            string target = Path.Combine(to, Path.GetRelativePath(from, file));
            Directory.CreateDirectory(Path.GetDirectoryName(target)!);
            File.Copy(file, target);
        }
    }
}
