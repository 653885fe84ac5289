using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>Turns the paths of a manifest, which are relative to its folder, into full ones that stay within it.</summary>
/// <param name="folder">The manifest's folder.</param>
/// <param name="allowOutside">Whether paths may leave the folder.</param>
/// <param name="problems">Takes what is wrong.</param>
internal sealed class ManifestPaths(string folder, bool allowOutside, ProblemList problems)
{
    private readonly string _root = Path.TrimEndingDirectorySeparator(Path.GetFullPath(folder));

    /// <summary>The full path; null with a problem when it is empty, no path at all, or leaves the folder after normalisation.</summary>
    public string? Resolve(string path, string key)
    {
        // Manifests written on Windows separate folders by backslashes.
        string portable = path.Replace('\\', '/');
        if (portable.Length == 0 || portable.Contains('\0', StringComparison.Ordinal))
        {
            problems.Add(key, "the path is empty or holds a zero character", "name a file in the manifest's folder");
            return null;
        }

        string full = Path.GetFullPath(Path.Combine(_root, portable));
        bool isDrive = portable.Length > 1 && portable[1] == ':';
        bool isInside = !isDrive && full.StartsWith(_root + Path.DirectorySeparatorChar, StringComparison.Ordinal);
        if (isInside || allowOutside)
        {
            return full;
        }

        problems.Add(key, $"the path \"{path}\" leaves the manifest's folder", "keep all files of a measurement in its folder, or allow paths outside it");
        return null;
    }
}
