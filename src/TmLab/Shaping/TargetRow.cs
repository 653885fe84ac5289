using System.Collections.Immutable;
using System.Globalization;
using TmLab.Failures;
using TmLab.Matrix;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;

namespace TmLab.Shaping;

/// <summary>The matrix row of a target pixel, with what is known of its noise. Immutable.</summary>
/// <param name="Target">The target.</param>
/// <param name="Elements">T[p, ·], one number a mode.</param>
/// <param name="Energy">Σ_n |T[p, n]|²: the mean intensity at the pixel for random phases at unit modulus.</param>
/// <param name="SignalShare">Which part of that energy is signal rather than measurement noise, 0 … 1; NaN where the noise is not known.</param>
public sealed record TargetRow(FocusTarget Target, ImmutableArray<Complex64> Elements, double Energy, double SignalShare)
{
    /// <summary>Reads the rows of targets, and only these.</summary>
    /// <param name="matrix">The matrix.</param>
    /// <param name="facts">Its facts.</param>
    /// <param name="file">The file's name, for messages.</param>
    /// <param name="targets">The targets, at least one.</param>
    /// <exception cref="BadInputException">A target lies outside the camera region or on an invalid pixel.</exception>
    public static ImmutableArray<TargetRow> Read(
        IRowBlockReader matrix, TransmissionMatrixFacts facts, string file, ImmutableArray<FocusTarget> targets)
    {
        ImmutableArray<InputProblem> problems = [.. targets.SelectMany(t => Problems(facts, file, t.Pixel))];
        return problems.IsEmpty
            ? [.. targets.Select(t => ReadOne(matrix, facts, t))]
            : throw new BadInputException(problems);
    }

    private static TargetRow ReadOne(IRowBlockReader matrix, TransmissionMatrixFacts facts, FocusTarget target)
    {
        int row = (target.Pixel.Y * facts.CameraRegion.Width) + target.Pixel.X;
        var elements = new Complex64[matrix.ColumnCount];
        matrix.ReadRows(row, 1, elements);
        double energy = elements.Sum(t => (double)t.SquaredMagnitude);
        double noise = (double)facts.Pixels.NoiseRms[row] * facts.Pixels.NoiseRms[row] * elements.Length;
        return new TargetRow(target, [.. elements], energy, Math.Clamp(1 - (noise / energy), 0, 1));
    }

    private static IEnumerable<InputProblem> Problems(TransmissionMatrixFacts facts, string file, CameraPixel pixel)
    {
        ImageSize size = facts.CameraRegion;
        string place = string.Create(CultureInfo.InvariantCulture, $"focus {pixel.X},{pixel.Y}");
        if (pixel.X < 0 || pixel.Y < 0 || pixel.X >= size.Width || pixel.Y >= size.Height)
        {
            yield return new InputProblem(
                file,
                place,
                "lies outside the camera region",
                string.Create(CultureInfo.InvariantCulture, $"choose x in 0 … {size.Width - 1} and y in 0 … {size.Height - 1}"));
        }
        else if (!facts.Pixels.Valid[(pixel.Y * size.Width) + pixel.X])
        {
            yield return new InputProblem(file, place, "is an invalid pixel", NearestValid(facts, pixel));
        }
    }

    private static string NearestValid(TransmissionMatrixFacts facts, CameraPixel pixel)
    {
        PixelFacts p = facts.Pixels;
        int nearest = Enumerable.Range(0, p.Valid.Length)
            .Where(i => p.Valid[i])
            .OrderBy(i => Square(p.X[i] - pixel.X) + Square(p.Y[i] - pixel.Y))
            .FirstOrDefault(-1);
        return nearest < 0
            ? "no pixel of this matrix is valid: measure again"
            : string.Create(CultureInfo.InvariantCulture, $"the nearest valid pixel is {p.X[nearest]},{p.Y[nearest]}");
    }

    private static long Square(long x) => x * x;
}
