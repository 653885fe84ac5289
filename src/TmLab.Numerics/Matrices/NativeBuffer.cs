using System.Runtime.InteropServices;

namespace TmLab.Numerics.Matrices;

/// <summary>
/// Owns a block of native memory, aligned to 64 bytes and followed by 256 bytes of slack (native linear-algebra kernels read a
/// little past the end of their input). Not limited to 2 GiB. New memory is zero.
/// </summary>
/// <typeparam name="T">The element type.</typeparam>
/// <remarks>Not thread-safe for disposal; elements may be read and written from several threads.</remarks>
public sealed unsafe class NativeBuffer<T> : IDisposable
    where T : unmanaged
{
    /// <summary>Bytes to which the block is aligned.</summary>
    public const int AlignmentBytes = 64;

    /// <summary>Bytes kept free behind the last element.</summary>
    public const int SlackBytes = 256;

    private T* _pointer;

    /// <summary>Takes memory for <paramref name="length"/> elements.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The length is negative.</exception>
    /// <exception cref="OutOfMemoryException">The memory is not to be had.</exception>
    public NativeBuffer(long length)
    {
        Preconditions.InRange(length, 0, long.MaxValue / sizeof(T) / 2);
        Length = length;
        nuint bytes = checked((nuint)(length * sizeof(T)) + SlackBytes);
        _pointer = (T*)NativeMemory.AlignedAlloc(bytes, bytes >= LargePages.WorthwhileBytes ? LargePages.PageBytes : AlignmentBytes);
        LargePages.Advise(_pointer, bytes);
        NativeMemory.Clear(_pointer, bytes);
        GC.AddMemoryPressure((long)bytes);
    }

    /// <summary>Releases memory that was not disposed of.</summary>
    ~NativeBuffer() => Release();

    /// <summary>The number of elements.</summary>
    public long Length { get; }

    /// <summary>The first element's address.</summary>
    /// <exception cref="ObjectDisposedException">The buffer was disposed of.</exception>
    public T* Pointer
    {
        get
        {
            ObjectDisposedException.ThrowIf(_pointer is null, this);
            return _pointer;
        }
    }

    /// <summary>A window of the buffer.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The window leaves the buffer.</exception>
    public Span<T> Slice(long start, int length)
    {
        Preconditions.InRange(start, 0, Length);
        Preconditions.InRange(length, 0, Length - start);
        return new Span<T>(Pointer + start, length);
    }

    /// <summary>The whole buffer, where it has fewer than 2³¹ elements.</summary>
    /// <exception cref="ArgumentOutOfRangeException">It has more.</exception>
    public Span<T> AsSpan() => Slice(0, checked((int)Length));

    /// <inheritdoc/>
    public void Dispose()
    {
        Release();
        GC.SuppressFinalize(this);
    }

    private void Release()
    {
        if (_pointer is null)
        {
            return;
        }

        NativeMemory.AlignedFree(_pointer);
        _pointer = null;
        GC.RemoveMemoryPressure((Length * sizeof(T)) + SlackBytes);
    }
}
