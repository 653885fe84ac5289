using System.Collections.Immutable;
using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Stages;
using TmLab.Quantities;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab run FOLDER -o OUT</c></summary>
internal sealed class RunCommand : ToolCommand
{
    private readonly Argument<string> _folder = PathOptions.Input("FOLDER", "The measurement folder, with its measurement.json.");
    private readonly Option<string> _output = PathOptions.Output("The folder to write to; it is made when it does not exist.");
    private readonly Option<ImmutableArray<CameraPixel>> _focus =
        FocusOption.Create(required: false, "A camera pixel for the mask to focus on (the centre when not given). May be repeated.");

    public RunCommand(IStages stages, CommandRunner runner)
        : base("run", "Do all stages: measurement folder in, matrix, channels and a focusing mask out.", "run data-demo -o out")
    {
        Add(_folder);
        Add(_focus);
        Add(_output);
        PathOptions.RefuseSamePath(this, _folder, _output);
        SetAction(parse => (int)runner.Run(parse, context => AllStages.Execute(stages, ReadRequest(parse), context)));
    }

    private RunRequest ReadRequest(ParseResult parse) =>
        new(parse.GetRequiredValue(_folder), parse.GetRequiredValue(_output), FocusOption.Read(parse, _focus));
}
