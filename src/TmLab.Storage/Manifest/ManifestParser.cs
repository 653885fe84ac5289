using System.Text.Json;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.Storage.Manifest;

/// <summary>Turns the JSON of a manifest into its record. After a problem it goes on with a stand-in value; the caller stops if there were any.</summary>
internal static class ManifestParser
{
    private const int LargestSide = 1 << 20;
    private const long MostModes = 1 << 24;
    private const double LongestWavelengthNm = 1e6;
    private const double LargestPitchUm = 1e4;

    public static MeasurementManifest? Parse(JsonElement root, ProblemList problems)
    {
        if (root.ValueKind != JsonValueKind.Object)
        {
            problems.Add(null, "the file does not hold a JSON object", "begin it with { and end it with }");
            return null;
        }

        var reader = new JsonObjectReader(root, "", problems);
        CheckFormat(reader, problems);
        string? title = reader.Text("title");
        double? wavelengthNm = reader.Number("wavelength_nm", 0, LongestWavelengthNm);
        CameraDescription camera = Camera(reader, problems);
        FrameLocation frames = Frames(reader, camera, problems);
        ModeDescription modes = Modes(reader, problems);
        ScheduleLocation schedule = Schedule(reader, problems);
        ModulatorDescription? modulator = Modulator(reader, problems);
        SteppedArm arm = Arm(reader);
        double? transmittance = Transmittance(reader);
        string? notes = reader.Text("notes");
        reader.ReportUnknown();
        return new MeasurementManifest(title, wavelengthNm, camera, frames, schedule, modes, modulator, arm, transmittance, notes);
    }

    private static void CheckFormat(JsonObjectReader reader, ProblemList problems)
    {
        string? format = reader.RequiredText("format");
        if (format is not null && format != ManifestWords.Format)
        {
            problems.Add("format", $"\"{format}\" is not \"{ManifestWords.Format}\"", "name the manifest of a measurement folder");
        }

        long? version = reader.RequiredWhole("version", 1, int.MaxValue);
        if (version > ManifestWords.Version)
        {
            problems.Add("version", $"version {version} is newer than this program, which reads version {ManifestWords.Version}", "use a newer program");
        }
    }

    private static CameraDescription Camera(JsonObjectReader root, ProblemList problems)
    {
        if (root.RequiredObject("camera") is not { } reader)
        {
            return new CameraDescription(null, 16, null, null, null);
        }

        long? width = reader.Whole("width", 1, LargestSide);
        long? height = reader.Whole("height", 1, LargestSide);
        if (reader.Has("width") != reader.Has("height"))
        {
            problems.Add("camera", "only one of width and height is given", "give both or neither");
        }

        long? bitDepth = reader.RequiredWhole("bit_depth", 1, 16);
        double? pitchUm = reader.Number("pixel_pitch_um", 0, LargestPitchUm);
        double? electronsPerCount = reader.Number("electrons_per_count", 0, 1e9);
        double? readNoise = reader.Number("read_noise_e", 0, 1e9, includesMinimum: true);
        reader.ReportUnknown();
        return new CameraDescription(SizeOf(width, height), (int)(bitDepth ?? 16), pitchUm, electronsPerCount, readNoise);
    }

    private static ImageSize? SizeOf(long? width, long? height) =>
        width is { } w && height is { } h ? new ImageSize((int)w, (int)h) : null;

    private static FrameLocation Frames(JsonObjectReader root, CameraDescription camera, ProblemList problems)
    {
        var standIn = new FrameLocation(FrameStorageKind.Tiff, [], null, null, 0);
        if (root.RequiredObject("frames") is not { } reader || reader.RequiredChoice("kind", ManifestWords.StorageKinds) is not { } kind)
        {
            return standIn;
        }

        IReadOnlyList<string> paths = FramePaths(reader, kind, problems);
        string? dataset = OnlyFor(FrameStorageKind.Hdf5, kind, reader, "dataset", () => reader.RequiredText("dataset"));
        RawPixelFormat? pixel = OnlyFor(FrameStorageKind.Raw, kind, reader, "pixel", () => reader.RequiredChoice("pixel", ManifestWords.RawPixels));
        long? header = OnlyFor(FrameStorageKind.Raw, kind, reader, "header_bytes", () => reader.Whole("header_bytes", 0, long.MaxValue / 2));
        if (kind == FrameStorageKind.Raw && camera.Size is null)
        {
            problems.Add("camera", "raw frames carry no size of their own", "give camera.width and camera.height");
        }

        reader.ReportUnknown();
        return new FrameLocation(kind, paths, dataset, pixel, header ?? 0);
    }

    private static T? OnlyFor<T>(FrameStorageKind owner, FrameStorageKind kind, JsonObjectReader reader, string key, Func<T?> take)
    {
        if (owner == kind)
        {
            return take();
        }

        reader.Misplaced(key, $"the key belongs to frames of kind \"{ManifestWords.Of(ManifestWords.StorageKinds, owner)}\"");
        return default;
    }

    private static string[] FramePaths(JsonObjectReader reader, FrameStorageKind kind, ProblemList problems)
    {
        if (!reader.TryTakeRequired("path", out JsonElement value))
        {
            return [];
        }

        if (value.ValueKind == JsonValueKind.String)
        {
            return reader.TextOf(value, "frames.path") is { } path ? [path] : [];
        }

        if (kind != FrameStorageKind.Tiff || value.ValueKind != JsonValueKind.Array)
        {
            problems.Add("frames.path", "the value is not a string", kind == FrameStorageKind.Tiff ? "give a file name, or an array of them" : "give one path");
            return [];
        }

        if (value.GetArrayLength() == 0 || value.EnumerateArray().Any(e => e.ValueKind != JsonValueKind.String))
        {
            problems.Add("frames.path", "the array is empty or holds something else than strings", "list the files in order");
            return [];
        }

        return [.. value.EnumerateArray().Select((e, i) => reader.TextOf(e, $"frames.path[{i}]") ?? "")];
    }

    private static ModeDescription Modes(JsonObjectReader root, ProblemList problems)
    {
        var standIn = new ModeDescription(BasisKind.Pixel, HadamardOrdering.Natural, 1, new GridShape(1, 1), null, null);
        if (root.RequiredObject("modes") is not { } reader)
        {
            return standIn;
        }

        BasisKind? basis = reader.RequiredChoice("basis", ManifestWords.Bases);
        long? count = reader.RequiredWhole("count", 1, MostModes);
        GridShape? grid = Grid(reader, problems);
        HadamardOrdering ordering = Ordering(reader, basis, problems);
        (string? patterns, string? dataset) = Patterns(reader, basis);
        reader.ReportUnknown();
        if (basis is null || count is null || grid is null)
        {
            return standIn;
        }

        var modes = new ModeDescription(basis.Value, ordering, (int)count.Value, grid.Value, patterns, dataset);
        problems.Add(ModeChecks.Check(modes, problems.File));
        return modes;
    }

    private static GridShape? Grid(JsonObjectReader reader, ProblemList problems)
    {
        if (reader.RequiredWholes("grid", 2, 1, MostModes) is not { } sides)
        {
            return null;
        }

        if (sides[0] * sides[1] > MostModes)
        {
            problems.Add("modes.grid", $"{sides[0]} × {sides[1]} macro-pixels are more than {MostModes}", "give [rows, columns] of the macro-pixel grid");
            return null;
        }

        return new GridShape((int)sides[0], (int)sides[1]);
    }

    private static HadamardOrdering Ordering(JsonObjectReader reader, BasisKind? basis, ProblemList problems)
    {
        HadamardOrdering ordering = reader.Choice("ordering", ManifestWords.Orderings) ?? HadamardOrdering.Natural;
        if (ordering != HadamardOrdering.Natural && basis is not (null or BasisKind.Hadamard or BasisKind.HadamardBinary))
        {
            problems.Add("modes.ordering", "only Hadamard bases have a sequency ordering", "remove the key");
        }

        return ordering;
    }

    private static (string? Patterns, string? Dataset) Patterns(JsonObjectReader reader, BasisKind? basis)
    {
        if (basis == BasisKind.Custom)
        {
            return (reader.RequiredText("patterns"), reader.Text("dataset"));
        }

        reader.Misplaced("patterns", "the key belongs to the basis \"custom\"");
        reader.Misplaced("dataset", "the key belongs to the basis \"custom\"");
        return (null, null);
    }

    private static ScheduleLocation Schedule(JsonObjectReader root, ProblemList problems)
    {
        var standIn = new ScheduleLocation(null, ScheduleOrder.ModeMajor, 3);
        if (!root.TryTakeRequired("schedule", out JsonElement value))
        {
            return standIn;
        }

        switch (value.ValueKind)
        {
            case JsonValueKind.String:
                return new ScheduleLocation(root.TextOf(value, "schedule"), null, 0);
            case JsonValueKind.Object:
                return ShortSchedule(new JsonObjectReader(value, "schedule", problems)) ?? standIn;
            default:
                problems.Add("schedule", "the value is neither a path nor an object", "name a CSV file, or give order and steps");
                return standIn;
        }
    }

    private static ScheduleLocation? ShortSchedule(JsonObjectReader reader)
    {
        ScheduleOrder? order = reader.RequiredChoice("order", ManifestWords.Orders);
        long? steps = reader.RequiredWhole("steps", StepChecks.FewestSteps, 1 << 16);
        reader.ReportUnknown();
        return order is null || steps is null ? null : new ScheduleLocation(null, order, (int)steps.Value);
    }

    private static ModulatorDescription? Modulator(JsonObjectReader root, ProblemList problems)
    {
        if (root.Object("modulator") is not { } reader)
        {
            return null;
        }

        ModulatorKind? kind = reader.RequiredChoice("kind", ManifestWords.ModulatorKinds);
        ImageSize? size = SizeOf(reader.RequiredWhole("width", 1, LargestSide), reader.RequiredWhole("height", 1, LargestSide));
        PixelRectangle? region = Region(reader, size, problems);
        double? pitchUm = reader.Number("pixel_pitch_um", 0, LargestPitchUm);
        string? lut = reader.Text("lut");
        string? flatness = reader.Text("flatness");
        reader.ReportUnknown();
        return kind is null || size is null || region is null
            ? null
            : new ModulatorDescription(kind.Value, size.Value, region.Value, pitchUm, lut, flatness);
    }

    private static PixelRectangle? Region(JsonObjectReader modulator, ImageSize? panel, ProblemList problems)
    {
        if (!modulator.Has("region"))
        {
            modulator.Object("region");
            return panel is { } whole ? new PixelRectangle(0, 0, whole.Width, whole.Height) : null;
        }

        if (modulator.Object("region") is not { } reader)
        {
            return null;
        }

        long? x = reader.RequiredWhole("x", 0, LargestSide);
        long? y = reader.RequiredWhole("y", 0, LargestSide);
        ImageSize? size = SizeOf(reader.RequiredWhole("width", 1, LargestSide), reader.RequiredWhole("height", 1, LargestSide));
        reader.ReportUnknown();
        if (x is null || y is null || size is null || panel is null)
        {
            return null;
        }

        var region = new PixelRectangle((int)x.Value, (int)y.Value, size.Value.Width, size.Value.Height);
        if (!region.FitsIn(panel.Value))
        {
            problems.Add("modulator.region", $"the region reaches beyond the {panel} panel", "keep x + width and y + height within the panel");
        }

        return region;
    }

    private static SteppedArm Arm(JsonObjectReader root)
    {
        if (root.Object("phase_steps") is not { } reader)
        {
            return SteppedArm.Signal;
        }

        SteppedArm arm = reader.Choice("arm", ManifestWords.Arms) ?? SteppedArm.Signal;
        reader.ReportUnknown();
        return arm;
    }

    private static double? Transmittance(JsonObjectReader root)
    {
        if (root.Object("sample") is not { } reader)
        {
            return null;
        }

        double? transmittance = reader.Number("transmittance", 0, 1);
        reader.ReportUnknown();
        return transmittance;
    }
}
