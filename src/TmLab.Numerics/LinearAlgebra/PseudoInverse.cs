using System.Numerics;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Complex;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// The Moore–Penrose inverse B⁺ = (B†B)⁻¹ B† of a tall matrix, through the eigenvectors of its Gram matrix in double precision:
/// directions whose singular value lies below σ₁ / LargestCondition are left out, as they would only carry noise.
/// </summary>
public sealed class PseudoInverse
{
    /// <summary>Inverts B.</summary>
    /// <param name="elements">B, row-major, rows · columns finite numbers.</param>
    /// <param name="rows">K.</param>
    /// <param name="columns">N ≤ K.</param>
    /// <param name="largestCondition">Ratio of singular values beyond which directions are left out; at most 10⁷ (the Gram matrix squares it).</param>
    /// <exception cref="ArgumentException">The shape is wrong.</exception>
    public PseudoInverse(ReadOnlySpan<Complex> elements, int rows, int columns, double largestCondition)
    {
        Preconditions.InRange(columns, 1, rows);
        Preconditions.SameLength(elements.Length, (long)rows * columns);
        Preconditions.InRange(largestCondition, 1, 1e7);
        Matrix<Complex> b = DenseMatrix.OfColumnMajor(columns, rows, elements.ToArray()).Transpose();
        var eigen = b.ConjugateTransposeThisAndMultiply(b).Evd(Symmetricity.Hermitian);
        double[] values = [.. eigen.EigenValues.Select(v => Math.Max(v.Real, 0))];
        double largest = values.Max();
        Condition = Math.Sqrt(largest / values.Min());
        double floor = largest / (largestCondition * largestCondition);
        Matrix<Complex> scaled = eigen.EigenVectors.Clone();
        for (int j = 0; j < values.Length; j++)
        {
            scaled.SetColumn(j, scaled.Column(j) * (values[j] > floor ? 1 / values[j] : 0));
        }

        Elements = (scaled * eigen.EigenVectors.ConjugateTranspose() * b.ConjugateTranspose()).ToRowMajorArray();
    }

    /// <summary>B⁺, N × K, row-major.</summary>
    public Complex[] Elements { get; }

    /// <summary>Largest over smallest singular value of B; infinite when its columns are dependent.</summary>
    public double Condition { get; }
}
