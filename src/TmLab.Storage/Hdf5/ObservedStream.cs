using Microsoft.Win32.SafeHandles;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// The stream through which the HDF5 library reads and writes, so that we can see where in the file it does so: while
/// <see cref="Transfers"/> is set, the place of every read and write is appended to it. Without a file it forgets what is written
/// and reads zeros; that is enough to learn where the library would put something. Not thread-safe.
/// </summary>
internal sealed class ObservedStream : Stream
{
    // The library decodes headers field by field; a window of this size saves a system call for each.
    private const int WindowBytes = 16 * 1024;

    private readonly SafeFileHandle? _file;
    private readonly byte[] _window = new byte[WindowBytes];
    private readonly bool _writable;
    private long _windowStart;
    private int _windowLength;
    private long _forgottenLength;

    /// <summary>Opens a stream on a file, or on nothing.</summary>
    public ObservedStream(SafeFileHandle? file, bool writable)
    {
        _file = file;
        _writable = writable;
    }

    /// <summary>Where to note (position, length) of every transfer; null to note nothing.</summary>
    public List<(long Position, int Length)>? Transfers { get; set; }

    /// <inheritdoc/>
    public override bool CanRead => true;

    /// <inheritdoc/>
    public override bool CanSeek => true;

    /// <inheritdoc/>
    public override bool CanWrite => _writable;

    /// <inheritdoc/>
    public override long Length => _file is null ? _forgottenLength : RandomAccess.GetLength(_file);

    /// <inheritdoc/>
    public override long Position { get; set; }

    /// <inheritdoc/>
    public override void Flush()
    {
    }

    /// <inheritdoc/>
    public override int Read(byte[] buffer, int offset, int count) => Read(buffer.AsSpan(offset, count));

    /// <inheritdoc/>
    public override int Read(Span<byte> buffer)
    {
        Transfers?.Add((Position, buffer.Length));
        int count = _file is null ? ReadForgotten(buffer) : ReadFile(_file, buffer);
        Position += count;
        return count;
    }

    /// <inheritdoc/>
    public override ValueTask<int> ReadAsync(Memory<byte> buffer, CancellationToken cancellationToken = default) => new(Read(buffer.Span));

    /// <inheritdoc/>
    public override long Seek(long offset, SeekOrigin origin)
    {
        long target = origin switch
        {
            SeekOrigin.Begin => offset,
            SeekOrigin.Current => Position + offset,
            _ => Length + offset,
        };
        if (target < 0)
        {
            throw new IOException("A position before the start of the file was asked for.");
        }

        return Position = target;
    }

    /// <inheritdoc/>
    public override void SetLength(long value)
    {
        _windowLength = 0;
        _forgottenLength = value;
        if (_file is not null)
        {
            RandomAccess.SetLength(_file, value);
        }
    }

    /// <inheritdoc/>
    public override void Write(byte[] buffer, int offset, int count) => Write(buffer.AsSpan(offset, count));

    /// <inheritdoc/>
    public override void Write(ReadOnlySpan<byte> buffer)
    {
        Transfers?.Add((Position, buffer.Length));
        _windowLength = 0;
        if (_file is not null)
        {
            RandomAccess.Write(_file, buffer, Position);
        }

        Position += buffer.Length;
        _forgottenLength = Math.Max(_forgottenLength, Position);
    }

    private int ReadForgotten(Span<byte> buffer)
    {
        int count = (int)Math.Clamp(_forgottenLength - Position, 0, buffer.Length);
        buffer[..count].Clear();
        return count;
    }

    private int ReadFile(SafeFileHandle file, Span<byte> buffer)
    {
        if (buffer.Length >= WindowBytes)
        {
            return RandomAccess.Read(file, buffer, Position);
        }

        if (Position < _windowStart || Position + buffer.Length > _windowStart + _windowLength)
        {
            _windowStart = Position;
            _windowLength = RandomAccess.Read(file, _window, Position);
        }

        int count = (int)Math.Min(buffer.Length, _windowStart + _windowLength - Position);
        _window.AsSpan((int)(Position - _windowStart), count).CopyTo(buffer);
        return count;
    }
}
