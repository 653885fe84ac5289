using TmLab.Numerics;

namespace TmLab.Simulation;

/// <summary>The one meaning of a number of threads on the bench: 0 is one a processor.</summary>
internal static class BenchThreads
{
    public static ParallelOptions Options(int threads, CancellationToken cancellation)
    {
        Preconditions.InRange(threads, 0, 4096);
        return new ParallelOptions
        {
            MaxDegreeOfParallelism = threads == 0 ? Environment.ProcessorCount : threads,
            CancellationToken = cancellation,
        };
    }
}
