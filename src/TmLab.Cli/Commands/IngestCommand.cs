using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Measurement;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab ingest FOLDER -o m.h5</c></summary>
internal sealed class IngestCommand : ToolCommand
{
    private readonly Argument<string> _folder = PathOptions.Input("FOLDER", "The measurement folder, with its measurement.json.");
    private readonly Option<string> _output = PathOptions.Output("The measurement file to write.");

    public IngestCommand(IStages stages, CommandRunner runner)
        : base("ingest", "Check a measurement folder and gather it into one measurement file.", "ingest data-demo -o m.h5")
    {
        Add(_folder);
        Add(_output);
        PathOptions.RefuseSamePath(this, _folder, _output);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    /// <summary>Does the stage and reports on it; also used by the commands that do all stages.</summary>
    public static IngestReport Execute(IStages stages, IngestRequest request, StageContext context)
    {
        (MeasurementFacts facts, double elapsedS) = Stopwatch.Time(() => stages.Ingest(request, context));
        return IngestReport.From(request.Folder, request.Output, facts, elapsedS);
    }

    private IngestRequest ReadRequest(ParseResult parse) => new(parse.GetRequiredValue(_folder), parse.GetRequiredValue(_output));
}
