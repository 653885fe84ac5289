using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// The seam between this program and a dense linear-algebra library: the few operations that spectra of tall matrices need.
/// All matrices are row-major. Implementations may be called from several threads; they run one operation at a time where the
/// library behind them wants that. Inputs must be finite: see <see cref="FiniteCheck"/>.
/// </summary>
public interface ILinearAlgebraEngine
{
    /// <summary>One word: "managed" or "native".</summary>
    string Name { get; }

    /// <summary>One line for a report: library, version where it tells, threads.</summary>
    string Description { get; }

    /// <summary>How many threads the engine computes with.</summary>
    int Threads { get; }

    /// <summary>
    /// G += A†A for A = the first <paramref name="rows"/> rows of <paramref name="tile"/>, G's upper triangle only (column ≥ row;
    /// the lower one is left alone). Products and sums over at most 1,024 rows are single precision, their sum is double.
    /// </summary>
    /// <param name="tile">Rows of G.Columns elements each.</param>
    /// <param name="rows">Number of rows, ≥ 0.</param>
    /// <param name="gram">G, square, N × N.</param>
    /// <exception cref="ArgumentException">G is not square or the tile is too short.</exception>
    void AddGram(NativeBuffer<Complex64> tile, int rows, Complex128Matrix gram);

    /// <summary>As the other overload, all in double precision.</summary>
    /// <exception cref="ArgumentException">G is not square or the tile's width differs.</exception>
    void AddGram(Complex128Matrix tile, int rows, Complex128Matrix gram);

    /// <summary>C = A·B (M × K times K × N) in single precision.</summary>
    /// <exception cref="ArgumentException">The shapes do not fit or a buffer is too short.</exception>
    void Multiply(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape);

    /// <summary>C = A†·B, where A is stored K × M and B is K × N, in single precision.</summary>
    /// <exception cref="ArgumentException">The shapes do not fit or a buffer is too short.</exception>
    void MultiplyAdjoint(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape);

    /// <summary>The eigenvalues of a Hermitian matrix, descending. Reads the upper triangle; destroys the matrix.</summary>
    /// <exception cref="LinearAlgebraException">The iteration did not converge.</exception>
    double[] HermitianEigenvalues(Complex128Matrix matrix);

    /// <summary>
    /// The <paramref name="count"/> largest eigenvalues of a Hermitian matrix and their vectors. Reads the upper triangle;
    /// destroys the matrix.
    /// </summary>
    /// <exception cref="LinearAlgebraException">The iteration did not converge.</exception>
    HermitianEigen HermitianEigenvectors(Complex128Matrix matrix, int count);

    /// <summary>The singular values of a matrix that fits in memory, descending. Destroys the matrix.</summary>
    /// <exception cref="LinearAlgebraException">The iteration did not converge.</exception>
    double[] SingularValues(Complex128Matrix matrix);

    /// <summary>The thin singular-value decomposition A = U Σ V† of a matrix that fits in memory. Destroys the matrix.</summary>
    /// <exception cref="LinearAlgebraException">The iteration did not converge.</exception>
    ThinSvd ThinSvd(Complex128Matrix matrix);

    /// <summary>
    /// The triangular factor of A = Q R by Householder reflections, left in the first min(rows, N) rows of <paramref name="matrix"/>,
    /// with zeros below its diagonal; what stands in the further rows is undefined. The phases of R's rows are the engine's own.
    /// </summary>
    /// <param name="matrix">A in its first rows.</param>
    /// <param name="rows">How many rows of the matrix belong to A.</param>
    void TriangularFactor(Complex128Matrix matrix, int rows);
}
