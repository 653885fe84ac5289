using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Matrix;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab reconstruct m.h5 -o t.h5</c></summary>
internal sealed class ReconstructCommand : ToolCommand
{
    private readonly Argument<string> _input = PathOptions.Input("MEASUREMENT", "The measurement file that 'ingest' wrote.");
    private readonly Option<string> _output = PathOptions.Output("The matrix file to write.");
    private readonly Option<string> _drift = DriftOption.Create();

    public ReconstructCommand(IStages stages, CommandRunner runner)
        : base("reconstruct", "Turn a measurement into its transmission matrix, with the drift removed.", "reconstruct m.h5 -o t.h5")
    {
        Add(_input);
        Add(_output);
        Add(_drift);
        PathOptions.RefuseSamePath(this, _input, _output);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    /// <summary>Does the stage and reports on it; also used by the commands that do all stages.</summary>
    public static ReconstructReport Execute(IStages stages, ReconstructRequest request, StageContext context)
    {
        (TransmissionMatrixFacts facts, double elapsedS) = Stopwatch.Time(() => stages.Reconstruct(request, context));
        return ReconstructReport.From(request.Input, request.Output, facts, elapsedS);
    }

    private ReconstructRequest ReadRequest(ParseResult parse) =>
        new(parse.GetRequiredValue(_input), parse.GetRequiredValue(_output), DriftOption.Read(parse, _drift));
}
