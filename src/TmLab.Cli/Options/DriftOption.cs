using System.CommandLine;
using TmLab.Matrix;

namespace TmLab.Cli.Options;

/// <summary>How <c>reconstruct</c> follows the phase drift.</summary>
internal static class DriftOption
{
    private static readonly Dictionary<string, DriftMethod> Words = new()
    {
        ["frames"] = DriftMethod.SmoothedPath,
        ["trackers"] = DriftMethod.TrackersInterpolated,
        ["none"] = DriftMethod.None,
    };

    public static Option<string> Create()
    {
        var option = new Option<string>("--drift")
        {
            Description = "How the phase drift is followed: in every frame (when not given), by the trackers alone, or not at all.",
            HelpName = string.Join('|', Words.Keys),
        };
        option.AcceptOnlyFromAmong([.. Words.Keys]);
        return option;
    }

    /// <summary>The way named; null for the default.</summary>
    public static DriftMethod? Read(ParseResult parse, Option<string> option) =>
        parse.GetValue(option) is string word ? Words[word] : null;
}
