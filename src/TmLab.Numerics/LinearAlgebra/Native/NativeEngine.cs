using System.Globalization;
using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Native;

/// <summary>
/// The engine on a system's LAPACK and BLAS. A row-major matrix A is, in the same memory, the column-major matrix Aᵀ; nothing is
/// copied to change the order, the identities are stated at each call. One caller at a time: some libraries multiply their
/// threads with those of their callers. Matrices stand in <see cref="NativeBuffer{T}"/>, because kernels read past the end.
/// </summary>
internal sealed unsafe partial class NativeEngine : ILinearAlgebraEngine
{
    // The library's threads are the process's, so the lock is too.
    private static readonly Lock s_oneAtATime = new();

    private readonly LapackFunctions _functions;

    public NativeEngine(LapackFunctions functions)
    {
        _functions = functions;
        Threads = functions.Threads() ?? Environment.ProcessorCount;
        Description = string.Create(
            CultureInfo.InvariantCulture,
            $"native: {functions.Library} ({functions.Version() ?? "version not told"}), {Threads} threads");
    }

    public string Name => "native";

    public string Description { get; }

    public int Threads { get; }

    // With X = Aᵀ column-major, X X† = (A†A)ᵀ column-major, which is A†A row-major; its lower triangle is the row-major upper one.
    public void AddGram(NativeBuffer<Complex64> tile, int rows, Complex128Matrix gram)
    {
        GramSum.Check(tile, rows, gram);
        int n = gram.Columns;
        if (n == 0)
        {
            return;
        }

        using var sum = new NativeBuffer<Complex64>((long)n * n);
        for (int first = 0; first < rows; first += GramSum.SingleRows)
        {
            int k = Math.Min(GramSum.SingleRows, rows - first);
            byte lower = (byte)'L', plain = (byte)'N';
            float one = 1, zero = 0;
            lock (s_oneAtATime)
            {
                _functions.Cherk(&lower, &plain, &n, &k, &one, tile.Pointer + ((long)first * n), &n, &zero, sum.Pointer, &n, 1, 1);
            }

            GramSum.AddUpper(sum, gram);
        }
    }

    public void AddGram(Complex128Matrix tile, int rows, Complex128Matrix gram)
    {
        GramSum.Check(tile, rows, gram);
        int n = gram.Columns, k = rows;
        if (n == 0 || k == 0)
        {
            return;
        }

        byte lower = (byte)'L', plain = (byte)'N';
        double one = 1;
        lock (s_oneAtATime)
        {
            _functions.Zherk(&lower, &plain, &n, &k, &one, tile.Buffer.Pointer, &n, &one, gram.Buffer.Pointer, &n, 1, 1);
        }
    }

    // Row-major C = A B is, column-major, Cᵀ = Bᵀ Aᵀ.
    public void Multiply(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape)
    {
        ProductCheck.Buffers(a, b, c, shape);
        byte plain = (byte)'N';
        Product(plain, b, a, c, shape, shape.K);
    }

    // Row-major C = A†B is, column-major, Cᵀ = Bᵀ conj(A), and conj(A) = (Aᵀ)†.
    public void MultiplyAdjoint(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape)
    {
        ProductCheck.Buffers(a, b, c, shape);
        byte adjoint = (byte)'C';
        Product(adjoint, b, a, c, shape, shape.M);
    }

    private void Product(
        byte operationOnA, NativeBuffer<Complex64> b, NativeBuffer<Complex64> a, NativeBuffer<Complex64> c, ProductShape shape, int strideA)
    {
        if (shape.M == 0 || shape.N == 0)
        {
            return;
        }

        if (shape.K == 0)
        {
            c.Slice(0, checked(shape.M * shape.N)).Clear();
            return;
        }

        byte plain = (byte)'N';
        int m = shape.M, n = shape.N, k = shape.K, lda = strideA;
        var one = new Complex64(1, 0);
        Complex64 zero = default;
        lock (s_oneAtATime)
        {
            _functions.Cgemm(&plain, &operationOnA, &n, &m, &k, &one, b.Pointer, &n, a.Pointer, &lda, &zero, c.Pointer, &n, 1, 1);
        }
    }

    private static void Check(string routine, int info)
    {
        if (info != 0)
        {
            throw new LinearAlgebraException(routine, info);
        }
    }

    private static int WorkLength(Complex query) => checked((int)query.Real);
}
