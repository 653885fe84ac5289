using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// C += op(A)·B on all cores, for the engine that has no library behind it. Blocks of 256 terms are packed into planes of real
/// and imaginary parts, so that 4 rows of A by one vector of B's columns is computed in registers:
/// re += a.re·b.re − a.im·b.im, im += a.re·b.im + a.im·b.re (the packing order of Goto and van de Geijn, ACM Trans. Math. Softw.
/// 34, 12 (2008)). A block's sum is in <c>T</c>, the sum of blocks in <c>TSum</c>. Each element is summed in one fixed order,
/// so results are the same to the bit for any number of threads.
/// </summary>
/// <typeparam name="T">float or double: the parts of A and B.</typeparam>
/// <typeparam name="TSum">float or double: the parts of C.</typeparam>
internal static unsafe class ComplexProductKernel<T, TSum>
    where T : unmanaged, INumber<T>
    where TSum : unmanaged, INumber<TSum>
{
    private const int RowsAtOnce = 4;
    private const int Block = 256;
    private const int PanelsAtOnce = 4;

    private static int Lanes => Vector256<T>.Count;

    /// <summary>How op(A) is stored.</summary>
    /// <param name="Parts">Interleaved parts, row-major.</param>
    /// <param name="Stride">Elements from one stored row to the next.</param>
    /// <param name="Adjoint">False: stored M × K. True: stored K × M, and its conjugate transpose is meant.</param>
    public readonly record struct Operand(nint Parts, int Stride, bool Adjoint)
    {
        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Read(int row, int term, out T real, out T imaginary)
        {
            T* at = (T*)Parts + (2 * (Adjoint ? ((long)term * Stride) + row : ((long)row * Stride) + term));
            real = at[0];
            imaginary = Adjoint ? -at[1] : at[1];
        }
    }

    /// <summary>C += op(A)·B.</summary>
    /// <param name="a">op(A), M × K.</param>
    /// <param name="b">B's parts, row-major K × N.</param>
    /// <param name="c">C's parts, row-major M × N.</param>
    /// <param name="shape">M, N, K.</param>
    /// <param name="upperOnly">Whether only blocks that touch column ≥ row are needed (the others may stay undone).</param>
    public static void Accumulate(Operand a, T* b, TSum* c, ProductShape shape, bool upperOnly)
    {
        int columnPanels = (shape.N + Lanes - 1) / Lanes;
        int rowPanels = (shape.M + RowsAtOnce - 1) / RowsAtOnce;
        using var packed = new NativeBuffer<T>((long)columnPanels * Block * 2 * Lanes);
        nint packedAt = (nint)packed.Pointer, bAt = (nint)b, cAt = (nint)c;
        for (int first = 0; first < shape.K; first += Block)
        {
            int start = first, terms = Math.Min(Block, shape.K - first);
            Parallel.For(0, columnPanels, panel => PackColumns((T*)bAt, (T*)packedAt, panel, start, terms, shape.N));
            Parallel.For(0, (rowPanels + PanelsAtOnce - 1) / PanelsAtOnce, group =>
            {
                int last = Math.Min(rowPanels, (group + 1) * PanelsAtOnce);
                for (int panel = group * PanelsAtOnce; panel < last; panel++)
                {
                    RowPanel(a, (T*)packedAt, (TSum*)cAt, panel, start, terms, shape, upperOnly);
                }
            });
        }
    }

    private static T* Panel(T* packed, int panel) => packed + ((long)panel * Block * 2 * Lanes);

    private static void PackColumns(T* b, T* packed, int panel, int first, int terms, int columns)
    {
        T* to = Panel(packed, panel);
        int firstColumn = panel * Lanes, width = Math.Min(Lanes, columns - firstColumn);
        for (int k = 0; k < terms; k++, to += 2 * Lanes)
        {
            T* from = b + (2 * (((long)(first + k) * columns) + firstColumn));
            for (int j = 0; j < Lanes; j++)
            {
                to[j] = j < width ? from[2 * j] : T.Zero;
                to[Lanes + j] = j < width ? from[(2 * j) + 1] : T.Zero;
            }
        }
    }

    private static void RowPanel(
        Operand a, T* packed, TSum* c, int panel, int first, int terms, ProductShape shape, bool upperOnly)
    {
        T* rows = stackalloc T[2 * RowsAtOnce * Block];
        T* result = stackalloc T[2 * RowsAtOnce * Lanes];
        int firstRow = panel * RowsAtOnce, height = Math.Min(RowsAtOnce, shape.M - firstRow);
        PackRows(a, rows, firstRow, height, first, terms);
        int columnPanels = (shape.N + Lanes - 1) / Lanes;
        for (int column = upperOnly ? firstRow / Lanes : 0; column < columnPanels; column++)
        {
            Tile(rows, Panel(packed, column), terms, result);
            int firstColumn = column * Lanes;
            Store(result, c + (2 * (((long)firstRow * shape.N) + firstColumn)), height, Math.Min(Lanes, shape.N - firstColumn), shape.N);
        }
    }

    private static void PackRows(Operand a, T* rows, int firstRow, int height, int first, int terms)
    {
        for (int k = 0; k < terms; k++)
        {
            for (int i = 0; i < RowsAtOnce; i++)
            {
                T real = T.Zero, imaginary = T.Zero;
                if (i < height)
                {
                    a.Read(firstRow + i, first + k, out real, out imaginary);
                }

                rows[(2 * ((k * RowsAtOnce) + i)) + 0] = real;
                rows[(2 * ((k * RowsAtOnce) + i)) + 1] = imaginary;
            }
        }
    }

    private static void Tile(T* a, T* b, int terms, T* result)
    {
        Vector256<T> r0 = default, r1 = default, r2 = default, r3 = default, i0 = default, i1 = default, i2 = default, i3 = default;
        for (int k = 0; k < terms; k++, a += 2 * RowsAtOnce, b += 2 * Lanes)
        {
            Vector256<T> real = Vector256.Load(b), imaginary = Vector256.Load(b + Lanes);
            Step(a, real, imaginary, ref r0, ref i0);
            Step(a + 2, real, imaginary, ref r1, ref i1);
            Step(a + 4, real, imaginary, ref r2, ref i2);
            Step(a + 6, real, imaginary, ref r3, ref i3);
        }

        r0.Store(result);
        i0.Store(result + Lanes);
        r1.Store(result + (2 * Lanes));
        i1.Store(result + (3 * Lanes));
        r2.Store(result + (4 * Lanes));
        i2.Store(result + (5 * Lanes));
        r3.Store(result + (6 * Lanes));
        i3.Store(result + (7 * Lanes));
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Step(T* a, Vector256<T> real, Vector256<T> imaginary, ref Vector256<T> sumReal, ref Vector256<T> sumImaginary)
    {
        Vector256<T> aReal = Vector256.Create(a[0]), aImaginary = Vector256.Create(a[1]);
        sumReal = MultiplyAdd(aReal, real, sumReal);
        sumImaginary = MultiplyAdd(aReal, imaginary, sumImaginary);
        sumReal = NegativeMultiplyAdd(aImaginary, imaginary, sumReal);
        sumImaginary = MultiplyAdd(aImaginary, real, sumImaginary);
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector256<T> MultiplyAdd(Vector256<T> x, Vector256<T> y, Vector256<T> sum) => typeof(T) == typeof(float)
        ? Vector256.MultiplyAddEstimate(x.AsSingle(), y.AsSingle(), sum.AsSingle()).As<float, T>()
        : Vector256.MultiplyAddEstimate(x.AsDouble(), y.AsDouble(), sum.AsDouble()).As<double, T>();

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector256<T> NegativeMultiplyAdd(Vector256<T> x, Vector256<T> y, Vector256<T> sum) => MultiplyAdd(-x, y, sum);

    private static void Store(T* result, TSum* c, int height, int width, int columns)
    {
        for (int i = 0; i < height; i++, c += 2L * columns, result += 2 * Lanes)
        {
            for (int j = 0; j < width; j++)
            {
                c[2 * j] += TSum.CreateTruncating(result[j]);
                c[(2 * j) + 1] += TSum.CreateTruncating(result[Lanes + j]);
            }
        }
    }
}
