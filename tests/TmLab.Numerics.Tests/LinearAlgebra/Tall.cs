using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

/// <summary>The spectra of tall matrices under the running test's cancellation.</summary>
internal static class Tall
{
    public static SpectrumOutcome Values(IRowBlockReader matrix, ILinearAlgebraEngine engine, SpectrumOptions? options = null) =>
        TallSpectrum.SingularValues(matrix, engine, options, null, TestContext.Current.CancellationToken);

    public static SingularVectors Vectors(IRowBlockReader matrix, int count, ILinearAlgebraEngine engine, SpectrumOptions? options = null) =>
        TallSpectrum.Vectors(matrix, count, engine, options, null, TestContext.Current.CancellationToken);

    public static SingularVectors Leading(IRowBlockReader matrix, int count, ILinearAlgebraEngine engine, SpectrumOptions? options = null) =>
        TallSpectrum.Leading(matrix, count, engine, options, null, TestContext.Current.CancellationToken);

    public static OutputVectorCheck Write(
        IRowBlockReader matrix, SingularVectors vectors, IRowBlockWriter writer, ILinearAlgebraEngine engine, SpectrumOptions? options = null) =>
        TallSpectrum.WriteOutputVectors(matrix, vectors, writer, engine, options, null, TestContext.Current.CancellationToken);
}
