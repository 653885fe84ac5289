using System.Collections.Immutable;
using System.Numerics;
using System.Text;
using TmLab.Measurement;
using TmLab.Planning;
using TmLab.Shaping;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Images;
using TmLab.Storage.Manifest;

namespace TmLab.Storage.Plans;

/// <summary>The files of a measurement folder beside the frames, under the names that plans give them.</summary>
internal static class SideFiles
{
    /// <summary>The manifest with the side files that are given, under their planned names.</summary>
    public static MeasurementManifest Named(MeasurementManifest manifest, GrayPhaseTable? lut, ImmutableArray<byte> flatness) => manifest with
    {
        Modes = manifest.Modes with
        {
            PatternFile = manifest.Modes.Basis == BasisKind.Custom ? MeasurementPlan.PatternFile : null,
            PatternDataset = null,
        },
        Modulator = manifest.Modulator is null ? null : manifest.Modulator with
        {
            LutFile = lut is null ? null : MeasurementPlan.LutFile,
            FlatnessFile = flatness.IsEmpty ? null : MeasurementPlan.FlatnessFile,
        },
    };

    /// <summary>Writes manifest, schedule, custom patterns, grey-to-phase table and flatness image.</summary>
    public static void Write(
        AtomicFolder folder, MeasurementManifest manifest, Schedule schedule, ImmutableArray<Complex> patterns, GrayPhaseTable? lut, ImmutableArray<byte> flatness)
    {
        WriteText(folder, ManifestJson.FileName, ManifestJson.Write(manifest));
        if (manifest.Schedule.Path is { } schedulePath)
        {
            WriteText(folder, schedulePath, ScheduleCsv.Write(schedule));
        }

        if (manifest.Modes.Basis == BasisKind.Custom)
        {
            using FileStream stream = folder.Create(MeasurementPlan.PatternFile);
            NpyMatrixWriter.Write(stream, patterns.AsSpan(), manifest.Modes.PatternCount, manifest.Modes.ModeCount);
        }

        if (lut is not null)
        {
            WriteText(folder, MeasurementPlan.LutFile, PhaseLutCsv.Write(lut));
        }

        if (!flatness.IsEmpty)
        {
            using FileStream stream = folder.Create(MeasurementPlan.FlatnessFile);
            ModulatorImageFile.Write(new ModulatorImage(manifest.Modulator!.Size, flatness), ModulatorImageFormat.Png, stream);
        }
    }

    /// <summary>Writes a text file in UTF-8.</summary>
    public static void WriteText(AtomicFolder folder, string name, string text)
    {
        using FileStream stream = folder.Create(name);
        stream.Write(Encoding.UTF8.GetBytes(text));
    }
}
