using System.Collections.Immutable;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>A = U Σ V† with K = min(M, N).</summary>
/// <param name="U">M × K, orthonormal columns.</param>
/// <param name="Values">σ_j, descending, K of them, ≥ 0.</param>
/// <param name="VectorsAdjoint">V†, K × N: row j is the complex conjugate of v_j.</param>
public sealed record ThinSvd(Complex128Matrix U, ImmutableArray<double> Values, Complex128Matrix VectorsAdjoint) : IDisposable
{
    /// <inheritdoc/>
    public void Dispose()
    {
        U.Dispose();
        VectorsAdjoint.Dispose();
    }
}
