using TmLab.Cli.Options;
using TmLab.Quantities;

namespace TmLab.Cli.Stages;

/// <summary>How stages are to be run, beside what they are to do.</summary>
/// <param name="Settings">What every command can be told.</param>
/// <param name="Progress">Hears how far the work has come; null for quiet runs.</param>
/// <param name="Cancellation">Stops the work.</param>
internal sealed record StageContext(CommonSettings Settings, IProgress<StageProgress>? Progress, CancellationToken Cancellation)
{
    /// <summary>Takes a line that every user should see; does nothing in quiet runs.</summary>
    public Action<string> Note { get; init; } = _ => { };

    /// <summary>Takes a line on what was chosen and why, for <c>--verbose</c>.</summary>
    public Action<string> Explain { get; init; } = _ => { };

    /// <summary>The memory that the stage may use, bytes: what was given, or a quarter of the machine's.</summary>
    public long MemoryBytes => Settings.MemoryBytes ?? GC.GetGCMemoryInfo().TotalAvailableMemoryBytes / 4;

    /// <summary>The number of threads: what was given, or as many as there are processors.</summary>
    public int Threads => Settings.Threads ?? Environment.ProcessorCount;
}
