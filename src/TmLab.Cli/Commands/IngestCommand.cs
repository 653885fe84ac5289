using System.CommandLine;
using System.CommandLine.Parsing;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Measurement;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab ingest FOLDER -o m.h5</c></summary>
internal sealed class IngestCommand : ToolCommand
{
    private readonly Argument<string> _folder = PathOptions.Input("FOLDER", "The measurement folder, with its measurement.json.");
    private readonly Option<string[]?> _merge = new("--merge")
    {
        Description = "Two folders of the same bench to be joined: the second fills in what the first lacks or lost.",
        HelpName = "FOLDER",
        Arity = new ArgumentArity(2, 2),
        AllowMultipleArgumentsPerToken = true,
    };

    private readonly Option<string> _output = PathOptions.Output("The measurement file to write.");

    public IngestCommand(IStages stages, CommandRunner runner)
        : base("ingest", "Check a measurement folder and gather it into one measurement file.", "ingest data-demo -o m.h5")
    {
        _folder.Arity = ArgumentArity.ZeroOrOne;
        Add(_folder);
        Add(_merge);
        Add(_output);
        PathOptions.RefuseSamePath(this, _folder, _output);
        Validators.Add(RequireOneInput);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    /// <summary>Does the stage and reports on it; also used by the commands that do all stages.</summary>
    public static IngestReport Execute(IStages stages, IngestRequest request, StageContext context)
    {
        (MeasurementFacts facts, double elapsedS) = Stopwatch.Time(() => stages.Ingest(request, context));
        return IngestReport.From(request.Folder, request.Output, facts, elapsedS);
    }

    private IngestRequest ReadRequest(ParseResult parse) => parse.GetValue(_merge) is [var first, var second]
        ? new IngestRequest(first, parse.GetRequiredValue(_output), second)
        : new IngestRequest(parse.GetValue(_folder)!, parse.GetRequiredValue(_output));

    private void RequireOneInput(CommandResult result)
    {
        bool hasFolder = result.GetResult(_folder) is { Tokens.Count: > 0 };
        bool merges = result.GetResult(_merge) is { Tokens.Count: > 0 };
        if (hasFolder == merges)
        {
            result.AddError(merges ? "give either FOLDER or --merge with two folders, not both" : "Required argument 'FOLDER' missing (or --merge with two folders)");
        }
    }
}
