using TmLab.Cli.Options;
using Xunit;

namespace TmLab.EndToEndTests.InProcess;

public sealed class ByteSizeTests
{
    // Prefixes: IEC 80000-13:2008 (KiB = 1024 bytes) and the SI brochure (kB = 1000 bytes).
    [Theory]
    [InlineData("2GiB", 2_147_483_648)]
    [InlineData("2 GiB", 2_147_483_648)]
    [InlineData("2gb", 2_000_000_000)]
    [InlineData("512MiB", 536_870_912)]
    [InlineData("512m", 536_870_912)]
    [InlineData("1.5G", 1_610_612_736)]
    [InlineData("33554432B", 33_554_432)]
    [InlineData("16384KiB", 16_777_216)]
    [InlineData("1TiB", 1_099_511_627_776)]
    public void Sizes_are_read_with_their_units(string text, long bytes)
    {
        Assert.True(ByteSize.TryParse(text, out long found));
        Assert.Equal(bytes, found);
    }

    [Theory]
    [InlineData("")]
    [InlineData("2")]
    [InlineData("GiB")]
    [InlineData("-2GiB")]
    [InlineData("1,5GiB")]
    [InlineData("1e3MiB")]
    [InlineData("NaNGiB")]
    [InlineData("2GiBs")]
    [InlineData("15MiB")]
    [InlineData("9999999TiB")]
    public void What_is_no_size_is_refused(string text) => Assert.False(ByteSize.TryParse(text, out _));

    [Theory]
    [InlineData(1023, "1023 B")]
    [InlineData(16 << 20, "16 MiB")]
    [InlineData(1_610_612_736, "1.5 GiB")]
    public void Sizes_are_written_in_the_largest_fitting_unit(long bytes, string text) => Assert.Equal(text, ByteSize.Format(bytes));
}
