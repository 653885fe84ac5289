using System.CommandLine;
using TmLab.Cli.Failures;
using TmLab.Cli.Options;
using TmLab.Cli.Output;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;

namespace TmLab.Cli;

/// <summary>Runs a command's work between its parsed words and its exit code: progress, result, failure.</summary>
internal sealed class CommandRunner(ToolConsole console, CancellationToken cancellation)
{
    /// <summary>Does the work and prints its report; every failure ends here.</summary>
    public ExitCode Run(ParseResult parse, Func<StageContext, Report> work)
    {
        CommonSettings settings = CommonOptions.Read(parse);
        try
        {
            Report report = WithProgress(settings, work);
            Print(report, settings);
            return report.ExitCode;
        }
        catch (Exception exception)
        {
            Failure failure = Failure.From(exception);
            failure.Write(console.Messages, settings.Verbose);
            return failure.ExitCode;
        }
    }

    private Report WithProgress(CommonSettings settings, Func<StageContext, Report> work)
    {
        using ProgressDisplay? progress = settings.Quiet ? null : new ProgressDisplay(console.Messages, TimeProvider.System);
        return work(new StageContext(settings, progress, cancellation));
    }

    private void Print(Report report, CommonSettings settings)
    {
        if (settings.Json)
        {
            console.Out.WriteLine(ReportJson.Write(report));
        }
        else
        {
            report.WriteText(new TextReport(console.Out));
        }

        console.Out.Flush();
        if (!settings.Quiet)
        {
            report.AllWarnings.ToList().ForEach(console.Messages.Warning);
        }
    }
}
