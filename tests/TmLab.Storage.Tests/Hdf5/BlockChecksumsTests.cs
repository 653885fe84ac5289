using System.IO.Hashing;
using System.Text;
using CsCheck;
using TmLab.Storage.Hdf5;
using TmLab.Storage.StageFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.Hdf5;

public sealed class BlockChecksumsTests
{
    [Fact]
    public void Pieces_in_any_order_give_the_checksum_of_the_whole() =>
        Gen.Select(Gen.Byte.Array[1, 400], Gen.Int[1, 100], Gen.Int[1, 60], Gen.Int).Sample((bytes, blockBytes, pieceBytes, seed) =>
        {
            var checksums = new BlockChecksums(bytes.Length, blockBytes);
            int[] starts = [.. Enumerable.Range(0, ((bytes.Length - 1) / pieceBytes) + 1).Select(k => k * pieceBytes)];
            new Random(seed).Shuffle(starts);
            foreach (int start in starts)
            {
                Assert.True(checksums.FirstIncompleteBlock >= 0);
                checksums.Add(start, bytes.AsSpan(start, Math.Min(pieceBytes, bytes.Length - start)));
            }

            Assert.Equal(-1, checksums.FirstIncompleteBlock);
            Assert.Equal(bytes.Chunk(blockBytes).Select(b => Crc32.HashToUInt32(b)), checksums.Values);
        });

    [Fact]
    public void The_check_value_of_the_algorithm_is_met()
    {
        // "123456789" gives CBF43926: the check value of CRC-32/ISO-HDLC in the catalogue of parametrised CRC algorithms (G. Cook).
        var checksums = new BlockChecksums(9);
        checksums.Add(4, Encoding.ASCII.GetBytes("56789"));
        checksums.Add(0, Encoding.ASCII.GetBytes("1234"));
        Assert.Equal([0xCBF43926u], checksums.Values);
    }

    [Fact]
    public void The_digest_of_a_file_is_the_published_one()
    {
        // "abc" gives this digest: NIST, FIPS 180-4 example (SHA256.pdf of the Cryptographic Standards examples).
        using var folder = new TemporaryFolder();
        File.WriteAllText(folder.File("abc"), "abc");
        Assert.Equal(
            "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad",
            FileDigest.Sha256(folder.File("abc"), null, TestContext.Current.CancellationToken));
    }
}
