namespace TmLab.Numerics.LinearAlgebra;

/// <summary>The shape of a matrix product C (M × N) = A (M × K) · B (K × N).</summary>
/// <param name="M">Rows of C.</param>
/// <param name="N">Columns of C.</param>
/// <param name="K">The length that is summed over.</param>
public readonly record struct ProductShape(int M, int N, int K);
