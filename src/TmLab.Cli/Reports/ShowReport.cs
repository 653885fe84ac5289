using System.Collections.Immutable;
using TmLab.Cli.Output;

namespace TmLab.Cli.Reports;

/// <summary>What is in a stage file.</summary>
internal sealed record ShowReport(
    string File,
    string Format,
    int FormatVersion,
    string CreatedUtc,
    string ToolVersion,
    string? ParentSha256,
    string Settings,
    ImmutableArray<FactSection> Facts,
    ImmutableArray<DatasetSection> Datasets) : Report
{
    protected override string Subject => "show";

    public override void WriteText(TextReport text)
    {
        text.Heading($"{File}: {Format}, version {FormatVersion}");
        text.Row("written", $"{CreatedUtc} by {CommandLine.ProgramName} {ToolVersion}");
        text.Row("made from", ParentSha256 is null ? "camera frames" : $"the file with SHA-256 {ParentSha256}");
        Facts.ToList().ForEach(f => text.Row(f.Name, f.Value));
        text.Blank();
        text.Heading("Datasets");
        text.Rows([.. Datasets.Select(d => (d.Path, $"{d.Type} ({string.Join(", ", d.Shape)}) {d.Units}".TrimEnd()))]);
    }
}

/// <summary>One figure in words.</summary>
internal sealed record FactSection(string Name, string Value);

/// <summary>One dataset of a file.</summary>
internal sealed record DatasetSection(string Path, string Type, ImmutableArray<long> Shape, string Units);
