using System.Numerics;

namespace TmLab.Numerics.Statistics;

/// <summary>
/// A reproducible sequence of random numbers, <see cref="Philox"/> under a 64-bit seed as key. The counter's upper half is the
/// stream: sequences of one seed and different streams are independent, so every thread, row or frame takes a stream of its own
/// and results do not depend on the order of work. An instance is for one thread at a time.
/// </summary>
public sealed class SeededRandom
{
    private const int WordsInBlock = 4;

    private readonly uint _key0;
    private readonly uint _key1;
    private readonly ulong _stream;
    private ulong _block;
    private PhiloxBlock _words;
    private int _used = WordsInBlock;

    /// <summary>Begins a sequence.</summary>
    /// <param name="seed">The seed.</param>
    /// <param name="stream">Which of the seed's 2⁶⁴ sequences.</param>
    public SeededRandom(ulong seed, ulong stream = 0)
    {
        _key0 = (uint)seed;
        _key1 = (uint)(seed >> 32);
        _stream = stream;
    }

    /// <summary>32 random bits.</summary>
    public uint NextBits()
    {
        if (_used == WordsInBlock)
        {
            _words = Philox.At(new PhiloxBlock((uint)_block, (uint)(_block >> 32), (uint)_stream, (uint)(_stream >> 32)), _key0, _key1);
            _block++;
            _used = 0;
        }

        return _used++ switch
        {
            0 => _words.X0,
            1 => _words.X1,
            2 => _words.X2,
            _ => _words.X3,
        };
    }

    /// <summary>Uniform in [0, 1), 53 bits.</summary>
    public double NextUniform() => ((((ulong)NextBits() << 32) | NextBits()) >> 11) * (1.0 / (1UL << 53));

    /// <summary>A uniform integer in [0, <paramref name="bound"/>), without bias (Lemire, ACM Trans. Model. Comput. Simul. 29, 3 (2019)).</summary>
    /// <param name="bound">≥ 1.</param>
    /// <exception cref="ArgumentOutOfRangeException">The bound is below 1.</exception>
    public int NextInteger(int bound)
    {
        Preconditions.InRange(bound, 1, int.MaxValue);
        uint range = (uint)bound, threshold = (uint)-bound % range;
        ulong product;
        do
        {
            product = (ulong)NextBits() * range;
        }
        while ((uint)product < threshold);

        return (int)(product >> 32);
    }

    /// <summary>Normal of mean 0 and variance 1: the real part of √2 times <see cref="NextComplexNormal"/>.</summary>
    public double NextNormal() => NextComplexNormal().Real * Math.Sqrt(2);

    /// <summary>Circular complex normal z, E z = 0, E|z|² = 1 (Box and Muller, Ann. Math. Stat. 29, 610 (1958)).</summary>
    public Complex NextComplexNormal()
    {
        double radius = Math.Sqrt(-Math.Log(1 - NextUniform()));
        (double sine, double cosine) = Math.SinCos(2 * Math.PI * NextUniform());
        return new Complex(radius * cosine, radius * sine);
    }
}
