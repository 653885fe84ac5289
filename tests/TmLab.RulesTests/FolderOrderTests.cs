using System.Text.RegularExpressions;
using TmLab.TestKit;
using Xunit;

namespace TmLab.RulesTests;

/// <summary>Inside TmLab data flows one way: a folder uses only those before it in the list, and Theory knows Numerics alone.</summary>
public sealed partial class FolderOrderTests
{
    private static readonly string[] Order =
    [
        "Failures", "Quantities", "Measurement", "Matrix", "Reconstruction", "Theory", "Channels", "Shaping", "Planning",
        "Simulation", "Summaries",
    ];

    public static TheoryData<string> Folders =>
        [.. Directory.EnumerateDirectories(RepositoryFolder.Combine("src/TmLab"))
            .Select(d => Path.GetFileName(d))
            .Where(d => d is not ("bin" or "obj"))
            .Order(StringComparer.Ordinal)];

    [Theory]
    [MemberData(nameof(Folders))]
    public void A_folder_uses_only_folders_before_it(string folder)
    {
        int place = Array.IndexOf(Order, folder);
        Assert.True(place >= 0, $"src/TmLab/{folder} has no place in the order of folders; give it one here and in the architecture page");
        HashSet<string> allowed = folder == "Theory" ? [folder] : [.. Order[..(place + 1)]];

        IEnumerable<string> wrong = SourceTree.Sources($"TmLab/{folder}")
            .SelectMany(f => FoldersUsed(f.Code).Where(u => !allowed.Contains(u)).Select(u => $"{f.Name} uses {u}"));
        Assert.Empty(wrong);
    }

    [Fact]
    public void Every_file_of_TmLab_lies_in_a_folder() =>
        Assert.Empty(Directory.EnumerateFiles(RepositoryFolder.Combine("src/TmLab"), "*.cs"));

    [Fact]
    public void A_namespace_says_the_folder()
    {
        IEnumerable<string> wrong = SourceTree.Sources()
            .Where(f => f.Name.Split('/')[^1] is not ("GlobalUsings.cs" or "AssemblyInfo.cs"))
            .Where(f => DeclaredNamespace().Match(f.Code).Groups[1].Value != ExpectedNamespace(f.Name))
            .Select(f => $"{f.Name}: namespace {DeclaredNamespace().Match(f.Code).Groups[1].Value}, expected {ExpectedNamespace(f.Name)}");
        Assert.Empty(wrong);
    }

    [Fact]
    public void The_scan_sees_usings_and_qualified_names()
    {
        const string Text = """
            using TmLab.Channels;
            // using TmLab.Planning;
            namespace TmLab.Matrix;
            class A { Failures.BadInputException? e; string s = "Simulation.Bench"; TmLab.Shaping.Mask m; }
            """;
        Assert.Equal(["Channels", "Failures", "Shaping"], FoldersUsed(SourceTree.StripCommentsAndStrings(Text)).Order());
    }

    private static IEnumerable<string> FoldersUsed(string code)
    {
        string withoutNamespace = DeclaredNamespace().Replace(code, " ");
        IEnumerable<string> full = FullName().Matches(withoutNamespace).Select(m => m.Groups[1].Value);
        IEnumerable<string> relative = RelativeName().Matches(withoutNamespace).Select(m => m.Groups[1].Value);
        return full.Concat(relative).Where(Order.Contains).Distinct();
    }

    private static string ExpectedNamespace(string name) => string.Join('.', name.Split('/')[1..^1]);

    [GeneratedRegex(@"^\s*namespace\s+([\w.]+)\s*[;{]", RegexOptions.Multiline)]
    private static partial Regex DeclaredNamespace();

    [GeneratedRegex(@"\bTmLab\.(\w+)")]
    private static partial Regex FullName();

    // "Failures.BadInputException" within namespace TmLab.*; a member access such as facts.Drift.X has a dot before it.
    [GeneratedRegex(@"(?<![.\w])(\w+)\.[A-Z]\w*")]
    private static partial Regex RelativeName();
}
