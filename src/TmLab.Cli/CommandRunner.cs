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
        var context = new StageContext(settings, progress, cancellation)
        {
            Note = settings.Quiet ? _ => { } : console.Messages.Warning,
            Explain = settings.Verbose ? console.Messages.Detail : _ => { },
        };
        Report report = work(context);
        context.Explain($"peak memory {ByteSize.Format(PeakMemoryBytes())}");
        return report;
    }

    // Of the whole process, the runtime's own included; from the system's own account.
    private static long PeakMemoryBytes()
    {
        using var process = System.Diagnostics.Process.GetCurrentProcess();
        return process.PeakWorkingSet64;
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
