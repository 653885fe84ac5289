using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Measurement;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab simulate PLAN -o FOLDER</c></summary>
internal sealed class SimulateCommand : ToolCommand
{
    private readonly BenchOptions _bench = new();
    private readonly Argument<string> _plan = PathOptions.Input("PLAN", "A planned measurement folder, or any other; its frames are not looked at.");
    private readonly Option<string> _output = PathOptions.Output("The measurement folder to write, truth beside the frames.");

    private readonly Option<FrameStorageKind?> _frames = WordOption.Create(
        "--frames", "How the frames are stored (raw when not given).", ("raw", FrameStorageKind.Raw), ("tiff", FrameStorageKind.Tiff));

    public SimulateCommand(IStages stages, CommandRunner runner)
        : base("simulate", "Make the frames of a plan on a virtual bench, with the truth beside them.", "simulate plan --drift 0.45 --seed 7 -o measured")
    {
        Add(_plan);
        Add(_output);
        Add(_frames);
        _bench.AddTo(this);
        PathOptions.RefuseSamePath(this, _plan, _output);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    private static SimulateReport Execute(IStages stages, SimulateRequest request, StageContext context)
    {
        (SimulateOutcome outcome, double elapsedS) = Stopwatch.Time(() => stages.Simulate(request, context));
        return SimulateReport.From(request, outcome, elapsedS);
    }

    private SimulateRequest ReadRequest(ParseResult parse) => new(
        parse.GetRequiredValue(_plan), parse.GetRequiredValue(_output), parse.GetValue(_frames) ?? FrameStorageKind.Raw, _bench.Read(parse));
}
