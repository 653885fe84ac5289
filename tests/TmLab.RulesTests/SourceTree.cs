using System.Text.RegularExpressions;
using TmLab.TestKit;

namespace TmLab.RulesTests;

/// <summary>One source file: its path from the repository's root, with forward slashes, and its text.</summary>
internal sealed record SourceFile(string Name, string Text)
{
    /// <summary>The text without comments and the contents of strings, which name things without depending on them.</summary>
    public string Code => SourceTree.StripCommentsAndStrings(Text);
}

/// <summary>The files of the repository, without what builds and tests leave there.</summary>
internal static partial class SourceTree
{
    private static readonly HashSet<string> Left =
        ["bin", "obj", ".git", ".vs", ".idea", "artifacts", "TestResults", "demo-out", "BenchmarkDotNet.Artifacts"];

    /// <summary>All files of the repository.</summary>
    public static IEnumerable<string> AllFiles() => Walk(RepositoryFolder.Path);

    /// <summary>The C# files of one project of src, or of all.</summary>
    public static IEnumerable<SourceFile> Sources(string project = "") =>
        Walk(RepositoryFolder.Combine(project.Length == 0 ? "src" : $"src/{project}"))
            .Where(f => f.EndsWith(".cs", StringComparison.Ordinal))
            .Select(f => new SourceFile(NameOf(f), File.ReadAllText(f)));

    public static string NameOf(string file) => Path.GetRelativePath(RepositoryFolder.Path, file).Replace('\\', '/');

    public static string StripCommentsAndStrings(string text) => CommentOrString().Replace(text, m => m.Value.StartsWith('/') ? " " : "\"\"");

    private static IEnumerable<string> Walk(string folder) => Directory.EnumerateFiles(folder)
        .Where(f => !Left.Contains(Path.GetFileName(f)))
        .Concat(Directory.EnumerateDirectories(folder).Where(d => !Left.Contains(Path.GetFileName(d))).SelectMany(Walk));

    // Line comments, block comments, raw strings, verbatim strings, plain strings, characters.
    [GeneratedRegex("""
        //[^\n]*|/\*.*?\*/|\"{3,}.*?\"{3,}|@"(?:[^"]|"")*"|"(?:\\.|[^"\\\n])*"|'(?:\\.|[^'\\\n])+'
        """, RegexOptions.Singleline | RegexOptions.IgnorePatternWhitespace)]
    private static partial Regex CommentOrString();
}
