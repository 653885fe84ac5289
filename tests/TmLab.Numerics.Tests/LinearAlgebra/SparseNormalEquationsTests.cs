using CsCheck;
using MathNet.Numerics.LinearAlgebra;
using TmLab.Numerics.LinearAlgebra;
using Xunit;

namespace TmLab.Numerics.Tests.LinearAlgebra;

public sealed class SparseNormalEquationsTests
{
    [Fact]
    public void Solution_and_variances_are_those_of_the_dense_inverse_whatever_the_numbering() =>
        Gen.Int[1, 40].Select(Gen.Int).Sample((size, seed) =>
        {
            var random = new Random(seed);
            (SparseNormalEquations sparse, Matrix<double> dense) = RandomChain(size, random);
            double[] right = [.. Enumerable.Range(0, size).Select(_ => random.NextDouble() - 0.5)];
            BandedCholesky factor = sparse.Factor();
            Matrix<double> inverse = dense.Inverse();
            double[] expected = (inverse * Vector<double>.Build.Dense(right)).ToArray();
            // Condition number below 10³ (diagonal dominance by 0.5 of entries up to 10): errors below 10³ · size · u.
            Assert.All(factor.Solve(right).Zip(expected), pair => Assert.Equal(pair.Second, pair.First, 1e-10));
            Assert.All(factor.InverseDiagonal().Select((v, i) => (v, inverse[i, i])), pair => Assert.Equal(pair.Item2, pair.v, 1e-10));
        }, iter: 200);

    [Fact]
    public void A_chain_numbered_at_random_is_found_to_be_a_band_of_width_one()
    {
        int[] place = [.. Enumerable.Range(0, 200).OrderBy(i => (i * 7919L) % 211)];
        var chain = new SparseNormalEquations(200);
        for (int i = 1; i < 200; i++)
        {
            chain.Add(place[i], place[i], 2);
            chain.Add(place[i - 1], place[i], -1);
        }

        chain.Add(place[0], place[0], 2);
        Assert.Equal(1, chain.Factor().HalfBandwidth);
    }

    [Fact]
    public void An_indefinite_system_is_reported()
    {
        var system = new SparseNormalEquations(2);
        system.Add(0, 0, 1);
        system.Add(1, 1, 1);
        system.Add(0, 1, 2);
        Assert.Throws<LinearAlgebraException>(system.Factor);
    }

    private static (SparseNormalEquations Sparse, Matrix<double> Dense) RandomChain(int size, Random random)
    {
        var sparse = new SparseNormalEquations(size);
        Matrix<double> dense = Matrix<double>.Build.Dense(size, size);
        void Add(int i, int j, double value)
        {
            sparse.Add(i, j, value);
            dense[i, j] += value;
            if (i != j)
            {
                dense[j, i] += value;
            }
        }

        for (int link = 0; link < 2 * size; link++)
        {
            int i = random.Next(size), j = random.Next(size);
            double weight = random.NextDouble();
            Add(i, i, weight);
            Add(j, j, weight);
            if (i != j)
            {
                Add(i, j, -weight);
            }
        }

        for (int i = 0; i < size; i++)
        {
            Add(i, i, 0.5);
        }

        return (sparse, dense);
    }
}
