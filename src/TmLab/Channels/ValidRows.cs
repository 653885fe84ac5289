using System.Collections.Immutable;
using System.Runtime.InteropServices;
using TmLab.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Channels;

/// <summary>The valid rows and columns of a matrix, as a matrix of its own: invalid ones take no part in a decomposition.</summary>
public sealed class ValidRows : IRowBlockReader
{
    private readonly IRowBlockReader _source;
    private readonly bool _allColumns;

    /// <summary>Selects.</summary>
    /// <param name="source">The matrix.</param>
    /// <param name="rowValid">One flag a row.</param>
    /// <param name="columnValid">One flag a column.</param>
    public ValidRows(IRowBlockReader source, ImmutableArray<bool> rowValid, ImmutableArray<bool> columnValid)
    {
        Preconditions.SameLength(rowValid.Length, source.RowCount);
        Preconditions.SameLength(columnValid.Length, source.ColumnCount);
        _source = source;
        Rows = [.. Enumerable.Range(0, rowValid.Length).Where(p => rowValid[p])];
        Columns = [.. Enumerable.Range(0, columnValid.Length).Where(n => columnValid[n])];
        _allColumns = Columns.Length == source.ColumnCount;
    }

    /// <summary>The rows that take part, as numbers of the source.</summary>
    public ImmutableArray<int> Rows { get; }

    /// <summary>The columns that take part.</summary>
    public ImmutableArray<int> Columns { get; }

    /// <inheritdoc/>
    public int RowCount => Rows.Length;

    /// <inheritdoc/>
    public int ColumnCount => Columns.Length;

    /// <inheritdoc/>
    public void ReadRows(int firstRow, int rowCount, Span<Complex64> destination)
    {
        Preconditions.InRange(firstRow, 0, RowCount);
        Preconditions.InRange(rowCount, 0, RowCount - firstRow);
        Preconditions.AtLeast(destination.Length, (long)rowCount * ColumnCount);
        for (int done = 0; done < rowCount;)
        {
            int run = RunFrom(firstRow + done, rowCount - done);
            ReadRun(Rows[firstRow + done], run, destination.Slice(done * ColumnCount, run * ColumnCount));
            done += run;
        }
    }

    private int RunFrom(int row, int most)
    {
        int run = 1;
        while (run < most && Rows[row + run] == Rows[row] + run)
        {
            run++;
        }

        return run;
    }

    private void ReadRun(int first, int count, Span<Complex64> destination)
    {
        if (_allColumns)
        {
            _source.ReadRows(first, count, destination);
            return;
        }

        var row = new Complex64[_source.ColumnCount];
        ReadOnlySpan<int> columns = ImmutableCollectionsMarshal.AsArray(Columns);
        for (int r = 0; r < count; r++)
        {
            _source.ReadRows(first + r, 1, row);
            for (int n = 0; n < columns.Length; n++)
            {
                destination[(r * columns.Length) + n] = row[columns[n]];
            }
        }
    }
}
