using System.Text;
using CsCheck;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Storage.Manifest;
using Xunit;

namespace TmLab.Storage.Tests.Manifest;

public sealed class ManifestJsonTests
{
    private const string Good = """
        {
          "format": "tm-measurement", "version": 1,
          "title": "opal glass disc, 256 modes",
          "wavelength_nm": 633.0,
          "camera": {"width": 48, "height": 40, "bit_depth": 12},
          "frames": {"kind": "tiff", "path": "frames.tif"},
          "schedule": "schedule.csv",
          "modes": {"basis": "hadamard", "count": 256, "grid": [16, 16]},
          "modulator": {"kind": "phase", "width": 512, "height": 500}
        }
        """;

    private static readonly string[] Names = ["frames", "données 1", "f*", "\"q\"", "a/b.csv", "Å.tif"];

    private static readonly Gen<MeasurementManifest> Manifests =
        from title in OrNull(Gen.OneOf(Names))
        from wavelength in OrNullValue(Gen.Double[1, 2000])
        from camera in Cameras
        from frames in Locations
        from schedule in Gen.OneOf(
            Gen.OneOf(Names).Select(n => new ScheduleLocation(n, null, 0)),
            Gen.Select(Gen.Enum<ScheduleOrder>(), Gen.Int[3, 9], (o, s) => new ScheduleLocation(null, o, s)))
        from modes in ModeDescriptions
        from modulator in OrNull(Modulators)
        from arm in Gen.Enum<SteppedArm>()
        from transmittance in OrNullValue(Gen.Double[0.001, 1])
        from notes in OrNull(Gen.OneOf(Names))
        select new MeasurementManifest(title, wavelength, camera, frames, schedule, modes, modulator, arm, transmittance, notes);

    private static Gen<CameraDescription> Cameras =>
        from width in Gen.Int[1, 5000]
        from height in Gen.Int[1, 5000]
        from bits in Gen.Int[1, 16]
        from pitch in OrNullValue(Gen.Double[0.1, 50])
        from gain in OrNullValue(Gen.Double[0.01, 90])
        from noise in OrNullValue(Gen.Double[0, 90])
        select new CameraDescription(new ImageSize(width, height), bits, pitch, gain, noise);

    private static Gen<FrameLocation> Locations => Gen.OneOf(
        Gen.OneOf(Names).Array[1, 4].Select(p => new FrameLocation(FrameStorageKind.Tiff, p, null, null, 0)),
        Gen.OneOf(Names).Select(p => new FrameLocation(FrameStorageKind.Images, [p], null, null, 0)),
        Gen.Select(Gen.OneOf(Names), Gen.Enum<RawPixelFormat>(), Gen.Long[0, 1L << 40], (p, f, h) => new FrameLocation(FrameStorageKind.Raw, [p], null, f, h)),
        Gen.OneOf(Names).Select(p => new FrameLocation(FrameStorageKind.Hdf5, [p], "/acq/stack", null, 0)));

    private static Gen<ModeDescription> ModeDescriptions => Gen.OneOf(
        Gen.Select(Gen.Int[0, 6], Gen.Int[0, 6], Gen.Enum<HadamardOrdering>(), Gen.Bool, (a, b, o, binary) => new ModeDescription(
            binary ? BasisKind.HadamardBinary : BasisKind.Hadamard, o, 1 << (a + b), new GridShape(1 << a, 1 << b), null, null)),
        Gen.Select(Gen.Int[1, 40], Gen.Int[1, 40], Gen.Bool, (r, c, f) => new ModeDescription(
            f ? BasisKind.Fourier : BasisKind.Pixel, HadamardOrdering.Natural, r * c, new GridShape(r, c), null, null)),
        Gen.Select(Gen.Int[1, 9], Gen.Int[1, 9], Gen.Int[0, 9], OrNull(Gen.OneOf(Names)), (r, c, more, d) => new ModeDescription(
            BasisKind.Custom, HadamardOrdering.Natural, (r * c) + more, new GridShape(r, c), "b.npy", d)));

    private static Gen<ModulatorDescription> Modulators =>
        from kind in Gen.Enum<ModulatorKind>()
        from width in Gen.Int[10, 4000]
        from height in Gen.Int[10, 4000]
        from x in Gen.Int[0, 9]
        from y in Gen.Int[0, 9]
        from pitch in OrNullValue(Gen.Double[0.1, 50])
        from lut in OrNull(Gen.OneOf(Names))
        from flatness in OrNull(Gen.OneOf(Names))
        select new ModulatorDescription(kind, new ImageSize(width, height), new PixelRectangle(x, y, width - x, height - y), pitch, lut, flatness);

    [Fact]
    public void A_good_manifest_is_read_with_its_defaults()
    {
        MeasurementManifest manifest = ManifestJson.Parse(Good, "measurement.json");
        Assert.Equal(new ImageSize(48, 40), manifest.Camera.Size);
        Assert.Equal(633.0, manifest.WavelengthNm);
        Assert.Equal(new PixelRectangle(0, 0, 512, 500), manifest.Modulator!.Region);
        Assert.Equal(SteppedArm.Signal, manifest.SteppedArm);
        Assert.Equal("schedule.csv", manifest.Schedule.Path);
        Assert.Equal(["frames.tif"], manifest.Frames.Paths);
    }

    [Fact]
    public void Any_manifest_written_and_read_is_the_same() => Manifests.Sample(manifest =>
    {
        MeasurementManifest read = ManifestJson.Parse(ManifestJson.Write(manifest), "m.json");
        Assert.Equal(manifest.Frames.Paths, read.Frames.Paths);
        Assert.Equal(manifest, read with { Frames = read.Frames with { Paths = manifest.Frames.Paths } });
    });

    [Theory]
    [InlineData("\"wavelength_nm\"", "\"wavelenght_nm\"", "wavelenght_nm: unknown key \"wavelenght_nm\"; did you mean \"wavelength_nm\"?")]
    [InlineData("\"bit_depth\": 12", "\"bit_depth\": 12, \"bitdepth\": 3", "camera.bitdepth: unknown key \"bitdepth\"; did you mean \"bit_depth\"?")]
    [InlineData("\"bit_depth\": 12", "\"bit_depth\": 17", "camera.bit_depth: 17 is not a whole number from 1 to 16")]
    [InlineData("\"bit_depth\": 12", "\"bit_depth\": \"12\"", "camera.bit_depth: a string stands where a whole number belongs")]
    [InlineData(", \"bit_depth\": 12", "", "camera: the required key \"bit_depth\" is missing")]
    [InlineData("633.0", "-1", "wavelength_nm: -1 is out of range")]
    [InlineData("633.0", "1e999", "wavelength_nm: 1e999 is out of range")]
    [InlineData("633.0", "null", "wavelength_nm: null stands where a number belongs")]
    [InlineData("\"hadamard\"", "\"hadamart\"", "modes.basis: \"hadamart\" is not one of")]
    [InlineData("\"count\": 256", "\"count\": 200", "modes.count: 200 is not a power of two")]
    [InlineData("[16, 16]", "[16, 8]", "modes.grid: the 16 × 8 grid holds 128 macro-pixels, but modes.count is 256")]
    [InlineData("[16, 16]", "[16, 16, 1]", "modes.grid: the array has 3 elements")]
    [InlineData("[16, 16]", "[16, \"x\"]", "modes.grid[1]: a string stands where a whole number belongs")]
    [InlineData("\"tiff\"", "\"raw\"", "frames: the required key \"pixel\" is missing")]
    [InlineData("\"frames.tif\"", "\"frames.tif\", \"dataset\": \"d\"", "frames.dataset: the key belongs to frames of kind \"hdf5\"")]
    [InlineData("\"schedule.csv\"", "{\"order\": \"mode-major\", \"steps\": 2}", "schedule.steps: 2 is not a whole number from 3")]
    [InlineData("\"schedule.csv\"", "7", "schedule: the value is neither a path nor an object")]
    [InlineData("\"height\": 500", "\"height\": 500, \"region\": {\"x\": 1, \"y\": 0, \"width\": 512, \"height\": 5}", "modulator.region: the region reaches beyond the 512 × 500 panel")]
    [InlineData("\"version\": 1", "\"version\": 2", "version: version 2 is newer")]
    [InlineData("tm-measurement", "tm-something", "format: \"tm-something\" is not \"tm-measurement\"")]
    [InlineData("\"title\": \"opal glass disc, 256 modes\"", "\"title\": \"\\ud800\"", "title: the string holds an incomplete surrogate pair")]
    [InlineData("\"version\": 1", "\"version\": 1, \"version\": 1", "version: the key appears twice")]
    [InlineData("\"width\": 48, ", "", "camera: only one of width and height is given")]
    public void A_wrong_key_or_value_is_named_with_its_path(string from, string to, string expected)
    {
        string text = Good.Replace(from, to, StringComparison.Ordinal);
        Assert.NotEqual(Good, text);
        BadInputException bad = Assert.Throws<BadInputException>(() => ManifestJson.Parse(text, "measurement.json"));
        Assert.Contains($"measurement.json, {expected}", bad.Problems[0].ToString(), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("{\n  \"format\": \"tm-measurement\",\n  oops\n}", "line 3")]
    [InlineData("{\n  // a comment\n}", "line 2")]
    [InlineData("", "line 1")]
    [InlineData("{\"a\": 1,}", "line 1")]
    public void Malformed_json_is_named_with_its_line(string text, string place)
    {
        BadInputException bad = Assert.Throws<BadInputException>(() => ManifestJson.Parse(text, "measurement.json"));
        Assert.StartsWith(place, bad.Problems[0].Place, StringComparison.Ordinal);
        Assert.Contains("not well-formed JSON", bad.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void All_problems_are_collected()
    {
        string text = Good.Replace("633.0", "-1", StringComparison.Ordinal).Replace("\"count\": 256", "\"count\": 200", StringComparison.Ordinal)
            .Replace("\"title\"", "\"titel\"", StringComparison.Ordinal);
        BadInputException bad = Assert.Throws<BadInputException>(() => ManifestJson.Parse(text, "m.json"));
        Assert.Equal(["wavelength_nm", "modes.count", "modes.grid", "titel"], bad.Problems.Select(p => p.Place));
    }

    [Fact]
    public void A_byte_order_mark_is_passed_over() =>
        Assert.Equal(256, ManifestJson.Parse(Encoding.UTF8.GetBytes("\uFEFF" + Good), "m.json").Modes.PatternCount);

    [Fact]
    public void Any_damage_gives_a_manifest_or_bad_input_and_nothing_else()
    {
        byte[] good = Encoding.UTF8.GetBytes(Good);
        Gen.Select(Gen.Int[0, good.Length - 1], Gen.Byte, Gen.Int[0, 8]).Sample((at, value, cut) =>
        {
            byte[] damaged = [.. good];
            damaged[at] = value;
            Exception? thrown = Record.Exception(() => ManifestJson.Parse(damaged.AsMemory(0, damaged.Length - cut), "m.json"));
            Assert.True(thrown is null or BadInputException, thrown?.ToString());
        });
    }

    private static Gen<T?> OrNull<T>(Gen<T> gen)
        where T : class => Gen.OneOf(Gen.Const((T?)null), gen.Select(v => (T?)v));

    private static Gen<T?> OrNullValue<T>(Gen<T> gen)
        where T : struct => Gen.OneOf(Gen.Const((T?)null), gen.Select(v => (T?)v));
}
