using System.CommandLine;
using System.CommandLine.Help;
using System.CommandLine.Invocation;
using TmLab.Cli.Commands;

namespace TmLab.Cli.Help;

/// <summary>The generated help, followed by one example that can be copied.</summary>
internal sealed class HelpWithExample(HelpAction help) : SynchronousCommandLineAction
{
    private const string RootExample = CommandLine.ProgramName + " run data-demo -o out";

    public override bool ClearsParseErrors => true;

    public static HelpOption CreateOption()
    {
        var option = new HelpOption("--help", "-h", "-?") { Description = "Show this help." };
        option.Action = new HelpWithExample((HelpAction)option.Action!);
        return option;
    }

    public override int Invoke(ParseResult parseResult)
    {
        help.Invoke(parseResult);
        string example = parseResult.CommandResult.Command is ToolCommand command ? command.Example : RootExample;
        TextWriter output = parseResult.InvocationConfiguration.Output;
        output.WriteLine("Example:");
        output.WriteLine($"  {example}");
        output.Flush();
        return 0;
    }
}
