using System.Collections.Immutable;
using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Quantities;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab mask t.h5 --focus 24,20 -o mask.png</c></summary>
internal sealed class MaskCommand : ToolCommand
{
    private readonly Argument<string> _input = PathOptions.Input("MATRIX", "The matrix file that 'reconstruct' wrote.");
    private readonly Option<string> _output = PathOptions.Output("The image to write, .png or .bmp; a .json goes beside it.");
    private readonly Option<ImmutableArray<CameraPixel>> _focus =
        FocusOption.Create(required: true, "A camera pixel to focus on: column,row of the camera region, from 0. May be repeated.");

    public MaskCommand(IStages stages, CommandRunner runner)
        : base("mask", "Write the modulator image that focuses light on camera pixels.", "mask t.h5 --focus 24,20 -o mask.png")
    {
        Add(_input);
        Add(_focus);
        Add(_output);
        _output.Validators.Add(result => RefuseOtherFormats(result.Tokens.Select(t => t.Value).LastOrDefault(), result.AddError));
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    /// <summary>Does the stage and reports on it; also used by the commands that do all stages.</summary>
    public static MaskReport Execute(IStages stages, MaskRequest request, StageContext context)
    {
        (MaskOutcome outcome, double elapsedS) = Stopwatch.Time(() => stages.MakeMask(request, context));
        return MaskReport.From(request.Input, outcome, elapsedS);
    }

    private static void RefuseOtherFormats(string? name, Action<string> refuse)
    {
        string extension = Path.GetExtension(name ?? "").ToLowerInvariant();
        if (extension is not (".png" or ".bmp"))
        {
            refuse($"--output {name}: a mask is written as .png or .bmp; give the name one of these endings");
        }
    }

    private MaskRequest ReadRequest(ParseResult parse) =>
        new(parse.GetRequiredValue(_input), FocusOption.Read(parse, _focus), parse.GetRequiredValue(_output));
}
