using TmLab.Numerics.Statistics;
using Xunit;

namespace TmLab.OutsideTests;

/// <summary>
/// Salmon, Moraes, Dror and Shaw, Proc. SC11 (2011): the known answers that accompany the authors' own implementation of
/// Philox4x32-10 (file kat_vectors of the Random123 distribution; values from memory).
/// </summary>
public sealed class SalmonTests
{
    [Theory]
    [InlineData(0u, 0u, 0u, 0u, 0u, 0u, 0x6627e8d5u, 0xe169c58du, 0xbc57ac4cu, 0x9b00dbd8u)]
    [InlineData(0xffffffffu, 0xffffffffu, 0xffffffffu, 0xffffffffu, 0xffffffffu, 0xffffffffu, 0x408f276du, 0x41c83b0eu, 0xa20bc7c6u, 0x6d5451fdu)]
    [InlineData(0x243f6a88u, 0x85a308d3u, 0x13198a2eu, 0x03707344u, 0xa4093822u, 0x299f31d0u, 0xd16cfe09u, 0x94fdccebu, 0x5001e420u, 0x24126ea1u)]
    public void Philox_gives_the_known_answers(
        uint c0, uint c1, uint c2, uint c3, uint key0, uint key1, uint x0, uint x1, uint x2, uint x3) =>
        Assert.Equal(new PhiloxBlock(x0, x1, x2, x3), Philox.At(new PhiloxBlock(c0, c1, c2, c3), key0, key1));

    [Fact]
    public void A_sequence_begins_with_the_blocks_of_its_key()
    {
        var random = new SeededRandom(0);
        Assert.Equal([0x6627e8d5u, 0xe169c58du, 0xbc57ac4cu, 0x9b00dbd8u], (uint[])[random.NextBits(), random.NextBits(), random.NextBits(), random.NextBits()]);
    }
}
