using TmLab.EndToEndTests.Running;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

public sealed class UsageTests
{
    /// <summary>Command lines that are wrong, and a piece of what must be said about each.</summary>
    public static TheoryData<string, string> WrongLines => new()
    {
        { "", "Required command was not provided" },
        { "ingset folder -o m.h5", "unknown command 'ingset'; did you mean 'ingest'?" },
        { "zzzzzz", "unknown command 'zzzzzz'" },
        { "ingest", "Required argument 'FOLDER' missing" },
        { "ingest folder", "Option '--output' is required" },
        { "ingest folder --ouput m.h5", "unknown option '--ouput'; did you mean '--output'?" },
        { "ingest --hepl", "unknown option '--hepl'; did you mean '--help'?" },
        { "ingest folder other -o m.h5", "unexpected argument 'other'" },
        { "ingest folder -o", "Required argument missing for option: '-o'" },
        { "ingest folder -o m.h5 --memory 2", "--memory 2: not a size" },
        { "ingest folder -o m.h5 --memory 1,5GiB", "--memory 1,5GiB: not a size" },
        { "ingest folder -o m.h5 --memory 1KiB", "--memory 1KiB: not a size of at least 16 MiB" },
        { "ingest folder -o m.h5 --threads 0", "--threads 0: not a number of threads" },
        { "ingest folder -o m.h5 --threads two", "--threads two: not a number of threads" },
        { "ingest folder -o m.h5 --engine gpu", "--engine gpu: not an engine" },
        { "ingest folder -o folder", "is the input itself" },
        { "reconstruct m.h5 -o ./m.h5", "is the input itself" },
        { "mask t.h5 -o mask.png", "Option '--focus' is required" },
        { "mask t.h5 --focus 24 -o mask.png", "--focus 24: not a pixel" },
        { "mask t.h5 --focus -1,2 -o mask.png", "unknown option '-1,2'" },
        { "mask t.h5 --focus 24,20 --focus 24,20 -o mask.png", "--focus 24,20: given twice" },
        { "mask t.h5 --focus 24,20 -o mask.gif", "--output mask.gif: a mask is written as .png or .bmp" },
    };

    [Theory]
    [MemberData(nameof(WrongLines))]
    public void A_wrong_command_line_is_explained_on_stderr_and_gives_2(string line, string expected)
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, line.Split(' ', StringSplitOptions.RemoveEmptyEntries));

        Assert.True(result.ExitCode == 2, result.ToString());
        Assert.Equal("", result.Stdout);
        Assert.Contains(expected, result.Stderr, StringComparison.Ordinal);
        Assert.Contains("--help' lists what can be given.", result.ErrorLines[^1], StringComparison.Ordinal);
        Assert.Empty(FolderTree.Entries(folder.Path));
    }

    [Fact]
    public void A_word_that_begins_with_at_is_a_file_name_and_not_a_file_of_words()
    {
        using var folder = new TemporaryFolder();
        File.WriteAllText(folder.File("words"), "about\n");

        ToolResult result = Tool.Run(folder, "@words");

        Assert.True(result.ExitCode == 2, result.ToString());
        Assert.Contains("unknown command '@words'", result.Stderr, StringComparison.Ordinal);
    }
}
