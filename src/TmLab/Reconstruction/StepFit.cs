using System.Numerics;
using TmLab.Numerics.Kernels;

namespace TmLab.Reconstruction;

/// <summary>
/// The least-squares fit of I = a + b cos θ − c sin θ to the frames of one phase-stepped group, as weights: a = Σ α_s I_s and
/// D = (b + i c)/2 = Σ w_s I_s. For S equal steps w_s = e^{−iθ_s}/S. Any S ≥ 3 phases that are not all the same three times over
/// will do (general least squares: Greivenkamp, Opt. Eng. 23, 350 (1984)).
/// </summary>
public sealed class StepFit
{
    private readonly double[] _theta;

    private StepFit(double[] theta, double[] background, Complex[] field)
    {
        _theta = theta;
        Background = background;
        Field = field;
    }

    /// <summary>α, one weight a frame; they sum to 1.</summary>
    public IReadOnlyList<double> Background { get; }

    /// <summary>w, one weight a frame; they sum to 0, so that a dark level drops out.</summary>
    public IReadOnlyList<Complex> Field { get; }

    /// <summary>Number of frames.</summary>
    public int FrameCount => _theta.Length;

    /// <summary>Σ |w|²: the variance of D for unit variance of each frame.</summary>
    public double FieldVariance => Field.Sum(w => (w.Real * w.Real) + (w.Imaginary * w.Imaginary));

    /// <summary>Fits for the phases given; null when they do not determine a, b and c.</summary>
    /// <param name="theta">The signal's phase in each frame relative to the reference, radians.</param>
    public static StepFit? TryCreate(ReadOnlySpan<double> theta)
    {
        double[,] normal = NormalMatrix(theta);
        if (!TryInvert(normal, out double[,] inverse))
        {
            return null;
        }

        var background = new double[theta.Length];
        var field = new Complex[theta.Length];
        for (int s = 0; s < theta.Length; s++)
        {
            double cos = Math.Cos(theta[s]), sin = -Math.Sin(theta[s]);
            double Row(int i) => inverse[i, 0] + (inverse[i, 1] * cos) + (inverse[i, 2] * sin);
            background[s] = Row(0);
            field[s] = new Complex(Row(1), Row(2)) / 2;
        }

        return new StepFit(theta.ToArray(), background, field);
    }

    /// <summary>The model's intensity in frame <paramref name="s"/> for background a and field D: a + 2 Re(D e^{iθ_s}).</summary>
    public double Model(int s, double a, Complex d) =>
        a + (2 * ((d.Real * Math.Cos(_theta[s])) - (d.Imaginary * Math.Sin(_theta[s]))));

    /// <summary>The fit in the form that the statistics kernel takes.</summary>
    internal FringeWeights ForStatistics() => new(
        [.. Background.Select(w => (float)w)],
        [.. Field.Select(w => (float)w.Real)],
        [.. Field.Select(w => (float)w.Imaginary)],
        [.. _theta.Select(t => (float)Math.Cos(t))],
        [.. _theta.Select(t => (float)Math.Sin(t))]);

    private static double[,] NormalMatrix(ReadOnlySpan<double> theta)
    {
        var normal = new double[3, 3];
        Span<double> row = stackalloc double[3];
        foreach (double angle in theta)
        {
            (row[0], row[1], row[2]) = (1, Math.Cos(angle), -Math.Sin(angle));
            for (int i = 0; i < 3; i++)
            {
                for (int j = 0; j < 3; j++)
                {
                    normal[i, j] += row[i] * row[j];
                }
            }
        }

        return normal;
    }

    // Cramer's rule on a 3 × 3 matrix; singular when the determinant is negligible beside that of S equal steps, S³/4.
    private static bool TryInvert(double[,] m, out double[,] inverse)
    {
        inverse = new double[3, 3];
        double Minor(int r0, int r1, int c0, int c1) => (m[r0, c0] * m[r1, c1]) - (m[r0, c1] * m[r1, c0]);
        double determinant =
            (m[0, 0] * Minor(1, 2, 1, 2)) - (m[0, 1] * Minor(1, 2, 0, 2)) + (m[0, 2] * Minor(1, 2, 0, 1));
        double scale = m[0, 0] * m[0, 0] * m[0, 0] / 4;
        if (!(determinant > 1e-6 * scale))
        {
            return false;
        }

        for (int i = 0; i < 3; i++)
        {
            for (int j = 0; j < 3; j++)
            {
                int r0 = (j + 1) % 3, r1 = (j + 2) % 3, c0 = (i + 1) % 3, c1 = (i + 2) % 3;
                inverse[i, j] = ((m[r0, c0] * m[r1, c1]) - (m[r0, c1] * m[r1, c0])) / determinant;
            }
        }

        return true;
    }
}
