using System.Globalization;
using System.Runtime.InteropServices;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.TestKit;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Singular values beside LAPACK's through numpy.linalg.svd in double precision on the very same complex64 matrix, Haar × diagonal ×
/// Haar. The accuracy of the Gram route: |δσ| ≲ u σ₁²/σ, all lost below √u σ₁ (Golub and Van Loan, Matrix Computations (2013), §8.6).
/// </summary>
public sealed class NumPySingularValuesTests
{
    private const double SingleRoundoff = 6e-8;

    private const string Script =
        "import sys, numpy as np\n" +
        "a = np.fromfile(sys.argv[1], np.complex64).reshape(int(sys.argv[2]), int(sys.argv[3])).astype(np.complex128)\n" +
        "print(' '.join(repr(float(s)) for s in np.linalg.svd(a, compute_uv=False)))\n";

    [Theory]
    [InlineData(EngineChoice.Managed, 1.0)]
    [InlineData(EngineChoice.Managed, 1e-2)]
    [InlineData(EngineChoice.Managed, 1e-4)]
    [InlineData(EngineChoice.Managed, 1e-6)]
    [InlineData(EngineChoice.Native, 1.0)]
    [InlineData(EngineChoice.Native, 1e-2)]
    [InlineData(EngineChoice.Native, 1e-4)]
    [InlineData(EngineChoice.Native, 1e-6)]
    public void Singular_values_are_those_of_LAPACK(EngineChoice choice, double smallest)
    {
        ILinearAlgebraEngine engine = Engine(choice);
        InMemoryMatrix matrix = Graded(smallest);
        double[] expected = NumPy(matrix);
        SpectrumOutcome found = TallSpectrum.SingularValues(
            matrix, engine, new SpectrumOptions { TileBytes = 30_000 }, null, TestContext.Current.CancellationToken);
        double limit = found.Method == SpectrumMethod.Gram ? SingleRoundoff : 1.2e-16;
        for (int k = 0; k < expected.Length; k++)
        {
            double allowed = found.Method == SpectrumMethod.TallSkinnyQr ? limit * expected[0] : limit * expected[0] * expected[0] / expected[k];
            Assert.Equal(expected[k], found.SingularValues[k], 50 * allowed);
        }

        // What was promised: the smallest value within the accuracy of the options.
        Assert.Equal(expected[^1], found.SingularValues[^1], SpectrumOptions.Default.RelativeAccuracy * expected[^1]);
    }

    [Theory]
    [InlineData(EngineChoice.Managed)]
    [InlineData(EngineChoice.Native)]
    public void The_Gram_route_alone_loses_values_below_the_root_of_the_roundoff(EngineChoice choice)
    {
        InMemoryMatrix matrix = Graded(1e-6);
        double[] expected = NumPy(matrix);
        SpectrumOutcome gram = TallSpectrum.SingularValues(
            matrix, Engine(choice), new SpectrumOptions { RelativeAccuracy = 1 }, null, TestContext.Current.CancellationToken);

        // The estimate itself notices: the route is left although any relative error up to 1 was allowed.
        Assert.NotEqual(SpectrumMethod.Gram, gram.Method);
        Assert.Equal(expected[^1], gram.SingularValues[^1], 0.05 * expected[^1]);
        Assert.True(Math.Sqrt(SingleRoundoff) > 1e-6);
    }

    private static ILinearAlgebraEngine Engine(EngineChoice choice)
    {
        EngineSelection selection = LinearAlgebraEngines.Choose(choice);
        if (!selection.Succeeded)
        {
            Missing(selection.Explanation!);
        }

        return selection.Engine!;
    }

    private static InMemoryMatrix Graded(double smallest)
    {
        const int count = 40;
        return KnownSpectrum.Matrix(220, [.. Enumerable.Range(0, count).Select(k => 2 * Math.Pow(smallest, k / (count - 1.0)))], 71);
    }

    private static double[] NumPy(InMemoryMatrix matrix)
    {
        using var folder = new TemporaryFolder();
        string file = folder.File("matrix.c64");
        using (FileStream stream = File.Create(file))
        {
            for (int row = 0; row < matrix.RowCount; row++)
            {
                stream.Write(MemoryMarshal.AsBytes<Complex64>(matrix.Row(row)));
            }
        }

        string output = OutsidePeer.Python().RunScript(
            Script, file, matrix.RowCount.ToString(CultureInfo.InvariantCulture), matrix.ColumnCount.ToString(CultureInfo.InvariantCulture));
        return [.. output.Split(' ', StringSplitOptions.RemoveEmptyEntries).Select(word => double.Parse(word, CultureInfo.InvariantCulture))];
    }

    // Locally a missing peer is a skip with its reason; in CI, where it is installed, a failure.
    private static void Missing(string reason)
    {
        Assert.False(Environment.GetEnvironmentVariable("CI") == "true", reason);
        Assert.Skip(reason);
    }
}
