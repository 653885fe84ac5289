using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Native;

/// <content>
/// Singular values and triangular factors. With A row-major M × N, the library sees Aᵀ = conj(V) Σ Uᵀ, N × M: its left vectors,
/// read row-major, are V† and its right factor, read row-major, is U.
/// </content>
internal sealed unsafe partial class NativeEngine
{
    public double[] SingularValues(Complex128Matrix matrix)
    {
        using var nothing = new Complex128Matrix(1, 1);
        return Decompose(matrix, nothing, nothing, (byte)'N');
    }

    public ThinSvd ThinSvd(Complex128Matrix matrix)
    {
        int k = Math.Min(matrix.Rows, matrix.Columns);
        var u = new Complex128Matrix(matrix.Rows, k);
        var adjoint = new Complex128Matrix(k, matrix.Columns);
        return new ThinSvd(u, [.. Decompose(matrix, u, adjoint, (byte)'S')], adjoint);
    }

    // A = Q R row-major is Aᵀ = Rᵀ Qᵀ column-major: an LQ factorisation, whose L stands where R's upper triangle is wanted.
    public void TriangularFactor(Complex128Matrix matrix, int rows)
    {
        Preconditions.InRange(rows, 0, matrix.Rows);
        int n = matrix.Columns, m = rows, query = -1, info = 0;
        if (n == 0 || m == 0)
        {
            return;
        }

        Complex length = default;
        Complex* a = matrix.Buffer.Pointer;
        using var tau = new NativeBuffer<Complex>(Math.Min(m, n));
        lock (s_oneAtATime)
        {
            _functions.Zgelqf(&n, &m, a, &n, tau.Pointer, &length, &query, &info);
            Check("zgelqf", info);
            int lengthW = WorkLength(length);
            using var work = new NativeBuffer<Complex>(lengthW);
            _functions.Zgelqf(&n, &m, a, &n, tau.Pointer, work.Pointer, &lengthW, &info);
            Check("zgelqf", info);
        }

        for (int row = 1; row < Math.Min(m, n); row++)
        {
            matrix.Row(row)[..row].Clear();
        }
    }

    // Divide and conquer can fail to converge where the slower implicit QR does not: the input is kept for that case.
    private double[] Decompose(Complex128Matrix matrix, Complex128Matrix u, Complex128Matrix adjoint, byte job)
    {
        if (matrix.Rows == 0 || matrix.Columns == 0)
        {
            return [];
        }

        using Complex128Matrix kept = matrix.Copy();
        using var values = new NativeBuffer<double>(Math.Min(matrix.Rows, matrix.Columns));
        lock (s_oneAtATime)
        {
            int info = DivideAndConquerSvd(matrix, values, u, adjoint, job);
            if (info > 0)
            {
                info = ImplicitQrSvd(kept, values, u, adjoint, job);
                Check("zgesvd", info);
            }

            Check("zgesdd", info);
        }

        return values.AsSpan().ToArray();
    }

    private int DivideAndConquerSvd(Complex128Matrix matrix, NativeBuffer<double> values, Complex128Matrix u, Complex128Matrix adjoint, byte job)
    {
        int rows = matrix.Columns, columns = matrix.Rows, least = Math.Min(rows, columns), most = Math.Max(rows, columns);
        int query = -1, info = 0, strideRight = job == (byte)'N' ? 1 : least;
        Complex length = default;

        // The real work space that LAPACK's documentation asks of zgesdd (3.7 and newer; older ones need less).
        long realLength = job == (byte)'N'
            ? 7L * least
            : Math.Max((5L * least * least) + (5L * least), (2L * most * least) + (2L * least * least) + least);
        using var real = new NativeBuffer<double>(realLength);
        using var integer = new NativeBuffer<int>(8L * least);
        Complex* a = matrix.Buffer.Pointer;
        _functions.Zgesdd(&job, &rows, &columns, a, &rows, values.Pointer, adjoint.Buffer.Pointer, &rows, u.Buffer.Pointer, &strideRight, &length, &query, real.Pointer, integer.Pointer, &info, 1);
        Check("zgesdd", info);
        int lengthW = WorkLength(length);
        using var work = new NativeBuffer<Complex>(lengthW);
        _functions.Zgesdd(&job, &rows, &columns, a, &rows, values.Pointer, adjoint.Buffer.Pointer, &rows, u.Buffer.Pointer, &strideRight, work.Pointer, &lengthW, real.Pointer, integer.Pointer, &info, 1);
        return info;
    }

    private int ImplicitQrSvd(Complex128Matrix matrix, NativeBuffer<double> values, Complex128Matrix u, Complex128Matrix adjoint, byte job)
    {
        int rows = matrix.Columns, columns = matrix.Rows, least = Math.Min(rows, columns);
        int query = -1, info = 0, strideRight = job == (byte)'N' ? 1 : least;
        Complex length = default;
        using var real = new NativeBuffer<double>(5L * least);
        Complex* a = matrix.Buffer.Pointer;
        _functions.Zgesvd(&job, &job, &rows, &columns, a, &rows, values.Pointer, adjoint.Buffer.Pointer, &rows, u.Buffer.Pointer, &strideRight, &length, &query, real.Pointer, &info, 1, 1);
        Check("zgesvd", info);
        int lengthW = WorkLength(length);
        using var work = new NativeBuffer<Complex>(lengthW);
        _functions.Zgesvd(&job, &job, &rows, &columns, a, &rows, values.Pointer, adjoint.Buffer.Pointer, &rows, u.Buffer.Pointer, &strideRight, work.Pointer, &lengthW, real.Pointer, &info, 1, 1);
        return info;
    }

    /// <summary>The slower of the two decompositions alone, so that a test can hold it against the faster one.</summary>
    internal double[] SingularValuesByImplicitQr(Complex128Matrix matrix)
    {
        using var nothing = new Complex128Matrix(1, 1);
        using var values = new NativeBuffer<double>(Math.Min(matrix.Rows, matrix.Columns));
        lock (s_oneAtATime)
        {
            Check("zgesvd", ImplicitQrSvd(matrix, values, nothing, nothing, (byte)'N'));
        }

        return values.AsSpan().ToArray();
    }
}
