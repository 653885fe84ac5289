using System.Collections.Immutable;
using TmLab.Channels;
using TmLab.Cli.Help;
using TmLab.Cli.Options;
using TmLab.Cli.Reports;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Planning;
using TmLab.Reconstruction;
using TmLab.Shaping;
using TmLab.Simulation;
using TmLab.Storage.AtomicFiles;
using TmLab.Storage.Bench;
using TmLab.Storage.Ingest;
using TmLab.Storage.Manifest;
using TmLab.Storage.Masks;
using TmLab.Storage.Plans;
using TmLab.Storage.StageFiles;

namespace TmLab.Cli.Stages;

/// <summary>The stages on real files.</summary>
internal sealed class StoredStages : IStages
{
    public PlanOutcome Plan(PlanRequest request, StageContext context)
    {
        RefuseTakenFolder(request.Output, context);
        PlanSettings settings = request.Repair is { } matrix
            ? RepairSource.Load(matrix, request.Measurement, request.Settings)
            : PlanInputs.Load(request.Settings, request.Patterns, request.Lut, request.Flatness);
        var plan = MeasurementPlan.Make(settings);
        int images = PlanFolder.Write(request.Output, context.Settings.Force, plan, Threads(context), context.Progress, context.Cancellation);
        return new PlanOutcome(plan, images);
    }

    public SimulateOutcome Simulate(SimulateRequest request, StageContext context)
    {
        RefuseTakenFolder(request.Output, context);
        OpenedPlan plan = MeasurementFolder.OpenPlan(request.Input);
        BenchSettings settings = BenchFor(request, plan);
        using var bench = VirtualBench.Create(
            settings, plan.Manifest, plan.Schedule, plan.CustomPatterns, Threads(context), context.Cancellation);
        MeasurementManifest written = SimulatedFolder.Write(
            request.Output, context.Settings.Force, plan, bench, request.Frames, Threads(context), context.Progress, context.Cancellation);
        double range = bench.Truth.DriftPhaseRad.Max() - bench.Truth.DriftPhaseRad.Min();
        return new SimulateOutcome(written, bench.FrameSize, bench.FrameCount, request.Bench.MediumInWords, settings, range);
    }

    public MeasurementFacts Ingest(IngestRequest request, StageContext context)
    {
        RefuseTaken(request.Output, context);
        using OpenedMeasurement measurement = request.Second is { } second
            ? MergedMeasurement.Open(request.Folder, second)
            : MeasurementFolder.Open(request.Folder);
        StageProvenance provenance = Provenance.Of(context, [measurement.ManifestPath], new { request.Folder, request.Second });
        using var writer = new MeasurementFileWriter(
            request.Output, context.Settings.Force, provenance, measurement.Frames.FrameCount, measurement.Frames.FrameSize);
        return Ingestion.Run(measurement, writer, context.Progress, context.Cancellation);
    }

    public TransmissionMatrixFacts Reconstruct(ReconstructRequest request, StageContext context)
    {
        RefuseTaken(request.Output, context);
        using var measurement = new MeasurementFileReader(request.Input);
        var defaults = new ReconstructionSettings();
        ReconstructionSettings settings = defaults with
        {
            MemoryBytes = context.MemoryBytes,
            Threads = context.Threads,
            Drift = request.Drift ?? defaults.Drift,
        };
        StageProvenance provenance = Provenance.Of(context, [request.Input], settings);
        MeasurementFacts facts = measurement.Facts;
        var plan = TilePlan.For(measurement.FrameCount, facts.Manifest.Modes.ModeCount, facts.PixelCount, settings);
        context.Explain(
            $"memory {ByteSize.Format(settings.MemoryBytes)}: {plan.TileCount} tiles of {plan.TilePixels} pixels, "
            + $"{ByteSize.Format(plan.TileBytes)} each, {plan.Threads} at a time");
        using var writer = new MatrixFileWriter(
            request.Output, context.Settings.Force, provenance, facts.PixelCount, facts.Manifest.Modes.ModeCount);
        TransmissionMatrixFacts matrix =
            MatrixReconstruction.Run(measurement, facts, settings, writer, context.Progress, context.Cancellation);
        writer.Complete(matrix);
        return matrix;
    }

    public ChannelFacts FindChannels(ChannelsRequest request, StageContext context)
    {
        RefuseTaken(request.Output, context);
        using var matrix = new MatrixFileReader(request.Input);
        ChannelSettings settings = ChannelSettings.Within(context.MemoryBytes) with { Leading = request.Leading };
        context.Explain($"memory {ByteSize.Format(context.MemoryBytes)}: tiles of {ByteSize.Format(settings.TileBytes)}, two at a time");
        var analysis = new ChannelAnalysis(matrix, matrix.Facts, request.Input, settings, Engine(context));
        StageProvenance provenance = Provenance.Of(context, [request.Input], settings);
        using var writer = new ChannelFileWriter(
            request.Output, context.Settings.Force, provenance, analysis.PixelCount, analysis.ModeCount, analysis.ChannelCount);
        ChannelFacts facts = analysis.ChannelCount == 0
            ? analysis.Run(null, null, context.Progress, context.Cancellation)
            : analysis.Run(writer.InputModes, writer.OutputModes, context.Progress, context.Cancellation);
        writer.Complete(facts);
        return facts;
    }

    public MaskOutcome MakeMask(MaskRequest request, StageContext context)
    {
        RefuseTaken(request.Output, context);
        using var matrix = new MatrixFileReader(request.Input);
        ImmutableArray<FocusTarget> targets = [.. request.Targets.Select(t => new FocusTarget(t))];
        FocusMask mask = FocusMask.Make(matrix, matrix.Facts, request.Input, targets);
        var origin = new MaskOrigin(request.Input, matrix.Seal, VersionFlag.Version, TimeProvider.System.GetUtcNow());
        MaskFile.Write(request.Output, context.Settings.Force, mask, matrix.Facts, origin);
        return MaskOutcome.From(request, mask);
    }

    public ShowReport Describe(ShowRequest request, StageContext context) => StageDescription.Of(request.Input);

    public CheckReport Check(CheckRequest request, StageContext context)
    {
        ImmutableArray<string>? verified = request.Verify ? StageFile.Verify(request.Input, context.Progress, context.Cancellation) : null;
        StageFormat format = StageFile.Describe(request.Input).Format;
        if (format != StageFormat.Matrix && (!request.Verify || !request.Requirements.IsEmpty))
        {
            throw new BadInputException(
                request.Input, null, $"holds a {format.Contents}; only a matrix is judged", "give the file that 'reconstruct' wrote, or --verify alone");
        }

        if (format != StageFormat.Matrix)
        {
            return CheckReport.OfChecksums(request.Input, format.Contents, verified);
        }

        using var matrix = new MatrixFileReader(request.Input);
        return CheckReport.Of(request, matrix.Facts, verified);
    }

    public AboutReport DescribeProgram() => AboutReport.Collect(
    [
        .. new[] { EngineChoice.Native, EngineChoice.Managed }.Select(choice =>
        {
            EngineSelection found = LinearAlgebraEngines.Choose(choice);
            return new EngineSection(
                choice.ToString().ToLowerInvariant(), found.Succeeded, found.Engine?.Description ?? found.Explanation ?? "");
        }),
    ]);

    /// <summary>A plan that leaves the frame size to the frames cannot be simulated, and faults must name its frames.</summary>
    private static BenchSettings BenchFor(SimulateRequest request, OpenedPlan plan)
    {
        string manifest = Path.GetFileName(plan.ManifestPath);
        if (plan.Manifest.Camera.Size is null)
        {
            throw new BadInputException(manifest, "camera", "width and height are not given, so there is nothing to simulate", "add camera.width and camera.height");
        }

        int frames = plan.Schedule.Frames.Length;
        BenchSettings bench = request.Bench.For(plan.Manifest, PlanExpectationsJson.Read(Path.GetDirectoryName(plan.ManifestPath)!));
        ImmutableArray<InputProblem> wrong =
        [
            .. bench.Faults.Where(f => f.Frame >= frames)
                .Select(f => new InputProblem("--fault", null, $"frame {f.Frame} is none of the {frames} frames", $"name one from 0 to {frames - 1}")),
        ];
        return wrong.IsEmpty ? bench : throw new BadInputException(wrong);
    }

    private static void RefuseTakenFolder(string output, StageContext context) =>
        AtomicFolder.RefuseTaken(Path.TrimEndingDirectorySeparator(output), context.Settings.Force, ManifestJson.FileName);

    private static int Threads(StageContext context) => context.Settings.Threads ?? Environment.ProcessorCount;

    /// <summary>Before any long work: reading and digesting the input may take minutes.</summary>
    private static void RefuseTaken(string output, StageContext context) => AtomicOutput.RefuseTaken(output, context.Settings.Force);

    private static ILinearAlgebraEngine Engine(StageContext context)
    {
        EngineSelection found = LinearAlgebraEngines.Choose(context.Settings.Engine);
        if (found.Engine is not ILinearAlgebraEngine engine)
        {
            throw new NumericalException(found.Explanation ?? "no linear-algebra engine was found", "install OpenBLAS, or use --engine managed");
        }

        if (found.Explanation is string fallback)
        {
            context.Note(fallback);
        }

        context.Explain($"engine {engine.Description}");
        return engine;
    }
}
