using System.Collections.Immutable;
using System.Text.Json;
using System.Text.Json.Serialization;
using TmLab.Cli.Help;
using TmLab.Storage.StageFiles;

namespace TmLab.Cli.Stages;

/// <summary>Where an output comes from: the files read, all settings, this program's version, the time.</summary>
internal static class Provenance
{
    private static readonly JsonSerializerOptions Format = new()
    {
        PropertyNamingPolicy = JsonNamingPolicy.SnakeCaseLower,
        NumberHandling = JsonNumberHandling.AllowNamedFloatingPointLiterals,
        Converters = { new JsonStringEnumConverter(JsonNamingPolicy.SnakeCaseLower) },
    };

    /// <summary>Begins to digest the parents and writes down the settings.</summary>
    /// <param name="context">For cancellation.</param>
    /// <param name="parents">Files that the stage reads.</param>
    /// <param name="settings">All that the stage was told.</param>
    public static StageProvenance Of(StageContext context, ImmutableArray<string> parents, object settings) => StageProvenance.OfFiles(
        parents,
        JsonSerializer.Serialize(settings, settings.GetType(), Format),
        VersionFlag.Version,
        TimeProvider.System.GetUtcNow(),
        context.Cancellation);
}
