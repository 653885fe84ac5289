using System.Numerics;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;
using Xunit;

namespace TmLab.Numerics.Tests.Kernels;

public sealed class PlaneProductTests
{
    [Theory]
    [InlineData(1, 1)]
    [InlineData(3, 5)]
    [InlineData(8, 8)]
    public void It_is_the_dense_product_by_definition(int outRows, int inRows)
    {
        const int lanes = 32;
        var random = new Random(4);
        float[] Draw(int n) => [.. Enumerable.Range(0, n).Select(_ => random.NextSingle() - 0.5f)];
        float[] re = Draw(inRows * lanes), im = Draw(inRows * lanes);
        Complex[] input = [.. re.Zip(im, (a, b) => new Complex(a, b))];
        Complex64[] matrix = [.. Draw(outRows * inRows).Zip(Draw(outRows * inRows), (a, b) => new Complex64(a, b))];
        PlaneProduct.Run(new ModePlanes(inRows, lanes, re, im, new float[re.Length], new float[im.Length]), matrix);
        for (int n = 0; n < outRows; n++)
        {
            for (int p = 0; p < lanes; p++)
            {
                Complex exact = 0;
                for (int k = 0; k < inRows; k++)
                {
                    exact += matrix[(n * inRows) + k].ToComplex() * input[(k * lanes) + p];
                }

                // Each of the inRows products of magnitude ≤ 1/2 rounds a few times.
                Assert.True((exact - new Complex(re[(n * lanes) + p], im[(n * lanes) + p])).Magnitude <= 8 * inRows * Math.ScaleB(1, -24));
            }
        }
    }
}
