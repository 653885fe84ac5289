using System.Text.Json;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Storage.Manifest;

/// <summary>Writes the record of a manifest as JSON.</summary>
internal static class ManifestWriter
{
    public static void Write(Utf8JsonWriter writer, MeasurementManifest manifest)
    {
        writer.WriteStartObject();
        writer.WriteString("format", ManifestWords.Format);
        writer.WriteNumber("version", ManifestWords.Version);
        WriteText(writer, "title", manifest.Title);
        WriteNumber(writer, "wavelength_nm", manifest.WavelengthNm);
        WriteCamera(writer, manifest.Camera);
        WriteFrames(writer, manifest.Frames);
        WriteSchedule(writer, manifest.Schedule);
        WriteModes(writer, manifest.Modes);
        WriteModulator(writer, manifest.Modulator);
        WriteOptional(writer, manifest);
        writer.WriteEndObject();
    }

    private static void WriteCamera(Utf8JsonWriter writer, CameraDescription camera)
    {
        writer.WriteStartObject("camera");
        WriteSize(writer, camera.Size);
        writer.WriteNumber("bit_depth", camera.BitDepth);
        WriteNumber(writer, "pixel_pitch_um", camera.PixelPitchUm);
        WriteNumber(writer, "electrons_per_count", camera.ElectronsPerCount);
        WriteNumber(writer, "read_noise_e", camera.ReadNoiseElectrons);
        writer.WriteEndObject();
    }

    private static void WriteFrames(Utf8JsonWriter writer, FrameLocation frames)
    {
        writer.WriteStartObject("frames");
        writer.WriteString("kind", ManifestWords.Of(ManifestWords.StorageKinds, frames.Kind));
        WritePaths(writer, frames.Paths);
        WriteText(writer, "dataset", frames.Dataset);
        WriteText(writer, "pixel", frames.Pixel is { } pixel ? ManifestWords.Of(ManifestWords.RawPixels, pixel) : null);
        if (frames.HeaderBytes != 0)
        {
            writer.WriteNumber("header_bytes", frames.HeaderBytes);
        }

        writer.WriteEndObject();
    }

    private static void WritePaths(Utf8JsonWriter writer, IReadOnlyList<string> paths)
    {
        if (paths.Count == 1)
        {
            writer.WriteString("path", paths[0]);
            return;
        }

        writer.WriteStartArray("path");
        foreach (string path in paths)
        {
            writer.WriteStringValue(path);
        }

        writer.WriteEndArray();
    }

    private static void WriteSchedule(Utf8JsonWriter writer, ScheduleLocation schedule)
    {
        if (schedule.Order is not { } order)
        {
            writer.WriteString("schedule", schedule.Path);
            return;
        }

        writer.WriteStartObject("schedule");
        writer.WriteString("order", ManifestWords.Of(ManifestWords.Orders, order));
        writer.WriteNumber("steps", schedule.Steps);
        writer.WriteEndObject();
    }

    private static void WriteModes(Utf8JsonWriter writer, ModeDescription modes)
    {
        writer.WriteStartObject("modes");
        writer.WriteString("basis", ManifestWords.Of(ManifestWords.Bases, modes.Basis));
        writer.WriteNumber("count", modes.PatternCount);
        writer.WriteStartArray("grid");
        writer.WriteNumberValue(modes.Grid.Rows);
        writer.WriteNumberValue(modes.Grid.Columns);
        writer.WriteEndArray();
        if (modes.Ordering != HadamardOrdering.Natural)
        {
            writer.WriteString("ordering", ManifestWords.Of(ManifestWords.Orderings, modes.Ordering));
        }

        WriteText(writer, "patterns", modes.PatternFile);
        WriteText(writer, "dataset", modes.PatternDataset);
        writer.WriteEndObject();
    }

    private static void WriteModulator(Utf8JsonWriter writer, ModulatorDescription? modulator)
    {
        if (modulator is null)
        {
            return;
        }

        writer.WriteStartObject("modulator");
        writer.WriteString("kind", ManifestWords.Of(ManifestWords.ModulatorKinds, modulator.Kind));
        WriteSize(writer, modulator.Size);
        writer.WriteStartObject("region");
        writer.WriteNumber("x", modulator.Region.X);
        writer.WriteNumber("y", modulator.Region.Y);
        WriteSize(writer, new ImageSize(modulator.Region.Width, modulator.Region.Height));
        writer.WriteEndObject();
        WriteNumber(writer, "pixel_pitch_um", modulator.PixelPitchUm);
        WriteText(writer, "lut", modulator.LutFile);
        WriteText(writer, "flatness", modulator.FlatnessFile);
        writer.WriteEndObject();
    }

    private static void WriteOptional(Utf8JsonWriter writer, MeasurementManifest manifest)
    {
        if (manifest.SteppedArm != SteppedArm.Signal)
        {
            writer.WriteStartObject("phase_steps");
            writer.WriteString("arm", ManifestWords.Of(ManifestWords.Arms, manifest.SteppedArm));
            writer.WriteEndObject();
        }

        if (manifest.SampleTransmittance is { } transmittance)
        {
            writer.WriteStartObject("sample");
            writer.WriteNumber("transmittance", transmittance);
            writer.WriteEndObject();
        }

        WriteText(writer, "notes", manifest.Notes);
    }

    private static void WriteSize(Utf8JsonWriter writer, ImageSize? size)
    {
        if (size is { } known)
        {
            writer.WriteNumber("width", known.Width);
            writer.WriteNumber("height", known.Height);
        }
    }

    private static void WriteText(Utf8JsonWriter writer, string key, string? text)
    {
        if (text is not null)
        {
            writer.WriteString(key, text);
        }
    }

    private static void WriteNumber(Utf8JsonWriter writer, string key, double? number)
    {
        if (number is { } known)
        {
            writer.WriteNumber(key, known);
        }
    }
}
