using System.CommandLine;
using TmLab.Cli;
using TmLab.Cli.Commands;
using TmLab.Cli.Output;
using Xunit;

namespace TmLab.EndToEndTests.InProcess;

public sealed class CommandTreeTests
{
    private static readonly Command Root = MakeRoot();

    public static TheoryData<string> CommandNames => [.. Root.Subcommands.Select(c => c.Name)];

    [Theory]
    [MemberData(nameof(CommandNames))]
    public void The_example_of_a_command_is_a_command_line_without_errors(string name)
    {
        ToolCommand command = Find(name);
        ParseResult parse = Root.Parse(command.Example.Split(' ')[1..]);

        Assert.StartsWith("tmlab ", command.Example, StringComparison.Ordinal);
        Assert.Same(command, parse.CommandResult.Command);
        Assert.Empty(parse.Errors);
    }

    [Theory]
    [MemberData(nameof(CommandNames))]
    public void Every_command_argument_and_option_is_described_in_a_sentence(string name)
    {
        ToolCommand command = Find(name);
        IEnumerable<Symbol> symbols = [command, .. command.Arguments, .. command.Options, .. Root.Options];

        Assert.All(symbols, s => Assert.Matches(@"^[A-Z].*\.$", s.Description));
    }

    [Fact]
    public void No_two_options_share_a_name()
    {
        foreach (Command command in Root.Subcommands)
        {
            string[] names = [.. command.Options.Concat(Root.Options).SelectMany(o => o.Aliases.Append(o.Name))];
            Assert.Equal(names.Distinct(), names);
        }
    }

    private static ToolCommand Find(string name) => (ToolCommand)Root.Subcommands.Single(c => c.Name == name);

    private static Command MakeRoot()
    {
        var console = new ToolConsole(TextWriter.Null, new MessageChannel(TextWriter.Null, isTerminal: false));
        return CommandLine.CreateTree(new FakeStages(), new CommandRunner(console, CancellationToken.None));
    }
}
