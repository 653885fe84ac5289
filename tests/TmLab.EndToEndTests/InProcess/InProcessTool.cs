using TmLab.Cli;
using TmLab.Cli.Output;
using TmLab.Cli.Stages;
using TmLab.EndToEndTests.Running;

namespace TmLab.EndToEndTests.InProcess;

/// <summary>Runs a command line without a process, for what the real binary cannot be brought to do at will.</summary>
internal static class InProcessTool
{
    public static ToolResult Run(IStages stages, params string[] arguments)
    {
        using var output = new StringWriter();
        using var error = new StringWriter();
        using var console = new ToolConsole(output, new MessageChannel(error, isTerminal: false));
        int code = (int)CommandLine.Run(arguments, stages, console, TestCancellation);
        return new ToolResult(code, output.ToString(), error.ToString());
    }

    private static CancellationToken TestCancellation => Xunit.TestContext.Current.CancellationToken;
}
