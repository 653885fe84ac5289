using TmLab.Channels;
using TmLab.Cli.Reports;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Cli.Stages;

/// <summary>
/// The seam between the command line and the work: each member does one stage from named files to named files. Failures are those
/// of TmLab.Failures; cancellation throws and leaves nothing half-written.
/// </summary>
internal interface IStages
{
    PlanOutcome Plan(PlanRequest request, StageContext context);

    SimulateOutcome Simulate(SimulateRequest request, StageContext context);

    MeasurementFacts Ingest(IngestRequest request, StageContext context);

    TransmissionMatrixFacts Reconstruct(ReconstructRequest request, StageContext context);

    ChannelFacts FindChannels(ChannelsRequest request, StageContext context);

    MaskOutcome MakeMask(MaskRequest request, StageContext context);

    ShowReport Describe(ShowRequest request, StageContext context);

    CheckReport Check(CheckRequest request, StageContext context);

    AboutReport DescribeProgram();
}
