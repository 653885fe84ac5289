using System.Numerics;
using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra.Native;

/// <summary>
/// Runs every operation of the engine on a 3 × 2 matrix whose answers are known in closed form, before a library is trusted:
/// a library of 64-bit integers or of another calling convention fails here and not in a user's result.
/// </summary>
internal static class NativeSelfTest
{
    private const double Tolerance = 1e-5;

    // A = [[1, i], [1, −i], [0, 2]]: A†A = [[2, 0], [0, 6]] + [[0, i−i], …] = diag(2, 6), singular values √6 and √2.
    private static readonly Complex[] s_matrix = [1, Complex.ImaginaryOne, 1, -Complex.ImaginaryOne, 0, 2];

    public static bool Passes(LapackFunctions functions)
    {
        var engine = new NativeEngine(functions);
        try
        {
            return GramIsRight(engine) && ProductIsRight(engine) && EigenvectorsAreRight(engine)
                && SingularValuesAreRight(engine) && TriangularFactorIsRight(engine);
        }
        catch (LinearAlgebraException)
        {
            return false;
        }
    }

    private static bool GramIsRight(NativeEngine engine)
    {
        using NativeBuffer<Complex64> tile = SingleTile();
        using var gram = new Complex128Matrix(2, 2);
        engine.AddGram(tile, 3, gram);
        using Complex128Matrix twin = Tile();
        engine.AddGram(twin, 3, gram);
        return Near(gram[0, 0], 4) && Near(gram[0, 1], 0) && Near(gram[1, 1], 12);
    }

    private static bool ProductIsRight(NativeEngine engine)
    {
        using NativeBuffer<Complex64> a = SingleTile();
        using var c = new NativeBuffer<Complex64>(9);
        engine.MultiplyAdjoint(a, a, c, new ProductShape(2, 2, 3));
        bool adjoint = Near(c.AsSpan()[0], 2) && Near(c.AsSpan()[1], 0) && Near(c.AsSpan()[3], 6);

        // The 3 × 2 matrix times its own first two rows.
        engine.Multiply(a, a, c, new ProductShape(3, 2, 2));
        return adjoint && Near(c.AsSpan()[0], new Complex(1, 1)) && Near(c.AsSpan()[1], new Complex(1, 1)) && Near(c.AsSpan()[4], 2);
    }

    private static bool EigenvectorsAreRight(NativeEngine engine)
    {
        // [[2, i], [−i, 2]] has the values 3 and 1; the vector of 3 is (i, 1)/√2.
        static Complex128Matrix Make()
        {
            var matrix = new Complex128Matrix(2, 2);
            matrix[0, 0] = 2;
            matrix[0, 1] = Complex.ImaginaryOne;
            matrix[1, 1] = 2;
            return matrix;
        }

        bool right = true;
        foreach (int count in (int[])[1, 2])
        {
            using Complex128Matrix matrix = Make();
            using HermitianEigen eigen = engine.HermitianEigenvectors(matrix, count);
            Complex ratio = Complex.Conjugate(eigen.VectorsAdjoint[0, 0]) / Complex.Conjugate(eigen.VectorsAdjoint[0, 1]);
            right &= Near(eigen.Values[0], 3) && Near(ratio, Complex.ImaginaryOne);
        }

        using Complex128Matrix last = Make();
        double[] values = engine.HermitianEigenvalues(last);
        return right && Near(values[0], 3) && Near(values[1], 1);
    }

    private static bool SingularValuesAreRight(NativeEngine engine)
    {
        using Complex128Matrix first = Tile();
        double[] values = engine.SingularValues(first);
        using Complex128Matrix second = Tile();
        using ThinSvd svd = engine.ThinSvd(second);
        Complex element = (svd.U[2, 0] * svd.Values[0] * svd.VectorsAdjoint[0, 1]) + (svd.U[2, 1] * svd.Values[1] * svd.VectorsAdjoint[1, 1]);
        return Near(values[0], Math.Sqrt(6)) && Near(values[1], Math.Sqrt(2)) && Near(element, 2);
    }

    private static bool TriangularFactorIsRight(NativeEngine engine)
    {
        using Complex128Matrix matrix = Tile();
        engine.TriangularFactor(matrix, 3);
        return Near(matrix[0, 0].Magnitude, Math.Sqrt(2)) && Near(matrix[0, 1], 0) && Near(matrix[1, 0], 0)
            && Near(matrix[1, 1].Magnitude, Math.Sqrt(6));
    }

    private static bool Near(Complex found, Complex expected) => (found - expected).Magnitude < Tolerance;

    private static Complex128Matrix Tile()
    {
        var tile = new Complex128Matrix(3, 2);
        s_matrix.CopyTo(tile.Buffer.AsSpan());
        return tile;
    }

    private static NativeBuffer<Complex64> SingleTile()
    {
        var tile = new NativeBuffer<Complex64>(s_matrix.Length);
        for (int k = 0; k < s_matrix.Length; k++)
        {
            tile.AsSpan()[k] = (Complex64)s_matrix[k];
        }

        return tile;
    }
}
