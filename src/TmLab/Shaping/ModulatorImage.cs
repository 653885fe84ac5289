using System.Collections.Immutable;
using TmLab.Numerics;
using TmLab.Quantities;

namespace TmLab.Shaping;

/// <summary>The depth of a modulator image.</summary>
public enum ModulatorImageDepth
{
    /// <summary>One bit a mirror: levels 0 (off) and 1 (on).</summary>
    OneBit,

    /// <summary>Eight bits a panel pixel: grey levels 0 … 255.</summary>
    EightBit,
}

/// <summary>An image for a modulator: one level a panel pixel, exactly as the panel shall show it. Immutable.</summary>
public sealed class ModulatorImage
{
    /// <summary>Takes levels in row-major order.</summary>
    /// <param name="size">The image's size, panel pixels.</param>
    /// <param name="levels">One level a panel pixel; 0 or 1 for one-bit images.</param>
    /// <param name="depth">Bits a pixel.</param>
    /// <exception cref="ArgumentException">The number of levels is not the number of pixels, or a one-bit level is above 1.</exception>
    public ModulatorImage(ImageSize size, ImmutableArray<byte> levels, ModulatorImageDepth depth = ModulatorImageDepth.EightBit)
    {
        Preconditions.InRange(size.Width, 1, int.MaxValue);
        Preconditions.InRange(size.Height, 1, int.MaxValue);
        Preconditions.SameLength(levels.Length, size.PixelCount);
        Preconditions.Require(
            depth == ModulatorImageDepth.EightBit || !levels.AsSpan().ContainsAnyExceptInRange((byte)0, (byte)1), "One-bit levels are 0 or 1.");
        Size = size;
        Levels = levels;
        Depth = depth;
    }

    /// <summary>The image's size, panel pixels.</summary>
    public ImageSize Size { get; }

    /// <summary>One level a panel pixel, row-major.</summary>
    public ImmutableArray<byte> Levels { get; }

    /// <summary>Bits a pixel.</summary>
    public ModulatorImageDepth Depth { get; }
}
