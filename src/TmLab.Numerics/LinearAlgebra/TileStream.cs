using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// One pass over a tall matrix, tile by tile in order: the next tile is read while the present one is worked on. Every tile is
/// checked for NaN and infinity on arrival.
/// </summary>
internal sealed class TileStream : IDisposable
{
    private readonly IRowBlockReader _reader;
    private readonly NativeBuffer<Complex64>[] _buffers;

    public TileStream(IRowBlockReader reader, SpectrumOptions options)
    {
        Preconditions.InRange(reader.ColumnCount, 1, int.MaxValue);
        Preconditions.InRange(options.TileBytes, 1, long.MaxValue);
        _reader = reader;

        // A span holds fewer than 2³¹ elements.
        long rows = Math.Clamp(options.TileBytes / (8L * reader.ColumnCount), 1, int.MaxValue / reader.ColumnCount);
        TileRows = (int)Math.Min(rows, Math.Max(1, reader.RowCount));
        _buffers = [Buffer(), Buffer()];
    }

    /// <summary>Rows of every tile but the last.</summary>
    public int TileRows { get; }

    /// <summary>The largest |real or imaginary part| seen so far.</summary>
    public float LargestPart { get; private set; }

    /// <summary>The smallest of the tiles' largest parts, tiles of zeros left out; infinite before any.</summary>
    public float SmallestScale { get; private set; } = float.PositiveInfinity;

    /// <summary>Reads all rows once.</summary>
    /// <param name="activity">For the progress.</param>
    /// <param name="work">Called with the tile, the number of its first row and its number of rows.</param>
    /// <param name="progress">May be null.</param>
    /// <param name="cancellation">Looked at before each tile.</param>
    /// <exception cref="NonFiniteMatrixException">A tile holds NaN or infinity.</exception>
    public void Pass(
        string activity,
        Action<NativeBuffer<Complex64>, int, int> work,
        IProgress<PassProgress>? progress,
        CancellationToken cancellation)
    {
        int total = _reader.RowCount;
        Task<float> arriving = Read(0);
        for (int first = 0, turn = 0; first < total; first += TileRows, turn++)
        {
            int rows = Math.Min(TileRows, total - first);
            Observe(arriving.GetAwaiter().GetResult());
            cancellation.ThrowIfCancellationRequested();
            arriving = first + rows < total ? Read(turn + 1) : Task.FromResult(0f);
            try
            {
                work(_buffers[turn % 2], first, rows);
            }
            catch
            {
                // The buffers must outlive the read that is under way.
                ((IAsyncResult)arriving).AsyncWaitHandle.WaitOne();
                throw;
            }

            progress?.Report(new PassProgress(activity, first + rows, total));
        }
    }

    public void Dispose()
    {
        foreach (NativeBuffer<Complex64> buffer in _buffers)
        {
            buffer.Dispose();
        }
    }

    private NativeBuffer<Complex64> Buffer() => new((long)TileRows * _reader.ColumnCount);

    private void Observe(float largest)
    {
        LargestPart = Math.Max(LargestPart, largest);
        SmallestScale = largest > 0 ? Math.Min(SmallestScale, largest) : SmallestScale;
    }

    private Task<float> Read(int tile)
    {
        int first = tile * TileRows, rows = Math.Min(TileRows, _reader.RowCount - first), columns = _reader.ColumnCount;
        NativeBuffer<Complex64> buffer = _buffers[tile % 2];
        return Task.Run(() =>
        {
            Span<Complex64> destination = buffer.Slice(0, rows * columns);
            _reader.ReadRows(first, rows, destination);
            return FiniteCheck.LargestPart(destination, columns, first);
        });
    }
}
