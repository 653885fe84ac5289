using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

public sealed class FiniteCheckTests
{
    [Fact]
    public void The_largest_part_is_found_at_every_place_of_every_length()
    {
        for (int length = 0; length <= 67; length++)
        {
            using var memory = new GuardedMemory<Complex64>(length);
            memory.Span.Fill(new Complex64(-0.5f, 0.25f));
            Assert.Equal(length == 0 ? 0 : 0.5f, FiniteCheck.LargestPart(memory.Span, 1));
            for (int place = 0; place < length; place++)
            {
                memory.Span[place] = new Complex64(0, -3);
                Assert.Equal(3, FiniteCheck.LargestPart(memory.Span, 1));
                memory.Span[place] = new Complex64(-0.5f, 0.25f);
            }
        }
    }

    [Theory]
    [InlineData(float.NaN, 0)]
    [InlineData(0, float.NaN)]
    [InlineData(float.PositiveInfinity, 0)]
    [InlineData(0, float.NegativeInfinity)]
    public void The_first_place_that_is_not_finite_is_named(float real, float imaginary)
    {
        for (int length = 1; length <= 40; length++)
        {
            var rows = new Complex64[length * 3];
            rows[^2] = new Complex64(real, imaginary);
            rows[^1] = new Complex64(float.NaN, 0);
            NonFiniteMatrixException found = Assert.Throws<NonFiniteMatrixException>(() => FiniteCheck.LargestPart(rows, 3, 100));
            Assert.Equal((100 + length - 1, 1), (found.Row, found.Column));
        }
    }
}
