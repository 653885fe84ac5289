using System.CommandLine;
using System.CommandLine.Parsing;
using TmLab.Cli.Help;
using TmLab.Cli.Output;

namespace TmLab.Cli.Failures;

/// <summary>Says what is wrong with a command line, the nearest known word, and where the help is. Everything goes to stderr.</summary>
internal static class UsageErrors
{
    /// <summary>Whether the words cannot be run as they are.</summary>
    public static bool Any(ParseResult parse) => parse.Errors.Count > 0 || UnknownOptions(parse).Any();

    public static void Write(ParseResult parse, MessageChannel messages)
    {
        foreach (string line in Lines(parse))
        {
            messages.Error(line);
        }

        messages.Detail($"'{CommandPath(parse)} --help' lists what can be given.");
    }

    /// <summary>
    /// Causes before consequences: an unknown option makes its value look like a surplus argument, an unknown command makes all
    /// that follows it look wrong.
    /// </summary>
    private static IEnumerable<string> Lines(ParseResult parse)
    {
        Command command = parse.CommandResult.Command;
        bool commandMissing = command.Subcommands.Count > 0 && parse.UnmatchedTokens is [var first, ..] && !first.StartsWith('-');
        string[] options = [.. UnknownOptions(parse)];
        if (options.Length > 0 && !commandMissing)
        {
            return options.Select(o => Unknown(command, o));
        }

        return parse.UnmatchedTokens.Count > 0
            ? [Unknown(command, parse.UnmatchedTokens[0])]
            : parse.Errors.Select(e => e.Message.TrimEnd('.')).Distinct();
    }

    /// <summary>
    /// Words that look like options and were taken for something else: the parser would accept a mistyped option as a file name.
    /// Behind a lone -- everything is a name.
    /// </summary>
    private static IEnumerable<string> UnknownOptions(ParseResult parse) => parse.Tokens
        .TakeWhile(t => t.Type != TokenType.DoubleDash)
        .Where(t => t.Type == TokenType.Argument && t.Value.Length > 1 && t.Value.StartsWith('-'))
        .Select(t => t.Value);

    private static string Unknown(Command command, string token)
    {
        bool isOption = token.StartsWith('-');
        bool wantsCommand = command.Subcommands.Count > 0;
        string what = isOption ? "unknown option" : wantsCommand ? "unknown command" : "unexpected argument";
        string? nearest = NearestWord.Find(token, isOption ? OptionNames(command) : command.Subcommands.Select(c => c.Name));
        return nearest is null ? $"{what} '{token}'" : $"{what} '{token}'; did you mean '{nearest}'?";
    }

    private static IEnumerable<string> OptionNames(Command command)
    {
        IEnumerable<Option> inherited = command.Parents.OfType<Command>().SelectMany(c => c.Options).Where(o => o.Recursive);
        return command.Options.Concat(inherited).SelectMany(o => o.Aliases.Append(o.Name)).Where(n => n.StartsWith("--", StringComparison.Ordinal));
    }

    private static string CommandPath(ParseResult parse)
    {
        Command command = parse.CommandResult.Command;
        return command.Name == CommandLine.ProgramName ? command.Name : $"{CommandLine.ProgramName} {command.Name}";
    }
}
