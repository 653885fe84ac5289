using System.Numerics;

namespace TmLab.Numerics.Matrices;

/// <summary>
/// A tile of complex numbers kept as two planes of reals, so that neighbouring pixels fill the lanes of a vector register.
/// Layout, stated here once: both planes have the shape (row, lane), row-major without padding; a row belongs to a pattern or a
/// mode, a lane to a pixel. Two scratch planes of the same size serve transforms that do not work in place.
/// </summary>
public readonly ref struct ModePlanes
{
    /// <summary>Takes the four planes.</summary>
    /// <param name="rows">Number of rows (patterns or modes).</param>
    /// <param name="lanes">Number of lanes (pixels), a multiple of <see cref="LaneMultiple"/>.</param>
    /// <param name="real">Real parts, at least rows · lanes.</param>
    /// <param name="imaginary">Imaginary parts, at least rows · lanes.</param>
    /// <param name="scratchReal">Scratch, at least rows · lanes.</param>
    /// <param name="scratchImaginary">Scratch, at least rows · lanes.</param>
    /// <exception cref="ArgumentException">A plane is too short or the lanes do not fill registers.</exception>
    public ModePlanes(
        int rows, int lanes, Span<float> real, Span<float> imaginary, Span<float> scratchReal, Span<float> scratchImaginary)
    {
        Preconditions.Require(lanes > 0 && lanes % LaneMultiple == 0, "Lanes must fill whole registers.");
        int size = checked(rows * lanes);
        Preconditions.AtLeast(real.Length, size);
        Preconditions.AtLeast(imaginary.Length, size);
        Preconditions.AtLeast(scratchReal.Length, size);
        Preconditions.AtLeast(scratchImaginary.Length, size);
        Rows = rows;
        Lanes = lanes;
        Real = real[..size];
        Imaginary = imaginary[..size];
        ScratchReal = scratchReal[..size];
        ScratchImaginary = scratchImaginary[..size];
    }

    /// <summary>The lanes are a multiple of this, the number of counts in a register (at least 16), so that no kernel has a tail.</summary>
    public static int LaneMultiple => Math.Max(16, Vector<ushort>.Count);

    /// <summary>Number of rows.</summary>
    public int Rows { get; }

    /// <summary>Number of lanes.</summary>
    public int Lanes { get; }

    /// <summary>Real parts, (row, lane).</summary>
    public Span<float> Real { get; }

    /// <summary>Imaginary parts, (row, lane).</summary>
    public Span<float> Imaginary { get; }

    /// <summary>Scratch for real parts.</summary>
    public Span<float> ScratchReal { get; }

    /// <summary>Scratch for imaginary parts.</summary>
    public Span<float> ScratchImaginary { get; }

    /// <summary>The real parts of one row.</summary>
    public Span<float> RealRow(int row) => Real.Slice(row * Lanes, Lanes);

    /// <summary>The imaginary parts of one row.</summary>
    public Span<float> ImaginaryRow(int row) => Imaginary.Slice(row * Lanes, Lanes);
}
