using System.Collections.Immutable;
using TmLab.Numerics;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>
/// The points of the pupil and the step from there to the camera: E(p) = P^{-1/2} Σ_k t(k) e^{2πi k·p/size}, an isometry, so the
/// camera sees the singular values of the matrix in the pupil unchanged. Field amplitudes at different points are independent for
/// a fully scattering medium, which makes the pupil a low-pass filter of the speckle field. The field is periodic over the camera
/// region (opposite edges join), and pixels sample it at their centres.
/// </summary>
internal sealed class Pupil
{
    private readonly ImageSize _size;
    private readonly int[] _xOf;
    private readonly int[] _yOf;
    private readonly Twiddles _alongX;
    private readonly Twiddles _alongY;

    private Pupil(ImageSize size, ImmutableArray<(int Y, int X)> points)
    {
        _size = size;
        Points = points;
        int minX = points.Min(p => p.X);
        int minY = points.Min(p => p.Y);
        ColumnCount = points.Max(p => p.X) - minX + 1;
        RowCount = points.Max(p => p.Y) - minY + 1;
        _xOf = [.. points.Select(p => p.X - minX)];
        _yOf = [.. points.Select(p => p.Y - minY)];
        _alongX = new Twiddles(minX, ColumnCount, size.Width);
        _alongY = new Twiddles(minY, RowCount, size.Height);
    }

    /// <summary>Spatial frequencies in cycles over the camera region.</summary>
    public ImmutableArray<(int Y, int X)> Points { get; }

    /// <summary>Number of points.</summary>
    public int PointCount => Points.Length;

    /// <summary>Width of the smallest rectangle around the points.</summary>
    public int ColumnCount { get; }

    /// <summary>Height of the smallest rectangle around the points.</summary>
    public int RowCount { get; }

    /// <summary>Whether every spatial frequency of the region passes, so that white stays white.</summary>
    public bool IsOpen => PointCount == _size.PixelCount;

    /// <summary>A point's row and column in the rectangle around the pupil.</summary>
    public (int Y, int X) PlaceInRectangle(int point) => (_yOf[point], _xOf[point]);

    /// <summary>The pupil that gives a camera region a speckle grain.</summary>
    public static Pupil Create(ImageSize size, SpeckleGrain grain)
    {
        Preconditions.InRange(grain.WidthPixels, 0, Math.Min(size.Width, size.Height) / 2.0);
        double half = grain.WidthPixels > 0 ? grain.PupilCyclesPerPixel / 2 : double.PositiveInfinity;
        IEnumerable<(int Y, int X)> points =
            from y in Enumerable.Range(-(size.Height / 2), size.Height)
            from x in Enumerable.Range(-(size.Width / 2), size.Width)
            where Passes((double)y / size.Height, (double)x / size.Width, half, grain.Shape)
            select (y, x);
        return new Pupil(size, [.. points]);
    }

    /// <summary>Takes one field from the pupil to the camera.</summary>
    public void ToCamera(ReadOnlySpan<float> pupilRe, ReadOnlySpan<float> pupilIm, Span<float> cameraRe, Span<float> cameraIm)
    {
        var lines = new SplitField(RowCount, _size.Width);
        for (int point = 0; point < PointCount; point++)
        {
            int line = _yOf[point];
            _alongX.Accumulate(_xOf[point], pupilRe[point], pupilIm[point], lines.Real(line), lines.Imaginary(line));
        }

        float norm = (float)(1 / Math.Sqrt(_size.PixelCount));
        for (int y = 0; y < _size.Height; y++)
        {
            SumLines(lines, y, norm, cameraRe.Slice(y * _size.Width, _size.Width), cameraIm.Slice(y * _size.Width, _size.Width));
        }
    }

    private void SumLines(SplitField lines, int y, float norm, Span<float> re, Span<float> im)
    {
        re.Clear();
        im.Clear();
        for (int line = 0; line < RowCount; line++)
        {
            (float tr, float ti) = _alongY[line, y];
            ComplexRows.AddScaled(tr * norm, ti * norm, lines.Real(line), lines.Imaginary(line), re, im);
        }
    }

    private static bool Passes(double fy, double fx, double half, PupilShape shape) => shape == PupilShape.Circular
        ? (fy * fy) + (fx * fx) <= half * half
        : Math.Abs(fy) <= half && Math.Abs(fx) <= half;

    private sealed class SplitField(int rows, int columns)
    {
        private readonly float[] _re = new float[rows * columns];
        private readonly float[] _im = new float[rows * columns];

        public Span<float> Real(int row) => _re.AsSpan(row * columns, columns);

        public Span<float> Imaginary(int row) => _im.AsSpan(row * columns, columns);
    }

    /// <summary>e^{2πi k p / length} for frequencies first … first+count−1 and positions 0 … length−1.</summary>
    private sealed class Twiddles
    {
        private readonly int _length;
        private readonly float[] _re;
        private readonly float[] _im;

        public Twiddles(int first, int count, int length)
        {
            _length = length;
            _re = new float[count * length];
            _im = new float[count * length];
            for (int i = 0; i < _re.Length; i++)
            {
                long turns = (long)(first + (i / length)) * (i % length) % length;
                (double sin, double cos) = PortableMath.SinCosTurns((double)turns / length);
                (_re[i], _im[i]) = ((float)cos, (float)sin);
            }
        }

        public (float Real, float Imaginary) this[int frequency, int position] =>
            (_re[(frequency * _length) + position], _im[(frequency * _length) + position]);

        public void Accumulate(int frequency, float re, float im, Span<float> sumRe, Span<float> sumIm) => ComplexRows.AddScaled(
            re, im, _re.AsSpan(frequency * _length, _length), _im.AsSpan(frequency * _length, _length), sumRe, sumIm);
    }
}
