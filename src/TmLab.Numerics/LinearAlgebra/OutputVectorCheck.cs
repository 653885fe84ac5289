namespace TmLab.Numerics.LinearAlgebra;

/// <summary>How well the output vectors U = A V Σ⁻¹ that were written fit their definition, over all of their pairs.</summary>
/// <param name="DiagonalError">max |U†AV − Σ| / σ₁.</param>
/// <param name="OrthonormalityError">max |U†U − 1|.</param>
public readonly record struct OutputVectorCheck(double DiagonalError, double OrthonormalityError);
