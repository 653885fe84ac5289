using MathNet.Numerics.LinearAlgebra;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Small dense symmetric systems, as normal equations of a few unknowns are.</summary>
public static class SmallSymmetric
{
    /// <summary>Solves A x = b for a positive-definite A.</summary>
    /// <exception cref="ArgumentException">A is not positive definite.</exception>
    public static double[] Solve(double[,] a, double[] b) =>
        Matrix<double>.Build.DenseOfArray(a).Cholesky().Solve(Vector<double>.Build.Dense(b)).ToArray();

    /// <summary>
    /// The information that remains on the first <paramref name="kept"/> unknowns when the others are free: the Schur complement
    /// A₁₁ − A₁₂ A₂₂⁻¹ A₂₁.
    /// </summary>
    /// <exception cref="ArgumentException">A₂₂ is not positive definite.</exception>
    public static double[,] Marginal(double[,] a, int kept)
    {
        Matrix<double> all = Matrix<double>.Build.DenseOfArray(a);
        int free = all.RowCount - kept;
        Matrix<double> cross = all.SubMatrix(0, kept, kept, free);
        Matrix<double> gain = all.SubMatrix(kept, free, kept, free).Cholesky().Solve(cross.Transpose());
        return (all.SubMatrix(0, kept, 0, kept) - (cross * gain)).ToArray();
    }

    /// <summary>x = L⁻ᵀ z with A = L Lᵀ: for independent standard normal z a draw from the normal distribution of covariance A⁻¹.</summary>
    /// <exception cref="ArgumentException">A is not positive definite.</exception>
    public static double[] Colour(double[,] a, double[] white) =>
        Matrix<double>.Build.DenseOfArray(a).Cholesky().Factor.Transpose().Solve(Vector<double>.Build.Dense(white)).ToArray();

    /// <summary>The inverse of a positive-definite A.</summary>
    /// <exception cref="ArgumentException">A is not positive definite.</exception>
    public static double[,] Inverse(double[,] a)
    {
        Matrix<double> all = Matrix<double>.Build.DenseOfArray(a);
        return all.Cholesky().Solve(Matrix<double>.Build.DenseIdentity(all.RowCount)).ToArray();
    }
}
