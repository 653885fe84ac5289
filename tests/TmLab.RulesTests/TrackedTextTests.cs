using Xunit;

namespace TmLab.RulesTests;

/// <summary>What is published names no machine on which it was written and no feed that it was built from.</summary>
public sealed class TrackedTextTests
{
    /// <summary>Written in pieces, so that this file does not find itself.</summary>
    private static readonly string[] Forbidden =
    [
        "/wo" + "rk/",
        "/ro" + "ot/",
        "/tm" + "p/",
        "/ho" + "me/",
        @"C:\Us" + "ers",
        "nuget" + ".org",
        "pypi" + ".org",
        "deb.debian" + ".org",
        "pythonhosted" + ".org",
    ];

    [Fact]
    public void No_text_file_names_a_machine_s_paths_or_a_feed()
    {
        string[] files = [.. SourceTree.AllFiles().Where(IsText)];
        Assert.True(files.Length > 60, "too few files were found");

        IEnumerable<string> found = files.SelectMany(f => Found(SourceTree.NameOf(f), File.ReadAllText(f)));
        Assert.Empty(found);
    }

    [Fact]
    public void The_search_finds_what_it_looks_for() =>
        Assert.Equal(["page.md, line 2: " + Forbidden[0]], Found("page.md", $"one\nsee {Forbidden[0]}x\n"));

    private static IEnumerable<string> Found(string name, string text) => text.Split('\n')
        .SelectMany((line, at) => Forbidden.Where(w => line.Contains(w, StringComparison.OrdinalIgnoreCase)).Select(w => $"{name}, line {at + 1}: {w}"));

    /// <summary>Text has no zero byte near its start.</summary>
    private static bool IsText(string file)
    {
        using FileStream stream = File.OpenRead(file);
        Span<byte> start = stackalloc byte[4096];
        int count = stream.ReadAtLeast(start, start.Length, throwOnEndOfStream: false);
        return !start[..count].Contains((byte)0);
    }
}
