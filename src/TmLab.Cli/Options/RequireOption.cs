using System.Collections.Immutable;
using System.CommandLine;
using System.Globalization;
using TmLab.Cli.Stages;

namespace TmLab.Cli.Options;

/// <summary>What <c>check</c> requires of a matrix: <c>--require fidelity=0.95</c>, once a quantity.</summary>
internal static class RequireOption
{
    private static readonly Dictionary<string, RequiredQuantity> Words = new()
    {
        ["fidelity"] = RequiredQuantity.Fidelity,
        ["enhancement"] = RequiredQuantity.Enhancement,
        ["snr"] = RequiredQuantity.Snr,
    };

    public static Option<string[]> Create()
    {
        var option = new Option<string[]>("--require")
        {
            Description = "End with exit code 4 unless the quantity reaches the value: fidelity, enhancement or snr. May be repeated.",
            HelpName = "QUANTITY=VALUE",
        };
        option.Validators.Add(result =>
        {
            foreach (string text in result.Tokens.Select(t => t.Value).Where(t => Parse(t) is null))
            {
                result.AddError($"--require {text}: write {string.Join(", ", Words.Keys.Select(w => w + "=VALUE"))} with a number for VALUE");
            }
        });
        return option;
    }

    public static ImmutableArray<Requirement> Read(ParseResult parse, Option<string[]> option) =>
        [.. (parse.GetValue(option) ?? []).Select(Parse).OfType<Requirement>()];

    private static Requirement? Parse(string text) =>
        text.Split('=') is [string word, string number]
        && Words.TryGetValue(word, out RequiredQuantity quantity)
        && double.TryParse(number, NumberStyles.Float, CultureInfo.InvariantCulture, out double value)
        && double.IsFinite(value)
            ? new Requirement(quantity, value)
            : null;
}
