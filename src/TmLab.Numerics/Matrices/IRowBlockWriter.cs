namespace TmLab.Numerics.Matrices;

/// <summary>Where the rows of a tall matrix go. Several threads may write different rows at once; each row is written once.</summary>
public interface IRowBlockWriter
{
    /// <summary>Writes whole rows from <paramref name="firstRow"/> on, row-major without padding; their number is the source's length over the number of columns.</summary>
    /// <exception cref="ArgumentException">The block leaves the matrix or is not a whole number of rows.</exception>
    void WriteRows(int firstRow, ReadOnlySpan<Complex64> source);
}
