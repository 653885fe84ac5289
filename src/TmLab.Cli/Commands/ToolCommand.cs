using System.CommandLine;

namespace TmLab.Cli.Commands;

/// <summary>A command with the example that ends its help.</summary>
internal abstract class ToolCommand(string name, string description, string example) : Command(name, description)
{
    /// <summary>A complete command line that can be copied.</summary>
    public string Example { get; } = $"{CommandLine.ProgramName} {example}";
}
