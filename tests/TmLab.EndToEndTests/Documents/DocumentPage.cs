using System.Collections.Immutable;
using TmLab.TestKit;

namespace TmLab.EndToEndTests.Documents;

/// <summary>A fenced block of a page.</summary>
/// <param name="Language">The word behind the fence; empty when there is none.</param>
/// <param name="FirstLine">Number of its first line in the page, from 1.</param>
/// <param name="Lines">What stands between the fences.</param>
internal sealed record DocumentBlock(string Language, int FirstLine, ImmutableArray<string> Lines);

/// <summary>A Markdown page and its fenced blocks.</summary>
internal sealed record DocumentPage(string Name, ImmutableArray<DocumentBlock> Blocks)
{
    /// <summary>The word behind the fence of blocks that are run.</summary>
    public const string ShellLanguage = "sh";

    /// <summary>The blocks that are run, in order.</summary>
    public IEnumerable<DocumentBlock> ShellBlocks => Blocks.Where(b => b.Language == ShellLanguage);

    /// <summary>The pages whose commands are promised to work, relative to the repository.</summary>
    public static IEnumerable<string> Names()
    {
        string documents = RepositoryFolder.Combine("notebooks-free-docs");
        IEnumerable<string> pages = Directory.Exists(documents)
            ? Directory.EnumerateFiles(documents, "*.md", SearchOption.AllDirectories)
            : [];
        return pages
            .Select(p => Path.GetRelativePath(RepositoryFolder.Path, p).Replace('\\', '/'))
            .Concat(["README.md", "DEVELOPERS.md", "data-demo/README.md"])
            .Order(StringComparer.Ordinal);
    }

    public static DocumentPage Load(string name) => Parse(name, File.ReadAllLines(RepositoryFolder.Combine(name)));

    /// <summary>Finds the fences (CommonMark 0.31.2, section 4.5), also those indented within a list.</summary>
    public static DocumentPage Parse(string name, IReadOnlyList<string> lines)
    {
        var blocks = ImmutableArray.CreateBuilder<DocumentBlock>();
        int? open = null;
        for (int at = 0; at < lines.Count; at++)
        {
            if (!lines[at].TrimStart().StartsWith("```", StringComparison.Ordinal))
            {
                continue;
            }

            if (open is { } start)
            {
                blocks.Add(MakeBlock(lines, start, at));
            }

            open = open is null ? at : null;
        }

        return open is null
            ? new DocumentPage(name, blocks.ToImmutable())
            : throw new InvalidDataException($"{name}, line {open + 1}: the block is not closed");
    }

    private static DocumentBlock MakeBlock(IReadOnlyList<string> lines, int open, int close)
    {
        int indent = lines[open].Length - lines[open].TrimStart().Length;
        string language = lines[open].Trim().TrimStart('`').Trim();
        IEnumerable<string> content = lines.Skip(open + 1).Take(close - open - 1).Select(l => l[Math.Min(indent, l.Length - l.TrimStart().Length)..]);
        return new DocumentBlock(language, open + 2, [.. content]);
    }
}
