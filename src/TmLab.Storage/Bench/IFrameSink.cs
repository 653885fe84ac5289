namespace TmLab.Storage.Bench;

/// <summary>Takes frames from front to back.</summary>
internal interface IFrameSink : IDisposable
{
    /// <summary>Takes the next frame, row-major.</summary>
    void Write(ReadOnlySpan<ushort> counts);
}
