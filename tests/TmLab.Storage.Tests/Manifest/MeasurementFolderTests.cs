using System.Numerics;
using PureHDF;
using SixLabors.ImageSharp;
using SixLabors.ImageSharp.PixelFormats;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Quantities;
using TmLab.Storage.Manifest;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Manifest;

public sealed class MeasurementFolderTests : IDisposable
{
    private const int Modes = 4;
    private const int Steps = 3;

    private static readonly ImageSize FrameSize = new(8, 6);

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData("mode-major", 1, 0)]
    [InlineData("step-major", 0, 1)]
    public void A_folder_with_a_short_schedule_opens(string order, int stepOfSecond, int modeOfSecond)
    {
        WriteFrames(Modes * Steps);
        WriteManifest($"{{\"order\": \"{order}\", \"steps\": {Steps}}}");
        using OpenedMeasurement opened = MeasurementFolder.Open(_folder.Path);
        Assert.Equal(Modes * Steps, opened.Frames.FrameCount);
        Assert.Equal((stepOfSecond, modeOfSecond), (opened.Schedule.Frames[1].Step, opened.Schedule.Frames[1].Mode));
        Assert.Equal(Modes, opened.Schedule.Groups.Length);
    }

    [Fact]
    public void A_manifest_of_another_name_opens_with_a_csv_schedule()
    {
        WriteFrames(Modes * Steps);
        _folder.Write("schedule.csv", ScheduleCsv.Write(Schedule.ModeMajor(Modes, Steps)));
        WriteManifest("\"schedule.csv\"", file: "bench.json");
        using OpenedMeasurement opened = MeasurementFolder.Open(_folder.File("bench.json"));
        Assert.Equal(Modes, opened.Schedule.Groups.Length);
    }

    [Fact]
    public void A_missing_folder_is_named() =>
        Assert.StartsWith("no/such/folder: there is no such folder", Assert.Throws<BadInputException>(() => MeasurementFolder.Open("no/such/folder")).Message, StringComparison.Ordinal);

    [Fact]
    public void A_folder_without_a_manifest_is_named() =>
        Assert.Contains("the folder holds no measurement.json", Message(), StringComparison.Ordinal);

    [Fact]
    public void A_row_count_other_than_the_frame_count_is_refused_with_both()
    {
        WriteFrames(11);
        _folder.Write("schedule.csv", ScheduleCsv.Write(Schedule.ModeMajor(Modes, Steps)));
        WriteManifest("\"schedule.csv\"");
        Assert.Equal("schedule.csv: the schedule has 12 rows, but f.raw holds 11 frames; write one row for each frame", Message());
    }

    [Fact]
    public void A_short_schedule_that_does_not_fit_is_refused_with_its_product()
    {
        WriteFrames(11);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}");
        Assert.Contains("4 modes × 3 steps are 12 frames, but f.raw holds 11", Message(), StringComparison.Ordinal);
    }

    [Fact]
    public void Problems_of_schedule_and_frames_are_collected()
    {
        File.WriteAllBytes(_folder.File("f.raw"), new byte[97]);
        _folder.Write("schedule.csv", "frame,role,mode,step,phase_rad\n0,mode,9,0,0\n");
        WriteManifest("\"schedule.csv\"");
        string message = Message();
        Assert.StartsWith("schedule.csv, line 2: mode 9 lies outside 0 … 3", message, StringComparison.Ordinal);
        Assert.Contains("f.raw: 1 frames of 96 bytes leave 1 bytes over", message, StringComparison.Ordinal);
    }

    [Fact]
    public void Frames_of_another_size_than_the_manifest_says_are_refused()
    {
        SampleFrames.WriteTiff(_folder.File("f.tif"), SampleFrames.Make(12, new ImageSize(7, 6), 16), new ImageSize(7, 6), 16);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", frames: "{\"kind\": \"tiff\", \"path\": \"f.tif\"}");
        Assert.Contains("measurement.json, camera: the manifest says 8 × 6 pixels, the frames in f.tif have 7 × 6", Message(), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("../f.raw")]
    [InlineData("a/../../f.raw")]
    [InlineData("..\\\\f.raw")]
    [InlineData("/etc/hostname")]
    public void A_path_out_of_the_folder_is_refused(string path)
    {
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", frames: $"{{\"kind\": \"raw\", \"path\": \"{path}\", \"pixel\": \"uint16-le\"}}");
        Assert.Contains("leaves the manifest's folder", Message(), StringComparison.Ordinal);
    }

    [Fact]
    public void A_path_out_of_the_folder_is_taken_when_allowed()
    {
        WriteFrames(Modes * Steps);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", frames: "{\"kind\": \"raw\", \"path\": \"../f.raw\", \"pixel\": \"uint16-le\"}", file: "inner/measurement.json");
        using OpenedMeasurement opened = MeasurementFolder.Open(_folder.File("inner/measurement.json"), allowOutside: true);
        Assert.Equal(12, opened.Frames.FrameCount);
    }

    [Fact]
    public void Lut_and_flatness_are_read()
    {
        WriteFrames(Modes * Steps);
        _folder.Write("lut.csv", "gray,phase_rad\n0,0\n128,3.0\n255,6.5\n");
        WriteFlatness(5, 3);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modulator: ModulatorWithFiles);
        using OpenedMeasurement opened = MeasurementFolder.Open(_folder.Path);
        Assert.Equal([0, 128, 255], opened.PhaseLut!.Gray);
        Assert.Equal([0, 3.0, 6.5], opened.PhaseLut.PhaseRad);
        Assert.Equal(15, opened.Flatness.Length);
        Assert.Equal(77, opened.Flatness[7]);
    }

    [Fact]
    public void A_lut_that_is_not_monotone_and_a_flatness_of_another_size_are_refused()
    {
        WriteFrames(Modes * Steps);
        _folder.Write("lut.csv", "gray,phase_rad\n0,0\n128,3.0\n255,2.5\n");
        WriteFlatness(5, 4);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modulator: ModulatorWithFiles);
        string message = Message();
        Assert.Contains("lut.csv, line 4: phase 2.5 rad does not rise above 3 rad", message, StringComparison.Ordinal);
        Assert.Contains("flat.png: the flatness image has 5 × 4 pixels (EightBit), the panel 5 × 3", message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("<c8", false)]
    [InlineData("<c16", false)]
    [InlineData(">c16", false)]
    [InlineData("<f8", false)]
    [InlineData("<c16", true)]
    public void Custom_patterns_are_read_from_an_array_file(string type, bool isFortran)
    {
        WriteFrames(5 * Steps);
        Complex[] patterns = Patterns(isComplex: type[1] == 'c');
        NpyWriter.Write(_folder.File("b.npy"), patterns, 5, 4, type, isFortran);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modes: CustomModes);
        using OpenedMeasurement opened = MeasurementFolder.Open(_folder.Path);
        Assert.Equal(patterns, opened.CustomPatterns);
    }

    [Fact]
    public void Custom_patterns_of_nan_are_named_with_their_place()
    {
        WriteFrames(5 * Steps);
        Complex[] patterns = Patterns(isComplex: true);
        patterns[(2 * 4) + 3] = new Complex(0, double.NaN);
        NpyWriter.Write(_folder.File("b.npy"), patterns, 5, 4, "<c16", false);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modes: CustomModes);
        Assert.Contains("b.npy, pattern 2, mode 3: is not a finite number", Message(), StringComparison.Ordinal);
    }

    [Fact]
    public void Custom_patterns_of_another_shape_are_refused()
    {
        WriteFrames(5 * Steps);
        NpyWriter.Write(_folder.File("b.npy"), Patterns(isComplex: true), 4, 5, "<c16", false);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modes: CustomModes);
        Assert.Contains("b.npy, header: the array has shape (4, 5); 5 patterns × 4 macro-pixels need (5, 4)", Message(), StringComparison.Ordinal);
    }

    [Fact]
    public void An_array_file_cut_short_is_refused()
    {
        WriteFrames(5 * Steps);
        NpyWriter.Write(_folder.File("b.npy"), Patterns(isComplex: true), 5, 4, "<c16", false);
        byte[] bytes = File.ReadAllBytes(_folder.File("b.npy"));
        File.WriteAllBytes(_folder.File("b.npy"), bytes[..^3]);
        WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modes: CustomModes);
        Assert.Contains("b.npy: 317 bytes follow the header, 320 are needed", Message(), StringComparison.Ordinal);
    }

    [Fact]
    public void Custom_patterns_are_read_from_a_dataset_with_members_in_any_order()
    {
        WriteFrames(5 * Steps);
        Complex[] patterns = Patterns(isComplex: true);
        var file = new H5File
        {
            ["plain"] = new H5Dataset(Array.ConvertAll(patterns, p => new RealFirst { r = p.Real, i = p.Imaginary }), fileDims: [5, 4]),
            ["turned"] = new H5Dataset(Array.ConvertAll(patterns, p => new ImaginaryFirst { im = (float)p.Imaginary, re = (float)p.Real }), fileDims: [5, 4]),
        };
        file.Write(_folder.File("b.npy"), new H5WriteOptions(IncludeStructFields: true));
        foreach (string dataset in new[] { "plain", "turned" })
        {
            WriteManifest("{\"order\": \"mode-major\", \"steps\": 3}", modes: CustomModes.Replace("}", $", \"dataset\": \"{dataset}\"}}", StringComparison.Ordinal));
            using OpenedMeasurement opened = MeasurementFolder.Open(_folder.Path);
            Assert.Equal(patterns, opened.CustomPatterns);
        }
    }

    private const string CustomModes = "{\"basis\": \"custom\", \"count\": 5, \"grid\": [2, 2], \"patterns\": \"b.npy\"}";

    private const string ModulatorWithFiles = ", \"modulator\": {\"kind\": \"phase\", \"width\": 5, \"height\": 3, \"lut\": \"lut.csv\", \"flatness\": \"flat.png\"}";

    /// <summary>Multiples of 1/8, exact in single precision.</summary>
    private static Complex[] Patterns(bool isComplex) =>
        [.. Enumerable.Range(0, 20).Select(i => new Complex(i / 8.0, isComplex ? -i / 4.0 : 0))];

    private string Message() => Assert.Throws<BadInputException>(() => MeasurementFolder.Open(_folder.Path)).Message;

    private void WriteFrames(int count)
    {
        using var stream = new BinaryWriter(File.Create(_folder.File("f.raw")));
        foreach (ushort value in SampleFrames.Make(count, FrameSize, 12).SelectMany(f => f))
        {
            stream.Write(value);
        }
    }

    private void WriteFlatness(int width, int height)
    {
        byte[] levels = new byte[width * height];
        levels[7] = 77;
        using Image<L8> image = Image.LoadPixelData<L8>(levels, width, height);
        image.SaveAsPng(_folder.File("flat.png"), new SixLabors.ImageSharp.Formats.Png.PngEncoder { ColorType = SixLabors.ImageSharp.Formats.Png.PngColorType.Grayscale });
    }

    private void WriteManifest(
        string schedule, string frames = "{\"kind\": \"raw\", \"path\": \"f.raw\", \"pixel\": \"uint16-le\"}",
        string modes = "{\"basis\": \"hadamard\", \"count\": 4, \"grid\": [2, 2]}", string modulator = "", string file = "measurement.json") =>
        _folder.Write(file, $$"""
            {"format": "tm-measurement", "version": 1, "camera": {"width": 8, "height": 6, "bit_depth": 12},
             "frames": {{frames}}, "schedule": {{schedule}}, "modes": {{modes}}{{modulator}}}
            """);

    private struct RealFirst
    {
        public double r;
        public double i;
    }

    private struct ImaginaryFirst
    {
        public float im;
        public float re;
    }
}
