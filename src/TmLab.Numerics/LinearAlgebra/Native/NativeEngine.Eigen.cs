using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Native;

/// <content>
/// Hermitian eigenproblems. The row-major upper triangle of G is the column-major lower triangle of Gᵀ = conj(G): same
/// eigenvalues, conjugate vectors, and vectors stored as columns column-major are rows row-major. So the library's result,
/// read row-major, is V†.
/// </content>
internal sealed unsafe partial class NativeEngine
{
    public double[] HermitianEigenvalues(Complex128Matrix matrix)
    {
        Preconditions.SameLength(matrix.Rows, matrix.Columns);
        double[] values = DivideAndConquer(matrix, (byte)'N');
        Array.Reverse(values);
        return values;
    }

    public HermitianEigen HermitianEigenvectors(Complex128Matrix matrix, int count)
    {
        Preconditions.SameLength(matrix.Rows, matrix.Columns);
        Preconditions.InRange(count, 0, matrix.Rows);
        if (count == 0)
        {
            return new HermitianEigen([], new Complex128Matrix(0, matrix.Columns));
        }

        // The whole set is faster by divide and conquer, a part of it by bisection and robust representations.
        if (2L * count > matrix.Rows)
        {
            double[] all = DivideAndConquer(matrix, (byte)'V');
            return Descending(matrix, all, count);
        }

        using var vectors = new Complex128Matrix(count, matrix.Columns);
        double[] values = Largest(matrix, vectors, count);
        return Descending(vectors, values, count);
    }

    private static HermitianEigen Descending(Complex128Matrix ascendingRows, double[] ascending, int count)
    {
        var rows = new Complex128Matrix(count, ascendingRows.Columns);
        var values = new double[count];
        for (int j = 0; j < count; j++)
        {
            int from = ascendingRows.Rows - 1 - j;
            values[j] = ascending[from];
            ascendingRows.Row(from).CopyTo(rows.Row(j));
        }

        return new HermitianEigen([.. values], rows);
    }

    private double[] DivideAndConquer(Complex128Matrix matrix, byte job)
    {
        int n = matrix.Rows, info = 0, query = -1, integerLength = 0;
        byte lower = (byte)'L';
        if (n == 0)
        {
            return [];
        }

        using var values = new NativeBuffer<double>(n);
        Complex length = default;
        double realLength = 0;
        Complex* a = matrix.Buffer.Pointer;
        lock (s_oneAtATime)
        {
            _functions.Zheevd(&job, &lower, &n, a, &n, values.Pointer, &length, &query, &realLength, &query, &integerLength, &query, &info, 1, 1);
            Check("zheevd", info);
            int lengthW = WorkLength(length), lengthR = checked((int)realLength), lengthI = integerLength;
            using var work = new NativeBuffer<Complex>(lengthW);
            using var real = new NativeBuffer<double>(lengthR);
            using var integer = new NativeBuffer<int>(lengthI);
            _functions.Zheevd(&job, &lower, &n, a, &n, values.Pointer, work.Pointer, &lengthW, real.Pointer, &lengthR, integer.Pointer, &lengthI, &info, 1, 1);
            Check("zheevd", info);
        }

        return values.AsSpan().ToArray();
    }

    private double[] Largest(Complex128Matrix matrix, Complex128Matrix vectors, int count)
    {
        int n = matrix.Rows, info = 0, query = -1, integerLength = 0, first = n - count + 1, last = n, found = 0;
        byte job = (byte)'V', range = (byte)'I', lower = (byte)'L';
        double unused = 0, tolerance = 0, realLength = 0;
        using var values = new NativeBuffer<double>(n);
        using var support = new NativeBuffer<int>(2L * n);
        Complex length = default;
        Complex* a = matrix.Buffer.Pointer;
        Complex* z = vectors.Buffer.Pointer;
        lock (s_oneAtATime)
        {
            _functions.Zheevr(&job, &range, &lower, &n, a, &n, &unused, &unused, &first, &last, &tolerance, &found, values.Pointer, z, &n, support.Pointer, &length, &query, &realLength, &query, &integerLength, &query, &info, 1, 1, 1);
            Check("zheevr", info);
            int lengthW = WorkLength(length), lengthR = checked((int)realLength), lengthI = integerLength;
            using var work = new NativeBuffer<Complex>(lengthW);
            using var real = new NativeBuffer<double>(lengthR);
            using var integer = new NativeBuffer<int>(lengthI);
            _functions.Zheevr(&job, &range, &lower, &n, a, &n, &unused, &unused, &first, &last, &tolerance, &found, values.Pointer, z, &n, support.Pointer, work.Pointer, &lengthW, real.Pointer, &lengthR, integer.Pointer, &lengthI, &info, 1, 1, 1);
            Check("zheevr", info);
        }

        return values.Slice(0, count).ToArray();
    }
}
