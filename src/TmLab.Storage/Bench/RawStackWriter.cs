using System.Runtime.InteropServices;
using TmLab.Measurement;

namespace TmLab.Storage.Bench;

/// <summary>Writes frames back to back, one byte or two (least significant first) a pixel.</summary>
internal sealed class RawStackWriter(FileStream stream, RawPixelFormat format) : IFrameSink
{
    public void Write(ReadOnlySpan<ushort> counts)
    {
        if (format == RawPixelFormat.UInt8)
        {
            byte[] low = new byte[counts.Length];
            for (int i = 0; i < low.Length; i++)
            {
                low[i] = (byte)counts[i];
            }

            stream.Write(low);
            return;
        }

        stream.Write(MemoryMarshal.AsBytes(counts));
    }

    public void Dispose() => stream.Dispose();
}
