using System.Globalization;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>A matrix holds NaN or an infinity where finite numbers are needed. Carries the first such place.</summary>
public sealed class NonFiniteMatrixException : Exception
{
    /// <summary>Reports the first place.</summary>
    public NonFiniteMatrixException(long row, long column)
        : base(string.Create(CultureInfo.InvariantCulture, $"The matrix is not finite at row {row}, column {column}."))
    {
        Row = row;
        Column = column;
    }

    /// <summary>The row, from 0.</summary>
    public long Row { get; }

    /// <summary>The column, from 0.</summary>
    public long Column { get; }
}
