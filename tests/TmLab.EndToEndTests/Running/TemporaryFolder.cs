namespace TmLab.EndToEndTests.Running;

/// <summary>A fresh folder that is gone after the test.</summary>
internal sealed class TemporaryFolder : IDisposable
{
    public string Path { get; } = Directory.CreateTempSubdirectory("tmlab-test-").FullName;

    public string Combine(string name) => System.IO.Path.Combine(Path, name);

    /// <summary>The names of all files and folders within, sorted.</summary>
    public IReadOnlyList<string> Entries =>
    [
        .. Directory.EnumerateFileSystemEntries(Path, "*", SearchOption.AllDirectories)
            .Select(e => System.IO.Path.GetRelativePath(Path, e).Replace('\\', '/'))
            .Order(StringComparer.Ordinal),
    ];

    public static void CopyTree(string from, string to)
    {
        Directory.CreateDirectory(to);
        foreach (string file in Directory.EnumerateFiles(from, "*", SearchOption.AllDirectories))
        {
            string target = System.IO.Path.Combine(to, System.IO.Path.GetRelativePath(from, file));
            Directory.CreateDirectory(System.IO.Path.GetDirectoryName(target)!);
            File.Copy(file, target);
        }
    }

    public void Dispose() => Directory.Delete(Path, recursive: true);
}
