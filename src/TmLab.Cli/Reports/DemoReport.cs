using TmLab.Cli.Output;

namespace TmLab.Cli.Reports;

/// <summary>The whole job on the shipped measurement.</summary>
internal sealed record DemoReport(RunReport Run) : Report
{
    protected override string Subject => "demo";

    public override IEnumerable<string> AllWarnings => Run.AllWarnings;

    public override void WriteText(TextReport text)
    {
        text.Line("The measurement is invented: the bench, the sample and the drift are simulated.");
        text.Blank();
        Run.WriteText(text);
        text.Line($"Look closer with '{CommandLine.ProgramName} show {Run.Reconstruct.Output}', or open the .h5 files with any HDF5 reader.");
    }
}
