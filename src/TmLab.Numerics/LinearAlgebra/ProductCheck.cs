using TmLab.Numerics.Matrices;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Checks the shapes of a matrix product, the same for every engine.</summary>
internal static class ProductCheck
{
    public static void Buffers(NativeBuffer<Complex64> a, NativeBuffer<Complex64> b, NativeBuffer<Complex64> c, ProductShape shape)
    {
        Preconditions.InRange(shape.M, 0, int.MaxValue);
        Preconditions.InRange(shape.N, 0, int.MaxValue);
        Preconditions.InRange(shape.K, 0, int.MaxValue);
        Preconditions.AtLeast(a.Length, (long)shape.M * shape.K);
        Preconditions.AtLeast(b.Length, (long)shape.K * shape.N);
        Preconditions.AtLeast(c.Length, (long)shape.M * shape.N);
        Preconditions.Require(c != a && c != b, "The product must not overwrite a factor.");
    }
}
