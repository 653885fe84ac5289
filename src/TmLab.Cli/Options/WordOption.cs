using System.CommandLine;

namespace TmLab.Cli.Options;

/// <summary>An option that takes one of a few words.</summary>
internal static class WordOption
{
    /// <summary>One of the words; without a default the value is null when the option is not given.</summary>
    public static Option<T?> Create<T>(string name, string description, params (string Word, T Value)[] choices)
        where T : struct => new(name)
    {
        Description = description,
        HelpName = string.Join('|', choices.Select(c => c.Word)),
        CustomParser = result =>
        {
            string text = result.Tokens[0].Value;
            int at = Array.FindIndex(choices, c => c.Word == text);
            if (at >= 0)
            {
                return choices[at].Value;
            }

            result.AddError($"{name} {text}: not one of {string.Join(", ", choices.Select(c => c.Word))}");
            return null;
        },
    };
}
