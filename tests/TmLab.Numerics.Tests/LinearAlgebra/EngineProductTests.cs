using System.Numerics;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.LinearAlgebra.Managed;
using TmLab.Numerics.Matrices;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

/// <summary>Products of both engines against plain double-precision loops. Elements are of size 1; K terms of mixed sign round to √K u or so, and 8 K u bounds them.</summary>
public sealed class EngineProductTests
{
    private const double SingleRoundoff = 6e-8;
    private const double DoubleRoundoff = 1.2e-16;

    // Around the vector widths 4, 8, 16, the blocks of 4 rows, 256 terms and 1,024 rows, and the empty and single cases.
    public static TheoryData<EngineChoice, int, int> Shapes
    {
        get
        {
            var data = new TheoryData<EngineChoice, int, int>();
            foreach (EngineChoice choice in (EngineChoice[])[EngineChoice.Managed, EngineChoice.Native])
            {
                foreach ((int rows, int columns) in (ReadOnlySpan<(int, int)>)[(0, 5), (1, 1), (1, 17), (3, 2), (40, 1), (255, 3), (256, 4), (257, 5), (1023, 7), (1024, 8), (1025, 9), (2500, 15), (60, 16), (60, 31), (60, 33)])
                {
                    data.Add(choice, rows, columns);
                }
            }

            return data;
        }
    }

    [Theory]
    [MemberData(nameof(Shapes))]
    public void Gram_matrices_are_those_of_plain_loops(EngineChoice choice, int rows, int columns)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] a = Dense.Random(rows, columns, 11);
        Complex[,] expected = Dense.Product(Dense.Adjoint(a), a);
        using NativeBuffer<Complex64> single = Dense.Single(a);
        using Complex128Matrix wide = Dense.Wide(a, extraRows: 2);
        using var ofSingle = new Complex128Matrix(columns, columns);
        using var ofDouble = new Complex128Matrix(columns, columns);
        engine.AddGram(single, rows, ofSingle);
        engine.AddGram(wide, rows, ofDouble);

        // |error of an inner product| ≤ γ_2K Σ|x||y| (Higham, Accuracy and Stability of Numerical Algorithms (2002), §3.1, 3.6).
        double size = Enumerable.Range(0, columns).Max(j => expected[j, j].Real);
        AssertUpper(expected, ofSingle, 2 * (rows + 2) * SingleRoundoff * size);
        AssertUpper(expected, ofDouble, 2 * (rows + 2) * DoubleRoundoff * size);
    }

    [Theory]
    [MemberData(nameof(Shapes))]
    public void Gram_matrices_add_to_what_is_there(EngineChoice choice, int rows, int columns)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        Complex[,] a = Dense.Random(rows, columns, 12);
        using NativeBuffer<Complex64> single = Dense.Single(a);
        using var once = new Complex128Matrix(columns, columns);
        using var twice = new Complex128Matrix(columns, columns);
        engine.AddGram(single, rows, once);
        engine.AddGram(single, rows, twice);
        engine.AddGram(single, rows, twice);
        AssertUpper(Dense.Product(Dense.From(once), Dense.Diagonal([.. Enumerable.Repeat(2.0, columns)])), twice, 1e-12);
    }

    [Theory]
    [MemberData(nameof(Shapes))]
    public void Products_are_those_of_plain_loops(EngineChoice choice, int rows, int columns)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        const int inner = 19;
        Complex[,] a = Dense.Random(rows, inner, 13), b = Dense.Random(inner, columns, 14);
        using NativeBuffer<Complex64> sa = Dense.Single(a), sb = Dense.Single(b);
        using var c = new NativeBuffer<Complex64>((long)rows * columns);
        c.AsSpan().Fill(new Complex64(9, 9));
        engine.Multiply(sa, sb, c, new ProductShape(rows, columns, inner));
        Assert.True(Dense.LargestDifference(Dense.Product(a, b), Dense.From(c, rows, columns)) <= 8 * inner * SingleRoundoff);
    }

    [Theory]
    [MemberData(nameof(Shapes))]
    public void Products_with_an_adjoint_are_those_of_plain_loops(EngineChoice choice, int rows, int columns)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        const int left = 6;
        Complex[,] a = Dense.Random(rows, left, 15), b = Dense.Random(rows, columns, 16);
        using NativeBuffer<Complex64> sa = Dense.Single(a), sb = Dense.Single(b);
        using var c = new NativeBuffer<Complex64>((long)left * columns);
        c.AsSpan().Fill(new Complex64(9, 9));
        engine.MultiplyAdjoint(sa, sb, c, new ProductShape(left, columns, rows));
        double difference = Dense.LargestDifference(Dense.Product(Dense.Adjoint(a), b), Dense.From(c, left, columns));
        Assert.True(difference <= 8 * (rows + 1) * SingleRoundoff, $"{difference}");
    }

    [Theory]
    [InlineData(EngineChoice.Managed)]
    [InlineData(EngineChoice.Native)]
    public void Wrong_shapes_are_argument_exceptions(EngineChoice choice)
    {
        ILinearAlgebraEngine engine = Engines.Get(choice);
        using var buffer = new NativeBuffer<Complex64>(11);
        using var other = new NativeBuffer<Complex64>(12);
        using var gram = new Complex128Matrix(4, 4);
        using var oblong = new Complex128Matrix(4, 3);
        Assert.Throws<ArgumentException>(() => engine.AddGram(buffer, 3, gram));
        Assert.Throws<ArgumentException>(() => engine.AddGram(other, 3, oblong));
        Assert.Throws<ArgumentException>(() => engine.AddGram(oblong, 3, gram));
        Assert.Throws<ArgumentException>(() => engine.Multiply(buffer, other, other, new ProductShape(2, 2, 2)));
        Assert.Throws<ArgumentException>(() => engine.Multiply(buffer, other, buffer, new ProductShape(2, 2, 2)));
        Assert.Throws<ArgumentException>(() => engine.MultiplyAdjoint(buffer, other, buffer, new ProductShape(3, 4, 4)));
    }

    // Memory that ends at a page which may not be touched: reading or writing one element too far stops the process.
    [Fact]
    public unsafe void The_managed_kernel_stays_within_its_operands()
    {
        for (int columns = 1; columns <= 19; columns++)
        {
            int rows = columns % 6, terms = columns + 3;
            using var a = new GuardedMemory<float>(2 * rows * terms);
            using var b = new GuardedMemory<float>(2 * terms * columns);
            using var c = new GuardedMemory<float>(2 * rows * columns);
            a.Span.Fill(1);
            b.Span.Fill(1);
            fixed (float* pa = a.Span, pb = b.Span, pc = c.Span)
            {
                var operand = new ComplexProductKernel<float, float>.Operand((nint)pa, terms, Adjoint: false);
                ComplexProductKernel<float, float>.Accumulate(operand, pb, pc, new ProductShape(rows, columns, terms), upperOnly: false);
            }

            // (1 + i)² = 2 i.
            for (int k = 0; k < c.Span.Length; k++)
            {
                Assert.Equal(k % 2 == 0 ? 0 : 2f * terms, c.Span[k]);
            }
        }
    }

    private static void AssertUpper(Complex[,] expected, Complex128Matrix found, double tolerance)
    {
        for (int i = 0; i < found.Rows; i++)
        {
            for (int j = i; j < found.Columns; j++)
            {
                double difference = (expected[i, j] - found[i, j]).Magnitude;
                Assert.True(difference <= tolerance, $"({i}, {j}): expected {expected[i, j]}, found {found[i, j]}, tolerance {tolerance}");
            }
        }
    }
}
