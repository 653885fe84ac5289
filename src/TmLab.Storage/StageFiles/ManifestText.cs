using System.Text.Json;
using System.Text.Json.Serialization;
using TmLab.Measurement;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>The manifest inside a measurement file: JSON with the member names of <see cref="MeasurementManifest"/>, exact in every number.</summary>
internal static class ManifestText
{
    private static readonly JsonSerializerOptions s_options = new()
    {
        PropertyNamingPolicy = JsonNamingPolicy.SnakeCaseLower,
        Converters = { new JsonStringEnumConverter(JsonNamingPolicy.KebabCaseLower) },
        NumberHandling = JsonNumberHandling.AllowNamedFloatingPointLiterals,
        IgnoreReadOnlyProperties = true,
        WriteIndented = true,
    };

    /// <summary>Writes a manifest as text.</summary>
    public static string Write(MeasurementManifest manifest) => JsonSerializer.Serialize(manifest, s_options);

    /// <summary>Reads a manifest from text.</summary>
    /// <exception cref="Failures.BadInputException">The text is none.</exception>
    public static MeasurementManifest Read(string file, string place, string text) => DamagedFiles.Guard(
        file,
        place,
        () => JsonSerializer.Deserialize<MeasurementManifest>(text, s_options)
            ?? throw DamagedFiles.Damaged(file, place, "holds no manifest"));
}
