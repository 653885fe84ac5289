using System.Runtime.InteropServices;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>What both engines share in summing single-precision Gram matrices of some rows into a double-precision one.</summary>
internal static unsafe class GramSum
{
    /// <summary>
    /// How many rows are summed in single precision before the sum is widened. Rounding then grows with √1024 at most, while the
    /// widening costs 1/100 or so of the product.
    /// </summary>
    public const int SingleRows = 1024;

    /// <summary>Checks the shapes of a Gram update.</summary>
    public static void Check(NativeBuffer<Complex64> tile, int rows, Complex128Matrix gram)
    {
        Preconditions.SameLength(gram.Rows, gram.Columns);
        Preconditions.InRange(rows, 0, int.MaxValue);
        Preconditions.AtLeast(tile.Length, (long)rows * gram.Columns);
    }

    /// <summary>Checks the shapes of a double-precision Gram update.</summary>
    public static void Check(Complex128Matrix tile, int rows, Complex128Matrix gram)
    {
        Preconditions.SameLength(gram.Rows, gram.Columns);
        Preconditions.SameLength(tile.Columns, gram.Columns);
        Preconditions.InRange(rows, 0, tile.Rows);
    }

    /// <summary>G += S over the upper triangles, rows of it on all cores; each element is one addition, whatever the threads.</summary>
    public static void AddUpper(NativeBuffer<Complex64> sum, Complex128Matrix gram)
    {
        int size = gram.Columns;
        Parallel.For(0, size, row =>
        {
            int length = size - row;
            ReadOnlySpan<float> from = MemoryMarshal.Cast<Complex64, float>(sum.Slice(((long)row * size) + row, length));
            Span<double> to = MemoryMarshal.Cast<System.Numerics.Complex, double>(gram.Row(row)[row..]);
            for (int k = 0; k < from.Length; k++)
            {
                to[k] += from[k];
            }
        });
    }
}
