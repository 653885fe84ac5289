using System.Numerics;
using System.Runtime.InteropServices;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Refuses NaN and infinity before a library sees them, and tells the range of magnitudes on the way.</summary>
public static class FiniteCheck
{
    private const int ExponentMask = 0x7F80_0000;
    private const int MagnitudeMask = 0x7FFF_FFFF;

    /// <summary>The largest |real or imaginary part| of some rows; 0 for no elements.</summary>
    /// <param name="rows">Whole rows, row-major.</param>
    /// <param name="columns">Elements a row, ≥ 1.</param>
    /// <param name="firstRow">The number of the first row, for the message.</param>
    /// <exception cref="NonFiniteMatrixException">Some part is NaN or infinite.</exception>
    public static float LargestPart(ReadOnlySpan<Complex64> rows, int columns, long firstRow = 0)
    {
        Preconditions.InRange(columns, 1, int.MaxValue);
        int largest = LargestMagnitudeBits(MemoryMarshal.Cast<Complex64, int>(rows));
        if (largest >= ExponentMask)
        {
            ThrowAtFirst(rows, columns, firstRow);
        }

        return BitConverter.Int32BitsToSingle(largest);
    }

    // Magnitudes of IEEE 754 numbers order as their bits do; infinity and NaN stand above all finite ones.
    private static int LargestMagnitudeBits(ReadOnlySpan<int> parts)
    {
        var mask = new Vector<int>(MagnitudeMask);
        Vector<int> best = Vector<int>.Zero;
        int vectorised = parts.Length - (parts.Length % Vector<int>.Count);
        for (int k = 0; k < vectorised; k += Vector<int>.Count)
        {
            best = Vector.Max(best, new Vector<int>(parts[k..]) & mask);
        }

        int largest = 0;
        for (int lane = 0; lane < Vector<int>.Count; lane++)
        {
            largest = Math.Max(largest, best[lane]);
        }

        foreach (int part in parts[vectorised..])
        {
            largest = Math.Max(largest, part & MagnitudeMask);
        }

        return largest;
    }

    private static void ThrowAtFirst(ReadOnlySpan<Complex64> rows, int columns, long firstRow)
    {
        int index = 0;
        while (rows[index].IsFinite)
        {
            index++;
        }

        throw new NonFiniteMatrixException(firstRow + (index / columns), index % columns);
    }
}
