using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Measurement.Bases;
using TmLab.Planning;
using TmLab.Quantities;
using TmLab.Shaping;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Images;
using TmLab.Storage.Manifest;
using TmLab.Storage.Plans;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Plans;

public sealed class PlanFolderTests : IDisposable
{
    private static readonly GridShape s_grid = new(4, 8);

    private static readonly PlanSettings s_phase = new()
    {
        Modes = new ModeDescription(BasisKind.Fourier, HadamardOrdering.Natural, 32, s_grid, null, null),
        Modulator = new ModulatorDescription(ModulatorKind.Phase, new ImageSize(50, 30), new PixelRectangle(5, 3, 41, 22), null, null, null),
        // A panel of more than one turn whose grey levels do not begin at 0.
        PhaseLut = new GrayPhaseTable([10, 100, 210], [0.3, 3.1, 6.9]),
        Flatness = [.. Enumerable.Range(0, 50 * 30).Select(i => (byte)(i * 7))],
    };

    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Images_read_back_give_the_planned_phases_within_half_a_level()
    {
        MeasurementPlan plan = Write(s_phase);
        var panel = new PanelPatterns(s_phase);
        var basis = new FourierBasis(s_grid);
        ImmutableArray<PanelImage> images = panel.Images(plan.Schedule);
        Assert.Equal(32 * 4, images.Length);
        foreach (PanelImage image in images)
        {
            ModulatorImage read = ReadImage(image);
            Assert.Equal((s_phase.Modulator.Size, ModulatorImageDepth.EightBit), (read.Size, read.Depth));
            for (int i = 0; i < read.Levels.Length; i++)
            {
                AssertPixel(basis, image, i, (byte)(read.Levels[i] - s_phase.Flatness[i]));
            }
        }
    }

    [Fact]
    public void On_off_patterns_are_images_of_one_bit()
    {
        PlanSettings settings = s_phase with
        {
            Modes = s_phase.Modes with { Basis = BasisKind.HadamardBinary },
            Modulator = s_phase.Modulator with { Kind = ModulatorKind.Amplitude },
            StepDevice = StepDevice.ReferenceArm,
            PhaseLut = null,
            Flatness = [],
        };
        MeasurementPlan plan = Write(settings);
        var basis = new HadamardBinaryBasis(32, HadamardOrdering.Natural);
        ImmutableArray<PanelImage> images = new PanelPatterns(settings).Images(plan.Schedule);
        Assert.Equal(32, images.Length);
        foreach (PanelImage image in images)
        {
            ModulatorImage read = ReadImage(image);
            Assert.Equal(ModulatorImageDepth.OneBit, read.Depth);
            Assert.All(Enumerable.Range(0, read.Levels.Length), i =>
                Assert.Equal(MacroPixel(settings, i) is { } n ? basis.Element(image.Pattern, n).Real : 0, read.Levels[i]));
        }
    }

    [Fact]
    public void The_folder_opens_as_the_plan_and_display_names_an_image_for_every_frame_that_needs_one()
    {
        MeasurementPlan plan = Write(s_phase);
        OpenedPlan opened = MeasurementFolder.OpenPlan(Folder);
        Assert.Equal(plan.Schedule.Frames.AsEnumerable(), opened.Schedule.Frames);
        Assert.Equal(plan.Manifest.Modes, opened.Manifest.Modes);
        Assert.Equal(plan.Manifest.Modulator, opened.Manifest.Modulator);
        Assert.Equal(s_phase.PhaseLut!.PhaseRad.AsEnumerable(), opened.PhaseLut!.PhaseRad);
        Assert.Equal(s_phase.Flatness.AsEnumerable(), opened.Flatness);
        Assert.Equal(PlanExpectations.Of(s_phase), PlanExpectationsJson.Read(Folder));

        string[] display = File.ReadAllLines(Path.Combine(Folder, PlanFolder.DisplayFile));
        Assert.Equal(plan.Schedule.Frames.Length + 1, display.Length);
        Assert.All(plan.Schedule.Frames.Where(f => f.IsStepped), f => Assert.True(File.Exists(Path.Combine(Folder, display[f.Index + 1].Split(',')[1]))));
        Assert.All(plan.Schedule.FramesWith(FrameRole.Dark), f => Assert.EndsWith(",", display[f + 1], StringComparison.Ordinal));
    }

    [Fact]
    public void Custom_patterns_come_back_to_the_last_bit()
    {
        ImmutableArray<Complex> patterns =
            [.. Enumerable.Range(0, 40 * 32).Select(i => Complex.FromPolarCoordinates(1, 0.37 * i * ((i % 11) + 1)))];
        PlanSettings settings = s_phase with
        {
            Modes = s_phase.Modes with { Basis = BasisKind.Custom, PatternCount = 40 },
            CustomPatterns = patterns,
            StepDevice = StepDevice.SignalArm,
        };
        Write(settings);
        Assert.Equal(patterns.AsEnumerable(), MeasurementFolder.OpenPlan(Folder).CustomPatterns);
    }

    [Fact]
    public void An_existing_folder_is_kept_and_one_of_other_things_is_kept_even_with_force()
    {
        Write(s_phase);
        var plan = MeasurementPlan.Make(s_phase);
        Assert.Equal(OutputFailure.Exists, Assert.Throws<OutputException>(() => PlanFolder.Write(Folder, overwrite: false, plan, 1, cancel: TestContext.Current.CancellationToken)).Failure);
        PlanFolder.Write(Folder, overwrite: true, plan, 1, cancel: TestContext.Current.CancellationToken);

        string other = _folder.File("photographs");
        Directory.CreateDirectory(other);
        File.WriteAllText(Path.Combine(other, "holiday.txt"), "dear");
        Assert.Throws<OutputException>(() => PlanFolder.Write(other, overwrite: true, plan, 1, cancel: TestContext.Current.CancellationToken));
        Assert.Equal("dear", File.ReadAllText(Path.Combine(other, "holiday.txt")));
    }

    [Fact]
    public void A_plan_that_is_stopped_leaves_nothing()
    {
        using var source = new CancellationTokenSource();
        var stop = new Stopper(source);
        Assert.ThrowsAny<OperationCanceledException>(() => PlanFolder.Write(Folder, false, MeasurementPlan.Make(s_phase), 1, stop, source.Token));
        Assert.Empty(Directory.EnumerateFileSystemEntries(_folder.Path));
    }

    [Fact]
    public void What_a_killed_run_left_is_swept_and_what_it_was_replacing_is_restored()
    {
        Directory.CreateDirectory(Folder + AtomicOutput.TemporarySuffix);
        Directory.CreateDirectory(Folder + ".tmlab-replaced");
        File.WriteAllText(Path.Combine(Folder + ".tmlab-replaced", "measurement.json"), "{}");
        using (AtomicFolder.Begin(Folder, overwrite: true, "measurement.json"))
        {
            Assert.Equal("{}", File.ReadAllText(Path.Combine(Folder, "measurement.json")));
        }

        Assert.Equal([Folder], Directory.EnumerateFileSystemEntries(_folder.Path));
    }

    private string Folder => _folder.File("plan");

    private MeasurementPlan Write(PlanSettings settings)
    {
        var plan = MeasurementPlan.Make(settings);
        PlanFolder.Write(Folder, overwrite: false, plan, threads: 2);
        return plan;
    }

    private ModulatorImage ReadImage(PanelImage image)
    {
        using FileStream stream = File.OpenRead(Path.Combine(Folder, PlanFolder.FileOf(image)));
        return ModulatorImageFile.Read(stream, image.Name);
    }

    /// <summary>The macro-pixel of a panel pixel; null outside the region.</summary>
    private static int? MacroPixel(PlanSettings settings, int index)
    {
        PixelRectangle region = settings.Modulator.Region;
        int x = (index % settings.Modulator.Size.Width) - region.X;
        int y = (index / settings.Modulator.Size.Width) - region.Y;
        return x < 0 || y < 0 || x >= region.Width || y >= region.Height
            ? null
            : (y * s_grid.Rows / region.Height * s_grid.Columns) + (x * s_grid.Columns / region.Width);
    }

    private static void AssertPixel(FourierBasis basis, PanelImage image, int index, byte gray)
    {
        if (MacroPixel(s_phase, index) is not { } mode)
        {
            Assert.Equal(0, gray);
            return;
        }

        // The table by hand: linear between its three rows; the steeper half has 3.8 rad over 110 levels.
        double shown = gray <= 100 ? 0.3 + ((gray - 10) * 2.8 / 90) : 3.1 + ((gray - 100) * 3.8 / 110);
        double wanted = basis.Element(image.Pattern, mode).Phase + (2 * Math.PI * image.Step / 4);
        Assert.InRange(Math.Abs(Math.IEEERemainder(shown - wanted, 2 * Math.PI)), 0, (3.8 / 110 / 2) + 1e-9);
    }

    private sealed class Stopper(CancellationTokenSource source) : IProgress<StageProgress>
    {
        public void Report(StageProgress value) => source.Cancel();
    }
}
