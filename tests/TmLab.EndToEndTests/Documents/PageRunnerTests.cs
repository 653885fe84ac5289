using Xunit;

namespace TmLab.EndToEndTests.Documents;

/// <summary>The test of the documents is itself tested: it must be able to fail.</summary>
public sealed class PageRunnerTests
{
    [Fact]
    public void Blocks_run_in_order_in_one_folder_and_other_languages_are_left_alone()
    {
        PageRunner.Outcome outcome = Run("""
            ```sh
            git clone https://example.org/somewhere/tm.git
            cd tm
            dotnet run -c Release --project src/TmLab.Cli -- about > about.txt
            ```
            Text between.
            ```json
            { "this": "is not run" }
            ```
            1. In a list:
               ```sh
               grep PureHDF about.txt   # a comment
               tmlab about --json | grep -q schema && dotnet test -c Release
               ```
            """);

        Assert.True(outcome.Result.ExitCode == 0, outcome.Result.ToString());
        Assert.Equal(["tmlab about", "tmlab about --json", "dotnet test -c Release"], outcome.CheckedCommands);
    }

    [Theory]
    [InlineData("tmlab abuot")]
    [InlineData("tmlab about --nothing")]
    [InlineData("tmlab about\nfalse")]
    [InlineData("tmlab abuot | cat")]
    [InlineData("dotnet run -c Release --project src/TmLab.Clli -- about")]
    [InlineData("dotnet run -c Release -- about")]
    [InlineData("dotnet test --project tests/TmLab.Testss")]
    [InlineData("dotnet tset")]
    [InlineData("git clnoe x")]
    [InlineData("cat no-such-file")]
    public void A_command_that_fails_or_is_misspelt_fails_the_page(string commands) =>
        Assert.NotEqual(0, Run($"```sh\n{commands}\n```").Result.ExitCode);

    [Fact]
    public void A_block_without_an_end_is_found() =>
        Assert.Throws<InvalidDataException>(() => DocumentPage.Parse("page.md", ["```sh", "tmlab about"]));

    [Fact]
    public void A_command_in_a_block_of_another_language_is_found()
    {
        DocumentPage page = DocumentPage.Parse("page.md", ["text", "```", "$ tmlab about", "tmlab: a message", "```", "```sh", "tmlab about", "```"]);
        Assert.Equal(["page.md, line 3: $ tmlab about"], DocumentTests.HiddenCommands(page));
    }

    private static PageRunner.Outcome Run(string markdown)
    {
        Assert.SkipWhen(OperatingSystem.IsWindows(), "the pages' commands are written for a POSIX shell");
        return PageRunner.Run(DocumentPage.Parse("page.md", markdown.ReplaceLineEndings("\n").Split('\n')));
    }
}
