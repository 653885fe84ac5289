using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace TmLab.Numerics.Kernels;

/// <summary>y −= factor · x, for lanes that fill whole registers.</summary>
public static class SubtractScaled
{
    /// <summary>Subtracts in place.</summary>
    /// <param name="target">y, a whole number of registers.</param>
    /// <param name="values">x, as long.</param>
    /// <param name="factor">The factor.</param>
    /// <exception cref="ArgumentException">Lengths disagree or leave a tail.</exception>
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public static void Run(Span<float> target, ReadOnlySpan<float> values, float factor)
    {
        Preconditions.SameLength(values.Length, target.Length);
        Preconditions.Require(target.Length % Vector<float>.Count == 0, "The lanes must fill whole registers.");
        Span<Vector<float>> y = MemoryMarshal.Cast<float, Vector<float>>(target);
        ReadOnlySpan<Vector<float>> x = MemoryMarshal.Cast<float, Vector<float>>(values);
        for (int v = 0; v < y.Length; v++)
        {
            y[v] -= x[v] * factor;
        }
    }
}
