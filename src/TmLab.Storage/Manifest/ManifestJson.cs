using System.Buffers;
using System.Text;
using System.Text.Json;
using System.Text.Unicode;
using TmLab.Failures;
using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary><c>measurement.json</c> as text: read strictly, written so that it reads back to the same record.</summary>
public static class ManifestJson
{
    /// <summary>The manifest's name in a measurement folder.</summary>
    public const string FileName = "measurement.json";

    /// <summary>The largest manifest that is read, bytes.</summary>
    public const int LargestBytes = 16 * 1024 * 1024;

    /// <summary>Reads a manifest from text; see <see cref="Parse(ReadOnlyMemory{byte}, string)"/>.</summary>
    public static MeasurementManifest Parse(string json, string file) => Parse(Encoding.UTF8.GetBytes(json), file);

    /// <summary>
    /// Reads a manifest from UTF-8. Unknown keys, wrong types, values out of range and missing keys are all collected; each problem
    /// names its JSON path. Patterns are checked against grid and basis; files that the manifest names are not opened.
    /// </summary>
    /// <exception cref="BadInputException">It is not JSON, or anything in it is wrong.</exception>
    public static MeasurementManifest Parse(ReadOnlyMemory<byte> utf8, string file)
    {
        var problems = new ProblemList(file);
        using JsonDocument document = ParseDocument(utf8, file);
        MeasurementManifest? manifest = ManifestParser.Parse(document.RootElement, problems);
        problems.ThrowIfAny();
        return manifest!;
    }

    /// <summary>
    /// Writes a manifest as indented JSON, keys in the order of the documentation, optional keys only where the record has them.
    /// Reading the text gives the same record.
    /// </summary>
    public static string Write(MeasurementManifest manifest)
    {
        var buffer = new ArrayBufferWriter<byte>();
        using (var writer = new Utf8JsonWriter(buffer, new JsonWriterOptions { Indented = true, NewLine = "\n" }))
        {
            ManifestWriter.Write(writer, manifest);
        }

        return Encoding.UTF8.GetString(buffer.WrittenSpan) + "\n";
    }

    private static JsonDocument ParseDocument(ReadOnlyMemory<byte> utf8, string file)
    {
        // Windows programs put a byte order mark before UTF-8; JSON does not know it.
        ReadOnlyMemory<byte> text = utf8.Span.StartsWith("\uFEFF"u8) ? utf8[3..] : utf8;
        if (!Utf8.IsValid(text.Span))
        {
            throw new BadInputException(file, null, "the file is not UTF-8 text", "save it as UTF-8");
        }

        try
        {
            return JsonDocument.Parse(text);
        }
        catch (JsonException malformed)
        {
            string place = $"line {malformed.LineNumber + 1}, byte {malformed.BytePositionInLine + 1}";
            throw new BadInputException(file, place, "the file is not well-formed JSON there", "mend the text; comments and trailing commas are not allowed", malformed);
        }
    }
}
