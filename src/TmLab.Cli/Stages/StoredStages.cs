using TmLab.Channels;
using TmLab.Cli.Reports;
using TmLab.Matrix;
using TmLab.Measurement;

namespace TmLab.Cli.Stages;

/// <summary>The stages on real files.</summary>
internal sealed class StoredStages : IStages
{
    public MeasurementFacts Ingest(IngestRequest request, StageContext context) =>
        throw new NotSupportedException("ingest is not connected yet");

    public TransmissionMatrixFacts Reconstruct(ReconstructRequest request, StageContext context) =>
        throw new NotSupportedException("reconstruct is not connected yet");

    public ChannelFacts FindChannels(ChannelsRequest request, StageContext context) =>
        throw new NotSupportedException("channels is not connected yet");

    public MaskOutcome MakeMask(MaskRequest request, StageContext context) =>
        throw new NotSupportedException("mask is not connected yet");

    public ShowReport Describe(ShowRequest request, StageContext context) =>
        throw new NotSupportedException("show is not connected yet");

    public AboutReport DescribeProgram() => AboutReport.Collect(engines: []);
}
