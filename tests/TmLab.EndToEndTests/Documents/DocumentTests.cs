using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests.Documents;

public sealed class DocumentTests
{
    public static TheoryData<string> Pages => [.. DocumentPage.Names()];

    [Theory]
    [MemberData(nameof(Pages))]
    public void Every_command_block_of_a_page_works(string name)
    {
        Assert.SkipWhen(OperatingSystem.IsWindows(), "the pages' commands are written for a POSIX shell");
        Assert.True(File.Exists(RepositoryFolder.Combine(name)), $"{name} is missing");
        DocumentPage page = DocumentPage.Load(name);
        if (!page.ShellBlocks.Any())
        {
            return;
        }

        PageRunner.Outcome outcome = PageRunner.Run(page);

        Assert.True(outcome.Result.ExitCode == 0, $"{name}: {outcome.Result}");
        Assert.True(outcome.CheckedCommands.Count > 0, $"{name} has command blocks, but no command in them is one that is checked");
    }

    [Theory]
    [MemberData(nameof(Pages))]
    public void No_command_hides_in_a_block_that_is_not_run(string name)
    {
        Assert.True(File.Exists(RepositoryFolder.Combine(name)), $"{name} is missing");
        Assert.Empty(HiddenCommands(DocumentPage.Load(name)));
    }

    [Fact]
    public void The_readme_s_two_commands_are_among_the_checked_ones()
    {
        string[] lines = [.. DocumentPage.Load("README.md").ShellBlocks.SelectMany(b => b.Lines)];
        Assert.Contains(lines, l => l.StartsWith("dotnet run -c Release --project src/TmLab.Cli -- demo", StringComparison.Ordinal));
        Assert.Contains(lines, l => l.StartsWith("dotnet test -c Release", StringComparison.Ordinal));
    }

    internal static IEnumerable<string> HiddenCommands(DocumentPage page) => page.Blocks
        .Where(b => b.Language != DocumentPage.ShellLanguage)
        .SelectMany(b => b.Lines.Select((text, at) => (Text: text.Trim(), Number: b.FirstLine + at)))
        .Where(l => l.Text.TrimStart('$', ' ') is var t
            && (t.StartsWith("tmlab ", StringComparison.Ordinal) || t.StartsWith("dotnet ", StringComparison.Ordinal)))
        .Select(l => $"{page.Name}, line {l.Number}: {l.Text}");
}
