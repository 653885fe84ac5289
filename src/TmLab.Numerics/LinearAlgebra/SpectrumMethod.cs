namespace TmLab.Numerics.LinearAlgebra;

/// <summary>How singular values were computed. Each loses values below its limit, relative to the largest (Golub and Van Loan 2013, §8.6).</summary>
public enum SpectrumMethod
{
    /// <summary>Eigenvalues of A†A, products in single precision, sums in double: values below √(6·10⁻⁸) ≈ 2.4·10⁻⁴ of the largest are lost.</summary>
    Gram,

    /// <summary>Eigenvalues of A†A, all in double precision: values below √(1.1·10⁻¹⁶) ≈ 1.05·10⁻⁸ of the largest are lost.</summary>
    DoubleGram,

    /// <summary>Singular values of the triangular factor, tile by tile, in double precision: values below 10⁻¹⁶ of the largest are lost.</summary>
    TallSkinnyQr,

    /// <summary>Randomised block Krylov iteration: leading values only, each with a bound of its own.</summary>
    Randomised,
}
