using System.Text.Json;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Plans;

/// <summary><c>plan.json</c> in a planned measurement folder: what the plan expects of the bench, and the fidelity that it predicts.</summary>
public static class PlanExpectationsJson
{
    /// <summary>The file's name.</summary>
    public const string FileName = "plan.json";

    private const string Format = "tmlab-plan";
    private const double Most = 1e12;

    /// <summary>Writes the file.</summary>
    internal static void Write(Stream stream, MeasurementPlan plan)
    {
        var expected = PlanExpectations.Of(plan.Settings);
        using var json = new Utf8JsonWriter(stream, new JsonWriterOptions { Indented = true, NewLine = "\n" });
        json.WriteStartObject();
        json.WriteString("format", Format);
        json.WriteNumber("version", 1);
        json.WriteNumber("signal_e", expected.SignalElectrons);
        json.WriteNumber("reference_e", expected.ReferenceElectrons);
        json.WriteNumber("full_well_e", expected.FullWellElectrons);
        json.WriteNumber("offset_counts", expected.OffsetCounts);
        json.WriteNumber("drift_rad_per_sqrt_s", expected.DriftRadPerSqrtSecond);
        if (double.IsFinite(expected.DecorrelationTimeS))
        {
            json.WriteNumber("decorrelation_time_s", expected.DecorrelationTimeS);
        }

        json.WriteNumber("trackers_every_modes", plan.Spacing.EveryModes);
        json.WriteNumber("predicted_fidelity", plan.Budget.Fidelity);
        json.WriteEndObject();
    }

    /// <summary>Reads the file of a folder; null where there is none.</summary>
    /// <exception cref="BadInputException">It is not JSON, or a number in it is missing or out of range.</exception>
    public static PlanExpectations? Read(string folder)
    {
        string path = Path.Combine(folder, FileName);
        if (!File.Exists(path))
        {
            return null;
        }

        var problems = new ProblemList(FileName);
        using JsonDocument document = Parse(InputFile.ReadAll(path, FileName, ManifestJson.LargestBytes));
        PlanExpectations expected = Read(new JsonObjectReader(document.RootElement, "", problems));
        problems.ThrowIfAny();
        return expected;
    }

    private static PlanExpectations Read(JsonObjectReader json) => new(
        json.Number("signal_e", 0, Most) ?? new PlanSettings().SignalElectrons,
        json.Number("reference_e", 0, Most) ?? new PlanSettings().ReferenceElectrons,
        json.Number("full_well_e", 0, Most) ?? new PlanSettings().Camera.FullWellElectrons,
        json.Number("offset_counts", 0, ushort.MaxValue, includesMinimum: true) ?? new PlanSettings().Camera.OffsetCounts,
        json.Number("drift_rad_per_sqrt_s", 0, Most, includesMinimum: true) ?? 0,
        json.Number("decorrelation_time_s", 0, Most) ?? double.PositiveInfinity);

    private static JsonDocument Parse(byte[] utf8)
    {
        try
        {
            var document = JsonDocument.Parse(utf8);
            return document.RootElement.ValueKind == JsonValueKind.Object
                ? document
                : throw new BadInputException(FileName, null, "the file holds no JSON object", "plan again");
        }
        catch (JsonException malformed)
        {
            throw new BadInputException(FileName, $"line {malformed.LineNumber + 1}", "the file is not well-formed JSON there", "plan again", malformed);
        }
    }
}
