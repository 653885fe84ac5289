using System.CommandLine;
using TmLab.Cli.Commands;
using TmLab.Cli.Failures;
using TmLab.Cli.Help;
using TmLab.Cli.Options;
using TmLab.Cli.Output;
using TmLab.Cli.Stages;

namespace TmLab.Cli;

/// <summary>The command tree, and the way from typed words to an exit code.</summary>
internal static class CommandLine
{
    /// <summary>The program's name as users type it; the file is called otherwise.</summary>
    public const string ProgramName = "tmlab";

    /// <summary>Parses and runs one command line.</summary>
    public static ExitCode Run(IReadOnlyList<string> arguments, IStages stages, ToolConsole console, CancellationToken cancellation)
    {
        try
        {
            return Invoke(Parse(arguments, stages, new CommandRunner(console, cancellation)), console);
        }
        catch (Exception exception)
        {
            // Failures of the work end in the runner; what comes here is a fault of the command line itself.
            var failure = Failure.From(exception);
            failure.Write(console.Messages, withTrace: true);
            return failure.ExitCode;
        }
    }

    private static ParseResult Parse(IReadOnlyList<string> arguments, IStages stages, CommandRunner runner)
    {
        // A word that begins with @ is a file name like any other, not a file of further words.
        var configuration = new ParserConfiguration { ResponseFileTokenReplacer = null };
        return CreateTree(stages, runner).Parse(arguments, configuration);
    }

    private static ExitCode Invoke(ParseResult parse, ToolConsole console)
    {
        if (UsageErrors.Any(parse) && parse.Action is not HelpWithExample)
        {
            UsageErrors.Write(parse, console.Messages);
            return ExitCode.Usage;
        }

        return (ExitCode)parse.Invoke(new InvocationConfiguration
        {
            Output = console.Out,
            Error = console.Messages.Writer,
            EnableDefaultExceptionHandler = false,
            ProcessTerminationTimeout = null,
        });
    }

    /// <summary>Makes the tree: every command is one line here and one file in Commands.</summary>
    public static Command CreateTree(IStages stages, CommandRunner runner)
    {
        var root = new Command(ProgramName, "From phase-stepped camera frames to transmission matrix, channels and focusing masks.");
        ToolCommand[] commands =
        [
            new DemoCommand(stages, runner),
            new PlanCommand(stages, runner),
            new SimulateCommand(stages, runner),
            new IngestCommand(stages, runner),
            new ReconstructCommand(stages, runner),
            new CheckCommand(stages, runner),
            new ChannelsCommand(stages, runner),
            new MaskCommand(stages, runner),
            new RunCommand(stages, runner),
            new ShowCommand(stages, runner),
            new AboutCommand(stages, runner),
        ];
        foreach (ToolCommand command in commands)
        {
            root.Add(command);
        }

        CommonOptions.AddTo(root);
        root.Add(HelpWithExample.CreateOption());
        root.Add(VersionFlag.CreateOption());
        return root;
    }
}
