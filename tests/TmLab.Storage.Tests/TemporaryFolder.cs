namespace TmLab.Storage.Tests;

/// <summary>A folder that is removed with everything in it when the test is over.</summary>
internal sealed class TemporaryFolder : IDisposable
{
    public string Path { get; } = Directory.CreateTempSubdirectory("tmlab-test-").FullName;

    public string File(string name)
    {
        string path = System.IO.Path.Combine(Path, name);
        Directory.CreateDirectory(System.IO.Path.GetDirectoryName(path)!);
        return path;
    }

    public string Write(string name, string text)
    {
        System.IO.File.WriteAllText(File(name), text);
        return File(name);
    }

    public void Dispose() => Directory.Delete(Path, recursive: true);
}
