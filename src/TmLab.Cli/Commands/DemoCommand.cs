using System.CommandLine;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Failures;

namespace TmLab.Cli.Commands;

/// <summary><c>tmlab demo</c></summary>
internal sealed class DemoCommand : ToolCommand
{
    /// <summary>The shipped measurement, which the build copies beside the program.</summary>
    private const string MeasurementFolder = "data-demo";

    private const string DefaultOutput = "demo-out";

    private readonly Option<string> _output =
        PathOptions.Output($"The folder to write to. When not given, {DefaultOutput}, where an earlier demonstration is replaced.", required: false);

    public DemoCommand(IStages stages, CommandRunner runner)
        : base("demo", "Do the whole job on the small invented measurement that is shipped with the program.", "demo")
    {
        Add(_output);
        SetAction(parse => (int)runner.Run(parse, context => Execute(stages, parse.GetValue(_output), context)));
    }

    private static DemoReport Execute(IStages stages, string? output, StageContext context)
    {
        string folder = Path.Combine(AppContext.BaseDirectory, MeasurementFolder);
        if (!Directory.Exists(folder))
        {
            throw new BadInputException(folder, null, "the shipped measurement is missing", "install or build the program again");
        }

        StageContext own = output is null ? context with { Settings = context.Settings with { Force = true } } : context;
        return new DemoReport(AllStages.Execute(stages, new RunRequest(folder, output ?? DefaultOutput, []), own));
    }
}
