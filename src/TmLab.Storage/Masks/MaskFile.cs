using System.Globalization;
using System.Text.Encodings.Web;
using System.Text.Json;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Shaping;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Images;

namespace TmLab.Storage.Masks;

/// <summary>Where a mask comes from.</summary>
/// <param name="MatrixFile">The matrix file, as the user named it.</param>
/// <param name="MatrixSeal">Its seal, see <see cref="StageFiles.MatrixFileReader.Seal"/>; null where it has none.</param>
/// <param name="ToolVersion">The program's version.</param>
/// <param name="CreatedUtc">When the mask was made, as the caller's clock says.</param>
public sealed record MaskOrigin(string MatrixFile, uint? MatrixSeal, string ToolVersion, DateTimeOffset CreatedUtc);

/// <summary>Writes a mask: the image for the modulator, and the JSON beside it that says what it is.</summary>
public static class MaskFile
{
    /// <summary>The format's name in the JSON.</summary>
    public const string FormatName = "tmlab-mask";

    private static readonly JsonWriterOptions Layout = new() { Indented = true, Encoder = JavaScriptEncoder.UnsafeRelaxedJsonEscaping };

    /// <summary>The name of the JSON beside an image.</summary>
    public static string DescriptionOf(string imagePath) => imagePath + ".json";

    /// <summary>Writes both, the description's final name first, so that an image under its final name is never without one.</summary>
    /// <param name="imagePath">The image, .bmp or else PNG.</param>
    /// <param name="overwrite">Whether files of these names may be replaced.</param>
    /// <param name="mask">The mask.</param>
    /// <param name="facts">The facts of the matrix that it was made from.</param>
    /// <param name="origin">Where it comes from.</param>
    /// <exception cref="OutputException">A name is taken, busy or cannot be written to, or the disk is full.</exception>
    public static void Write(string imagePath, bool overwrite, FocusMask mask, TransmissionMatrixFacts facts, MaskOrigin origin)
    {
        string descriptionPath = DescriptionOf(imagePath);
        using AtomicOutput image = AtomicOutput.Begin(imagePath, overwrite);
        using AtomicOutput description = AtomicOutput.Begin(descriptionPath, overwrite);
        OutputFailures.Guard(imagePath, () => WriteImage(image.TemporaryPath, imagePath, mask));
        OutputFailures.Guard(descriptionPath, () => File.WriteAllBytes(description.TemporaryPath, Describe(imagePath, mask, facts, origin)));
        description.Commit();
        image.Commit();
    }

    private static void WriteImage(string temporaryPath, string imagePath, FocusMask mask)
    {
        bool isBmp = imagePath.EndsWith(".bmp", StringComparison.OrdinalIgnoreCase);
        using FileStream stream = File.Create(temporaryPath);
        ModulatorImageFile.Write(mask.Image, isBmp ? ModulatorImageFormat.Bmp : ModulatorImageFormat.Png, stream);
    }

    private static byte[] Describe(string imagePath, FocusMask mask, TransmissionMatrixFacts facts, MaskOrigin origin)
    {
        using var buffer = new MemoryStream();
        using (var json = new Utf8JsonWriter(buffer, Layout))
        {
            json.WriteStartObject();
            json.WriteString("format", FormatName);
            json.WriteNumber("format_version", 1);
            json.WriteString("created_utc", origin.CreatedUtc.ToUniversalTime().ToString("yyyy-MM-dd'T'HH:mm:ss'Z'", CultureInfo.InvariantCulture));
            json.WriteString("tool_version", origin.ToolVersion);
            json.WriteString("image", Path.GetFileName(imagePath));
            json.WriteString("matrix", origin.MatrixFile);
            json.WriteString("matrix_seal_crc32", origin.MatrixSeal?.ToString("x8", CultureInfo.InvariantCulture));
            WritePanel(json, mask, facts);
            WriteTargets(json, mask);
            json.WriteNumber("ideal_enhancement", mask.IdealEnhancement);
            json.WriteStartArray("cautions");
            mask.Cautions.ToList().ForEach(json.WriteStringValue);
            json.WriteEndArray();
            json.WriteEndObject();
        }

        buffer.Write("\n"u8);
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
