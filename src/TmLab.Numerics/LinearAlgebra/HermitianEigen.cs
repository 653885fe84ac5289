using System.Collections.Immutable;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Leading eigenpairs of a Hermitian matrix G (N × N): G v_j = λ_j v_j.</summary>
/// <param name="Values">λ_j, descending, K of them.</param>
/// <param name="VectorsAdjoint">V†, K × N: row j is the complex conjugate of v_j; rows are orthonormal.</param>
public sealed record HermitianEigen(ImmutableArray<double> Values, Complex128Matrix VectorsAdjoint) : IDisposable
{
    /// <inheritdoc/>
    public void Dispose() => VectorsAdjoint.Dispose();
}
