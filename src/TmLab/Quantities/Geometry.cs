namespace TmLab.Quantities;

/// <summary>An image's size in pixels.</summary>
public readonly record struct ImageSize(int Width, int Height)
{
    /// <summary>Width times height.</summary>
    public int PixelCount => checked(Width * Height);

    /// <inheritdoc/>
    public override string ToString() => $"{Width} × {Height}";
}

/// <summary>The shape of a grid of macro-pixels; modes are numbered row-major over it.</summary>
public readonly record struct GridShape(int Rows, int Columns)
{
    /// <summary>Rows times columns.</summary>
    public int Count => checked(Rows * Columns);

    /// <inheritdoc/>
    public override string ToString() => $"{Rows} × {Columns}";
}

/// <summary>A rectangle of pixels: columns X … X+Width−1, rows Y … Y+Height−1.</summary>
public readonly record struct PixelRectangle(int X, int Y, int Width, int Height)
{
    /// <summary>Whether the rectangle lies wholly within an image of the given size and is not empty.</summary>
    public bool FitsIn(ImageSize size) =>
        X >= 0 && Y >= 0 && Width > 0 && Height > 0 && (long)X + Width <= size.Width && (long)Y + Height <= size.Height;
}

/// <summary>One pixel of the camera region: X is the column, Y the row, both from 0.</summary>
public readonly record struct CameraPixel(int X, int Y)
{
    /// <inheritdoc/>
    public override string ToString() => $"{X},{Y}";
}
