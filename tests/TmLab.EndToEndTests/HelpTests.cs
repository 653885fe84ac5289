using TmLab.EndToEndTests.Running;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

public sealed class HelpTests
{
    public static TheoryData<string> Commands => ["demo", "plan", "simulate", "ingest", "reconstruct", "channels", "mask", "run", "show", "about"];

    [Fact]
    public void The_program_s_help_lists_every_command_and_ends_with_an_example()
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, "--help");

        Assert.True(result.ExitCode == 0, result.ToString());
        Assert.Equal("", result.Stderr);
        Assert.All(Commands, command => Assert.Contains($"\n  {command.Data}", result.Stdout, StringComparison.Ordinal));
        AssertEndsWithExample(result.Stdout, "tmlab ");
    }

    [Theory]
    [MemberData(nameof(Commands))]
    public void The_help_of_a_command_ends_with_one_example_of_it(string command)
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, command, "--help");

        Assert.True(result.ExitCode == 0, result.ToString());
        Assert.Contains($"tmlab {command}", result.Stdout, StringComparison.Ordinal);
        Assert.Contains("--json", result.Stdout, StringComparison.Ordinal);
        AssertEndsWithExample(result.Stdout, $"tmlab {command}");
    }

    [Fact]
    public void The_version_is_one_line()
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, "--version");

        Assert.Equal(0, result.ExitCode);
        Assert.Matches(@"\Atmlab \d+\.\d+\.\d+\r?\n\z", result.Stdout);
    }

    private static void AssertEndsWithExample(string help, string start)
    {
        string[] lines = help.TrimEnd().Split('\n', StringSplitOptions.TrimEntries);
        Assert.Equal("Example:", lines[^2]);
        Assert.StartsWith(start, lines[^1], StringComparison.Ordinal);
    }
}
