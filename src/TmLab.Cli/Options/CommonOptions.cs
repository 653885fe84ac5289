using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using TmLab.Numerics.LinearAlgebra;

namespace TmLab.Cli.Options;

/// <summary>The options that every command takes, defined once.</summary>
internal static class CommonOptions
{
    private static readonly Option<bool> Force = Flag("--force", "Overwrite outputs that exist.");
    private static readonly Option<bool> Json = Flag("--json", "Print the result as one JSON object.");
    private static readonly Option<bool> Quiet = Flag("--quiet", "Print no progress and no warnings.");
    private static readonly Option<bool> Verbose = Flag("--verbose", "Say what was chosen and why, and print the trace of a failure.");

    private static readonly Option<long?> Memory = new("--memory")
    {
        Description = "Working memory to stay within, such as 512MiB or 2GiB (a quarter of the machine's when not given).",
        HelpName = "SIZE",
        Recursive = true,
        CustomParser = ParseMemory,
    };

    private static readonly Option<EngineChoice> Engine = new("--engine")
    {
        Description = "Linear-algebra engine (auto when not given: native where found).",
        HelpName = "auto|managed|native",
        Recursive = true,
        CustomParser = ParseEngine,
    };

    private static readonly Option<int?> Threads = new("--threads")
    {
        Description = "Number of threads (all processors when not given).",
        HelpName = "COUNT",
        Recursive = true,
        CustomParser = ParseThreads,
    };

    /// <summary>Adds all of them to the root, from which every command inherits them.</summary>
    public static void AddTo(Command root)
    {
        Option[] options = [Force, Json, Quiet, Verbose, Memory, Engine, Threads];
        foreach (Option option in options)
        {
            root.Add(option);
        }
    }

    /// <summary>What was given, typed.</summary>
    public static CommonSettings Read(ParseResult parse) => new(
        parse.GetValue(Force),
        parse.GetValue(Json),
        parse.GetValue(Quiet),
        parse.GetValue(Verbose),
        parse.GetValue(Memory),
        parse.GetValue(Engine),
        parse.GetValue(Threads));

    private static Option<bool> Flag(string name, string description) => new(name) { Description = description, Recursive = true };

    private static EngineChoice ParseEngine(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        EngineChoice? choice = text switch
        {
            "auto" => EngineChoice.Auto,
            "managed" => EngineChoice.Managed,
            "native" => EngineChoice.Native,
            _ => null,
        };
        if (choice is null)
        {
            result.AddError($"--engine {text}: not an engine; write auto, managed or native");
        }

        return choice ?? EngineChoice.Auto;
    }

    private static long? ParseMemory(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        if (ByteSize.TryParse(text, out long bytes))
        {
            return bytes;
        }

        result.AddError($"--memory {text}: not a size of at least {ByteSize.Format(ByteSize.SmallestWorkingMemory)}; write it like 512MiB or 2GiB");
        return null;
    }

    private static int? ParseThreads(ArgumentResult result)
    {
        string text = result.Tokens[0].Value;
        if (int.TryParse(text, NumberStyles.None, CultureInfo.InvariantCulture, out int count) && count is >= 1 and <= 4096)
        {
            return count;
        }

        result.AddError($"--threads {text}: not a number of threads; write a whole number from 1 to 4096");
        return null;
    }
}
