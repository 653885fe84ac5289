using System.CommandLine;
using System.CommandLine.Invocation;

namespace TmLab.Cli.Help;

/// <summary><c>--version</c>: the program's name and version on one line.</summary>
internal sealed class VersionFlag : SynchronousCommandLineAction
{
    /// <summary>The version without build metadata.</summary>
    public static string Version { get; } = typeof(VersionFlag).Assembly.GetName().Version?.ToString(3) ?? "0.0.0";

    public override bool ClearsParseErrors => true;

    public static Option<bool> CreateOption() => new("--version") { Description = "Show the version.", Action = new VersionFlag() };

    public override int Invoke(ParseResult parseResult)
    {
        TextWriter output = parseResult.InvocationConfiguration.Output;
        output.WriteLine($"{CommandLine.ProgramName} {Version}");
        output.Flush();
        return 0;
    }
}
