using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Stages;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab show FILE</c></summary>
internal sealed class ShowCommand : ToolCommand
{
    private readonly Argument<string> _input = PathOptions.Input("FILE", "A stage file: measurement, matrix or channels.");

    public ShowCommand(IStages stages, CommandRunner runner)
        : base("show", "Say what is in a stage file, in words and numbers.", "show t.h5")
    {
        Add(_input);
        SetAction(parse => (int)runner.Run(parse, context => stages.Describe(new ShowRequest(parse.GetRequiredValue(_input)), context)));
    }
}
