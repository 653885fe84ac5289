using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace TmLab.Numerics.Kernels;

/// <summary>Σ x² of single-precision numbers, summed in single precision over runs of 256 and in double precision over the runs.</summary>
public static class SquaredNorm
{
    private const int Run = 256;

    /// <summary>The sum; its relative error is below 2⁻¹⁹ (a run of 256 on eight or more lanes, all terms positive).</summary>
    public static double Of(ReadOnlySpan<float> values)
    {
        double sum = 0;
        for (; values.Length >= Run; values = values[Run..])
        {
            sum += OfRun(values[..Run]);
        }

        foreach (float value in values)
        {
            sum += (double)value * value;
        }

        return sum;
    }

    // Sixteen partial sums whatever the register's width, so that the result does not depend on it.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static double OfRun(ReadOnlySpan<float> run)
    {
        Span<float> partial = stackalloc float[16];
        partial.Clear();
        Span<Vector<float>> lanes = MemoryMarshal.Cast<float, Vector<float>>(partial);
        ReadOnlySpan<Vector<float>> vectors = MemoryMarshal.Cast<float, Vector<float>>(run);
        for (int v = 0; v < vectors.Length; v++)
        {
            lanes[v % lanes.Length] += vectors[v] * vectors[v];
        }

        double sum = 0;
        foreach (float part in partial)
        {
            sum += part;
        }

        return sum;
    }
}
