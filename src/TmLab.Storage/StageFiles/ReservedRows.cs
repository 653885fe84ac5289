using TmLab.Numerics;
using TmLab.Numerics.Matrices;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Rows of a complex matrix on their way to a stage file.</summary>
internal sealed class ReservedRows : IRowBlockWriter
{
    private readonly ReservedDataset<Complex64> _dataset;
    private readonly int _rows;
    private readonly int _columns;

    /// <summary>Describes a matrix of rows × columns, both at least 1.</summary>
    public ReservedRows(string path, string units, int rows, int columns)
    {
        Preconditions.InRange(rows, 1, int.MaxValue);
        Preconditions.InRange(columns, 1, int.MaxValue);
        _rows = rows;
        _columns = columns;
        _dataset = new ReservedDataset<Complex64>(path, units, (ulong)rows, (ulong)columns);
    }

    /// <summary>The dataset.</summary>
    public ReservedDataset<Complex64> Dataset => _dataset;

    /// <inheritdoc/>
    public void WriteRows(int firstRow, ReadOnlySpan<Complex64> source)
    {
        Preconditions.Require(source.Length % _columns == 0, "The source is not a whole number of rows.");
        Preconditions.InRange(firstRow, 0, _rows - (source.Length / _columns));
        _dataset.Write((long)firstRow * _columns, source);
    }
}
