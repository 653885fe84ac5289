namespace TmLab.Numerics.Matrices;

/// <summary>
/// The narrow door to a tall matrix that need not fit in memory: blocks of whole rows, read in any order. Implementations allow
/// several threads to read at once.
/// </summary>
public interface IRowBlockReader
{
    /// <summary>Number of rows (pixels, for a transmission matrix).</summary>
    int RowCount { get; }

    /// <summary>Number of columns (modes, for a transmission matrix).</summary>
    int ColumnCount { get; }

    /// <summary>Reads rows firstRow … firstRow+rowCount−1, row-major without padding, to the start of <paramref name="destination"/>.</summary>
    /// <exception cref="ArgumentException">The block leaves the matrix or the destination is too short.</exception>
    void ReadRows(int firstRow, int rowCount, Span<Complex64> destination);
}
