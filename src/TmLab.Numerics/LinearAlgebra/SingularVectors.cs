using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// Leading singular values of A (P × N) with their input vectors: A v_j = σ_j u_j. Each v_j has unit length and this phase: among
/// its elements whose squared magnitude is within 10⁻⁵ of the largest, relatively, the one of lowest index is real and positive.
/// </summary>
/// <param name="Spectrum">The values, K of them, and their route.</param>
/// <param name="InputVectors">V, N × K: column j is v_j.</param>
public sealed record SingularVectors(SpectrumOutcome Spectrum, ComplexMatrix InputVectors) : IDisposable
{
    /// <inheritdoc/>
    public void Dispose() => InputVectors.Dispose();
}
