using System.Collections.Immutable;
using System.Text.Json.Serialization;
using TmLab.Cli.Failures;
using TmLab.Cli.Output;

namespace TmLab.Cli.Reports;

/// <summary>
/// What a command found, as one immutable record with two forms: text for people, and JSON in which every public property is a
/// member. A property's name carries its unit. Renaming or removing one raises the schema's version.
/// </summary>
internal abstract record Report
{
    /// <summary>The name of what is reported.</summary>
    [JsonPropertyOrder(-2)]
    public string Schema => $"{CommandLine.ProgramName}.{Subject}";

    [JsonPropertyOrder(-1)]
    public virtual int SchemaVersion => 1;

    /// <summary>The command's word.</summary>
    protected abstract string Subject { get; }

    /// <summary>What a careful user should know, one sentence each.</summary>
    [JsonPropertyOrder(1)]
    public ImmutableArray<string> Warnings { get; init; } = [];

    /// <summary>The warnings to print: the report's own, and those of reports within it.</summary>
    [JsonIgnore]
    public virtual IEnumerable<string> AllWarnings => Warnings;

    /// <summary>The exit code of a command that ends with this report.</summary>
    [JsonIgnore]
    public virtual ExitCode ExitCode => ExitCode.Fine;

    /// <summary>Prints the text form.</summary>
    public abstract void WriteText(TextReport text);
}
