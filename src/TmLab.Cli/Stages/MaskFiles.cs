using System.Globalization;
using System.Text;
using System.Text.Json;
using TmLab.Cli.Help;
using TmLab.Matrix;
using TmLab.Shaping;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Images;
using TmLab.Storage.StageFiles;

namespace TmLab.Cli.Stages;

/// <summary>Writes a mask: the image for the modulator, and the JSON that says what it is.</summary>
internal static class MaskFiles
{
    /// <summary>Writes both, the description first, so that an image under its final name is never without one.</summary>
    public static MaskOutcome Write(MaskRequest request, FocusMask mask, TransmissionMatrixFacts facts, StageContext context)
    {
        string description = request.Output + ".json";
        bool force = context.Settings.Force;
        using AtomicOutput image = AtomicOutput.Begin(request.Output, force);
        using AtomicOutput json = AtomicOutput.Begin(description, force);
        ModulatorImageFormat format = request.Output.EndsWith(".bmp", StringComparison.OrdinalIgnoreCase)
            ? ModulatorImageFormat.Bmp
            : ModulatorImageFormat.Png;
        OutputFailures.Guard(request.Output, () =>
        {
            using FileStream stream = File.Create(image.TemporaryPath);
            ModulatorImageFile.Write(mask.Image, format, stream);
        });
        OutputFailures.Guard(description, () => File.WriteAllBytes(json.TemporaryPath, Describe(request, mask, facts, context)));
        json.Commit();
        image.Commit();
        return new MaskOutcome(
            request.Output,
            description,
            request.Targets,
            [.. mask.Targets.Select(t => t.PredictedEnhancement)],
            mask.Targets.Average(t => t.PredictedEnhancement),
            mask.IdealEnhancement,
            mask.Cautions);
    }

    private static byte[] Describe(MaskRequest request, FocusMask mask, TransmissionMatrixFacts facts, StageContext context)
    {
        using var buffer = new MemoryStream();
        using (var json = new Utf8JsonWriter(buffer, new JsonWriterOptions { Indented = true, Encoder = System.Text.Encodings.Web.JavaScriptEncoder.UnsafeRelaxedJsonEscaping }))
        {
            json.WriteStartObject();
            json.WriteString("format", "tmlab-mask");
            json.WriteNumber("format_version", 1);
            json.WriteString("created_utc", TimeProvider.System.GetUtcNow().ToString("yyyy-MM-dd'T'HH:mm:ss'Z'", CultureInfo.InvariantCulture));
            json.WriteString("tool_version", VersionFlag.Version);
            json.WriteString("image", Path.GetFileName(request.Output));
            json.WriteString("matrix", request.Input);
            json.WriteString("matrix_sha256", FileDigest.Sha256(request.Input, context.Progress, context.Cancellation));
            WritePanel(json, mask, facts);
            WriteTargets(json, mask);
            json.WriteNumber("ideal_enhancement", mask.IdealEnhancement);
            json.WriteStartArray("cautions");
            mask.Cautions.ToList().ForEach(json.WriteStringValue);
            json.WriteEndArray();
            json.WriteEndObject();
        }

        buffer.Write(Encoding.UTF8.GetBytes(Environment.NewLine));
        return buffer.ToArray();
    }

    private static void WritePanel(Utf8JsonWriter json, FocusMask mask, TransmissionMatrixFacts facts)
    {
        json.WriteStartObject("modulator");
        json.WriteNumber("width", mask.Image.Size.Width);
        json.WriteNumber("height", mask.Image.Size.Height);
        if (facts.Modulator is { } panel)
        {
            json.WriteStartObject("region");
            json.WriteNumber("x", panel.Region.X);
            json.WriteNumber("y", panel.Region.Y);
            json.WriteNumber("width", panel.Region.Width);
            json.WriteNumber("height", panel.Region.Height);
            json.WriteEndObject();
        }

        json.WriteNumber("grid_rows", facts.Grid.Rows);
        json.WriteNumber("grid_columns", facts.Grid.Columns);
        json.WriteNumber("levels_per_turn", mask.Levels);
        json.WriteString("gray_to_phase", facts.PhaseLut is null ? "proportional" : "table");
        json.WriteBoolean("flatness_added", !facts.Flatness.IsEmpty);
        json.WriteEndObject();
    }

    private static void WriteTargets(Utf8JsonWriter json, FocusMask mask)
    {
        json.WriteStartArray("targets");
        foreach (TargetPrediction target in mask.Targets)
        {
            json.WriteStartObject();
            json.WriteNumber("x", target.Target.Pixel.X);
            json.WriteNumber("y", target.Target.Pixel.Y);
            json.WriteNumber("weight", target.Target.Weight);
            json.WriteNumber("enhancement_on_matrix", target.EnhancementOnMatrix);
            WriteNumberOrNull(json, "predicted_enhancement", target.PredictedEnhancement);
            json.WriteEndObject();
        }

        json.WriteEndArray();
    }

    private static void WriteNumberOrNull(Utf8JsonWriter json, string name, double value)
    {
        if (double.IsFinite(value))
        {
            json.WriteNumber(name, value);
        }
        else
        {
            json.WriteNull(name);
        }
    }
}
