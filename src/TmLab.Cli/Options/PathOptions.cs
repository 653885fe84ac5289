using System.CommandLine;
using System.CommandLine.Parsing;

namespace TmLab.Cli.Options;

/// <summary>Input and output names. They stay strings, so that messages show them as the user typed them.</summary>
internal static class PathOptions
{
    public static Argument<string> Input(string name, string description)
    {
        var argument = new Argument<string>(name) { Description = description };
        argument.Validators.Add(result => RefuseEmpty(result, name));
        return argument;
    }

    public static Option<string> Output(string description, bool required = true)
    {
        var option = new Option<string>("--output", "-o") { Description = description, HelpName = "PATH", Required = required };
        option.Validators.Add(result => RefuseEmpty(result, "--output"));
        return option;
    }

    /// <summary>Makes it a usage error to name the input as the output.</summary>
    public static void RefuseSamePath(Command command, Argument<string> input, Option<string> output) =>
        command.Validators.Add(result =>
        {
            string? from = Word(result.GetResult(input));
            string? to = Word(result.GetResult(output));
            if (!string.IsNullOrEmpty(from) && !string.IsNullOrEmpty(to) && Path.GetFullPath(from) == Path.GetFullPath(to))
            {
                result.AddError($"--output {to}: is the input itself; stage files are never edited, so name another file");
            }
        });

    /// <summary>What was typed. Asking for the value would throw where the word is missing.</summary>
    private static string? Word(SymbolResult? result) => result is { Tokens: [.., var last] } ? last.Value : null;

    private static void RefuseEmpty(SymbolResult result, string name)
    {
        if (result.Tokens.Any(t => string.IsNullOrWhiteSpace(t.Value)))
        {
            result.AddError($"{name}: the name is empty");
        }
    }
}
