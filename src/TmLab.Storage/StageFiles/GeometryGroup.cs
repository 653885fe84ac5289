using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Storage.StageFiles;

/// <summary>The group <c>/geometry</c>: sizes, wavelength and the modulator, as attributes that any reader of HDF5 shows.</summary>
internal static class GeometryGroup
{
    private const string Group = "/geometry";
    private const string Gray = Group + "/lut_gray";
    private const string Phase = Group + "/lut_phase_rad";
    private const string Flatness = Group + "/flatness";

    /// <summary>Writes title and wavelength; what is unknown is left out.</summary>
    public static void WriteTitle(StageFileWriter file, string? title, double? wavelengthNm)
    {
        file.AddAttribute(Group, "title", title);
        file.AddAttribute(Group, "wavelength_nm", wavelengthNm);
    }

    /// <summary>Reads the title; null when unknown.</summary>
    public static string? ReadTitle(StageFileReader file) => file.TryAttribute<string>(Group, "title");

    /// <summary>Reads the wavelength; null when unknown.</summary>
    public static double? ReadWavelengthNm(StageFileReader file) => file.TryNumber<double>(Group, "wavelength_nm");

    /// <summary>Writes the camera region and the macro-pixel grid.</summary>
    public static void WriteSizes(StageFileWriter file, ImageSize cameraRegion, GridShape grid)
    {
        file.AddAttribute(Group, "camera_width", cameraRegion.Width);
        file.AddAttribute(Group, "camera_height", cameraRegion.Height);
        file.AddAttribute(Group, "grid_rows", grid.Rows);
        file.AddAttribute(Group, "grid_columns", grid.Columns);
    }

    /// <summary>Reads the camera region.</summary>
    public static ImageSize ReadCameraRegion(StageFileReader file) =>
        new(file.Attribute<int>(Group, "camera_width"), file.Attribute<int>(Group, "camera_height"));

    /// <summary>Reads the macro-pixel grid.</summary>
    public static GridShape ReadGrid(StageFileReader file) =>
        new(file.Attribute<int>(Group, "grid_rows"), file.Attribute<int>(Group, "grid_columns"));

    /// <summary>Writes the panel; null writes nothing.</summary>
    public static void WriteModulator(StageFileWriter file, ModulatorDescription? modulator)
    {
        if (modulator is null)
        {
            return;
        }

        file.AddAttribute(Group, "modulator_kind", StoredNames.Of(modulator.Kind));
        file.AddAttribute(Group, "modulator_width", modulator.Size.Width);
        file.AddAttribute(Group, "modulator_height", modulator.Size.Height);
        file.AddAttribute(Group, "modulator_region_x", modulator.Region.X);
        file.AddAttribute(Group, "modulator_region_y", modulator.Region.Y);
        file.AddAttribute(Group, "modulator_region_width", modulator.Region.Width);
        file.AddAttribute(Group, "modulator_region_height", modulator.Region.Height);
        file.AddAttribute(Group, "modulator_pixel_pitch_um", modulator.PixelPitchUm);
        file.AddAttribute(Group, "modulator_lut_file", modulator.LutFile);
        file.AddAttribute(Group, "modulator_flatness_file", modulator.FlatnessFile);
    }

    /// <summary>Reads the panel; null when unknown.</summary>
    public static ModulatorDescription? ReadModulator(StageFileReader file)
    {
        if (file.TryAttribute<string>(Group, "modulator_kind") is not { } kind)
        {
            return null;
        }

        return new ModulatorDescription(
            StoredNames.Parse<ModulatorKind>(file, Group + ", attribute modulator_kind", kind),
            new ImageSize(file.Attribute<int>(Group, "modulator_width"), file.Attribute<int>(Group, "modulator_height")),
            new PixelRectangle(
                file.Attribute<int>(Group, "modulator_region_x"),
                file.Attribute<int>(Group, "modulator_region_y"),
                file.Attribute<int>(Group, "modulator_region_width"),
                file.Attribute<int>(Group, "modulator_region_height")),
            file.TryNumber<double>(Group, "modulator_pixel_pitch_um"),
            file.TryAttribute<string>(Group, "modulator_lut_file"),
            file.TryAttribute<string>(Group, "modulator_flatness_file"));
    }

    /// <summary>Writes the panel's calibration; what is not given is left out.</summary>
    public static void WriteCalibration(StageFileWriter file, GrayPhaseTable? lut, ImmutableArray<byte> flatness)
    {
        if (lut is not null)
        {
            file.Add(Gray, lut.Gray.ToArray(), "grey level");
            file.Add(Phase, lut.PhaseRad.ToArray(), "rad");
        }

        if (!flatness.IsDefaultOrEmpty)
        {
            file.Add(Flatness, flatness.ToArray(), "grey level");
        }
    }

    /// <summary>Reads the grey-to-phase table; null when not given.</summary>
    public static GrayPhaseTable? ReadLut(StageFileReader file)
    {
        if (!file.Has(Gray))
        {
            return null;
        }

        int[] gray = file.ReadArray<int>(Gray, -1);
        return new GrayPhaseTable([.. gray], [.. file.ReadArray<double>(Phase, gray.Length)]);
    }

    /// <summary>Reads the flatness image; empty when not given.</summary>
    public static ImmutableArray<byte> ReadFlatness(StageFileReader file) =>
        file.Has(Flatness) ? [.. file.ReadArray<byte>(Flatness, -1)] : [];
}
