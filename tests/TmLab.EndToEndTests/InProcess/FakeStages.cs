using TmLab.Channels;
using TmLab.Cli.Reports;
using TmLab.Cli.Stages;
using TmLab.Matrix;
using TmLab.Measurement;
using TmLab.Quantities;

namespace TmLab.EndToEndTests.InProcess;

/// <summary>Stages that give fixed results, or fail as a test wants, without any file.</summary>
internal sealed class FakeStages(Func<Exception>? failure = null) : IStages
{
    public StageContext? LastContext { get; private set; }

    public MaskRequest? LastMask { get; private set; }

    public PlanOutcome Plan(PlanRequest request, StageContext context) => throw new NotSupportedException();

    public SimulateOutcome Simulate(SimulateRequest request, StageContext context) => throw new NotSupportedException();

    public MeasurementFacts Ingest(IngestRequest request, StageContext context) => throw new NotSupportedException();

    public TransmissionMatrixFacts Reconstruct(ReconstructRequest request, StageContext context) =>
        Answer(context, SmallMatrix);

    public ChannelFacts FindChannels(ChannelsRequest request, StageContext context) => throw new NotSupportedException();

    public MaskOutcome MakeMask(MaskRequest request, StageContext context)
    {
        LastMask = request;
        return Answer(context, new MaskOutcome(request.Output, "mask.json", request.Targets, [.. request.Targets.Select(_ => 3.0)], 3, 3.4, []));
    }

    public ShowReport Describe(ShowRequest request, StageContext context) => throw new NotSupportedException();

    public CheckReport Check(CheckRequest request, StageContext context) => Answer(context, CheckReport.Of(request, SmallMatrix, null));

    public AboutReport DescribeProgram() => AboutReport.Collect([]);

    /// <summary>Two pixels by four modes, three-step (so that the noise cannot be known), with one warning.</summary>
    private static TransmissionMatrixFacts SmallMatrix => new(
        "a title",
        633,
        new ImageSize(2, 1),
        new GridShape(2, 2),
        Modulator: null,
        PhaseLut: null,
        Flatness: [],
        new PixelFacts([0, 0], [0, 1], [true, false], [0.5f, 0.1f], [float.NaN, float.NaN]),
        new ModeFacts([true, true, true, true], [float.NaN, float.NaN, float.NaN, float.NaN]),
        new DriftFacts(DriftMethod.TrackersInterpolated, [0, 1, 2], [0, 0.5, 1.25], [1, 0.98, 0.97], [0, 1.25], [0.1, 0.2], [0, -0.02, 0.01], [0.98, 1.01], 0.7),
        new MatrixQuality(0.5, double.NaN, 1, 4, RowsNormalised: false, ["One pixel is not valid."]));

    private T Answer<T>(StageContext context, T result)
    {
        LastContext = context;
        return failure is null ? result : throw failure();
    }
}
