using System.Buffers.Binary;
using System.Runtime.InteropServices;
using TmLab.Measurement;

namespace TmLab.Storage.Frames;

/// <summary>Reads runs of raw pixels from a stream.</summary>
internal static class RawPixels
{
    private const int WidenBlock = 1 << 16;

    /// <summary>Bytes a pixel.</summary>
    public static int BytesOf(RawPixelFormat format) => format == RawPixelFormat.UInt8 ? 1 : 2;

    /// <summary>Fills <paramref name="destination"/> from the stream's position.</summary>
    /// <exception cref="EndOfStreamException">The stream ends before.</exception>
    public static void Read(Stream stream, RawPixelFormat format, Span<ushort> destination)
    {
        if (format == RawPixelFormat.UInt8)
        {
            ReadBytes(stream, destination);
            return;
        }

        stream.ReadExactly(MemoryMarshal.AsBytes(destination));
        if (BitConverter.IsLittleEndian == (format == RawPixelFormat.UInt16BigEndian))
        {
            BinaryPrimitives.ReverseEndianness(destination, destination);
        }
    }

    /// <summary>Widens bytes to 16 bits.</summary>
    public static void Widen(ReadOnlySpan<byte> source, Span<ushort> destination)
    {
        int vectorised = 0;
        if (System.Numerics.Vector.IsHardwareAccelerated)
        {
            int lanes = System.Numerics.Vector<byte>.Count;
            for (; vectorised <= source.Length - lanes; vectorised += lanes)
            {
                System.Numerics.Vector.Widen(new System.Numerics.Vector<byte>(source[vectorised..]), out var low, out var high);
                low.CopyTo(destination[vectorised..]);
                high.CopyTo(destination[(vectorised + (lanes / 2))..]);
            }
        }

        for (int i = vectorised; i < source.Length; i++)
        {
            destination[i] = source[i];
        }
    }

    private static void ReadBytes(Stream stream, Span<ushort> destination)
    {
        byte[] block = System.Buffers.ArrayPool<byte>.Shared.Rent(WidenBlock);
        for (int at = 0; at < destination.Length; at += WidenBlock)
        {
            Span<byte> bytes = block.AsSpan(0, Math.Min(WidenBlock, destination.Length - at));
            stream.ReadExactly(bytes);
            Widen(bytes, destination[at..]);
        }

        System.Buffers.ArrayPool<byte>.Shared.Return(block);
    }
}
