namespace TmLab.TestKit;

/// <summary>A folder of a test's own, deleted with all that is in it.</summary>
public sealed class TemporaryFolder : IDisposable
{
    /// <summary>Makes an empty folder.</summary>
    public TemporaryFolder() => Path = Directory.CreateTempSubdirectory("tmlab-test-").FullName;

    /// <summary>The folder.</summary>
    public string Path { get; }

    /// <summary>The names of the files in it, sorted.</summary>
    public IReadOnlyList<string> FileNames =>
        [.. Directory.GetFiles(Path).Select(f => System.IO.Path.GetFileName(f)).Order(StringComparer.Ordinal)];

    /// <summary>A name in it, which may stand in folders of its own.</summary>
    public string File(string name)
    {
        string path = System.IO.Path.Combine(Path, name);
        Directory.CreateDirectory(System.IO.Path.GetDirectoryName(path)!);
        return path;
    }

    /// <summary>Writes a text file and gives its full name.</summary>
    public string Write(string name, string text)
    {
        System.IO.File.WriteAllText(File(name), text);
        return File(name);
    }

    /// <inheritdoc/>
    public void Dispose() => Directory.Delete(Path, recursive: true);
}
