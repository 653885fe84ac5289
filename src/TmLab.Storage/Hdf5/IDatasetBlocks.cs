using TmLab.Failures;

namespace TmLab.Storage.Hdf5;

/// <summary>
/// Reads blocks of a large dataset in bounded memory, from several threads at once. The dataset is seen as a table: one row for each
/// index of the first dimension, one column for each element of the others.
/// </summary>
internal interface IDatasetBlocks<T>
    where T : unmanaged
{
    /// <summary>Number of rows.</summary>
    long RowCount { get; }

    /// <summary>Number of columns.</summary>
    long ColumnCount { get; }

    /// <summary>Reads a rectangle of the table, row-major without padding, to the start of <paramref name="destination"/>.</summary>
    /// <exception cref="ArgumentException">The rectangle leaves the table or the destination is too short.</exception>
    /// <exception cref="BadInputException">The file is damaged.</exception>
    void Read(long firstRow, int rowCount, long firstColumn, int columnCount, Span<T> destination);
}
