namespace TmLab.Measurement;

/// <summary>Where an ingested measurement goes: frames in order, then the facts, which are known only at the end.</summary>
public interface IMeasurementSink
{
    /// <summary>Takes the next frame's counts, row-major.</summary>
    void WriteFrame(int index, ReadOnlySpan<ushort> counts);

    /// <summary>Takes the facts; after that the measurement is whole.</summary>
    void Complete(MeasurementFacts facts);
}
