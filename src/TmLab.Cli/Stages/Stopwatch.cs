namespace TmLab.Cli.Stages;

/// <summary>Times a stage for its report.</summary>
internal static class Stopwatch
{
    /// <summary>The work's result and how long it took, seconds.</summary>
    public static (T Result, double ElapsedS) Time<T>(Func<T> work)
    {
        long start = System.Diagnostics.Stopwatch.GetTimestamp();
        T result = work();
        return (result, Math.Round(System.Diagnostics.Stopwatch.GetElapsedTime(start).TotalSeconds, 3));
    }
}
