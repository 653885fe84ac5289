using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab plan -o FOLDER</c></summary>
internal sealed class PlanCommand : ToolCommand
{
    private readonly PlanOptions _bench = new();
    private readonly Option<string> _output = PathOptions.Output("The measurement folder to write.");
    private readonly Option<string?> _patterns = File("--patterns", "The matrix of custom patterns, .npy (patterns × macro-pixels).");
    private readonly Option<string?> _lut = File("--lut", "The panel's grey-to-phase table, CSV (gray,phase_rad).");
    private readonly Option<string?> _flatness = File("--flatness", "The panel's flatness image, 8-bit PNG or BMP of its size.");
    private readonly Option<string?> _repair = File("--repair", "A matrix file: plan only the patterns that its measurement lost.");
    private readonly Option<string?> _measurement = File("--measurement", "The measurement file of --repair (the one that the matrix names when not given).");

    public PlanCommand(IStages stages, CommandRunner runner)
        : base("plan", "Plan a measurement: images, schedule, manifest, and what it should be worth.", "plan --grid 16x16 --drift 0.45 -o plan")
    {
        Add(_output);
        _bench.AddTo(this);
        Option<string?>[] files = [_patterns, _lut, _flatness, _repair, _measurement];
        foreach (Option<string?> file in files)
        {
            Add(file);
        }

        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, ReadRequest(parse), context)));
    }

    private static PlanReport Execute(IStages stages, PlanRequest request, StageContext context)
    {
        (PlanOutcome outcome, double elapsedS) = Stopwatch.Time(() => stages.Plan(request, context));
        return PlanReport.From(request.Output, outcome, elapsedS);
    }

    private static Option<string?> File(string name, string description) => new(name) { Description = description, HelpName = "FILE" };

    private PlanRequest ReadRequest(ParseResult parse) => new(
        parse.GetRequiredValue(_output),
        _bench.Read(parse),
        parse.GetValue(_patterns),
        parse.GetValue(_lut),
        parse.GetValue(_flatness),
        parse.GetValue(_repair),
        parse.GetValue(_measurement));
}
