using TmLab.Cli.Stages;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab about</c></summary>
internal sealed class AboutCommand : ToolCommand
{
    public AboutCommand(IStages stages, CommandRunner runner)
        : base("about", "Say which version this is, what it runs on and which engines it found.", "about") =>
        SetAction(parse => (int)runner.Run(parse, _ => stages.DescribeProgram()));
}
