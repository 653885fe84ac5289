using TmLab.Failures;
using TmLab.Numerics.Matrices;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Rows of a complex matrix in a stage file.</summary>
internal sealed class StoredRows : IRowBlockReader
{
    private readonly IDatasetBlocks<Complex64> _blocks;

    /// <summary>Opens the matrix.</summary>
    /// <exception cref="BadInputException">It is missing, damaged or of another type or rank.</exception>
    public StoredRows(StageFileReader file, string path)
    {
        _blocks = file.OpenBlocks<Complex64>(path, 2);
        if (_blocks.RowCount > int.MaxValue || _blocks.ColumnCount > int.MaxValue)
        {
            throw DamagedFiles.Damaged(file.Path, path, $"has shape {_blocks.RowCount} × {_blocks.ColumnCount}");
        }
    }

    /// <inheritdoc/>
    public int RowCount => (int)_blocks.RowCount;

    /// <inheritdoc/>
    public int ColumnCount => (int)_blocks.ColumnCount;

    /// <inheritdoc/>
    public void ReadRows(int firstRow, int rowCount, Span<Complex64> destination) =>
        _blocks.Read(firstRow, rowCount, 0, ColumnCount, destination);
}
