using TmLab.Cli.Options;
using TmLab.Quantities;

namespace TmLab.Cli.Stages;

/// <summary>How stages are to be run, beside what they are to do.</summary>
internal sealed record StageContext(CommonSettings Settings, IProgress<StageProgress>? Progress, CancellationToken Cancellation);
