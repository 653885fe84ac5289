using System.Numerics;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Simulation;
using Xunit;

namespace TmLab.Tests.Simulation;

public sealed class MediaTests
{
    [Fact]
    public void A_slab_seen_whole_has_the_bimodal_moments()
    {
        // Beenakker, Rev. Mod. Phys. 69, 731 (1997): ⟨τ²⟩/⟨τ⟩ = 2/3, ⟨τ³⟩/⟨τ⟩ = 8/15. Whole: m1 = m2 = 1, no fluctuation.
        Complex[,] w = TransmittedPower(new DiffusiveSlab(0.1, 64), side: 8, gridSide: 8, seed: 3);
        double first = Trace(w);
        double second = TraceOfProduct(w, w);
        double third = TraceOfProduct(Multiply(w, w), w);
        Assert.Equal(0.1, first / 64, 1e-6);
        Assert.Equal(2.0 / 3, second / first, 1e-5);
        Assert.Equal(8.0 / 15, third / first, 1e-5);
    }

    [Fact]
    public void The_eigenvalues_follow_the_bimodal_law()
    {
        // P(τ > 0.5) = 0.881374 τ̄, P(τ > 0.9) = 0.327450 τ̄ (quadrature of the law); one eigenvalue is 1/M of the probability.
        IReadOnlyList<double> tau = new DiffusiveSlab(0.1, 2000).TransmissionEigenvalues();
        Assert.Equal(0.0881374, tau.Count(t => t > 0.5) / 2000.0, 1.0 / 2000);
        Assert.Equal(0.0327450, tau.Count(t => t > 0.9) / 2000.0, 1.0 / 2000);
        Assert.True(tau.Zip(tau.Skip(1)).All(pair => pair.First > pair.Second));
    }

    [Theory]
    [InlineData(12, 8, 288)]
    [InlineData(8, 8, 128)]
    [InlineData(6, 4, 40)]
    public void A_slab_seen_in_part_has_the_filtered_moments(int side, int gridSide, int channels)
    {
        // Goetschy and Stone, Phys. Rev. Lett. 111, 063901 (2013): ⟨τ̃⟩ = m2 τ̄, Var/⟨τ̃⟩² = m1/m2 + m1 (2/(3τ̄) − 2), derived
        // there for many channels; the second moment of M channels differs by a relative 1/M² at most a few times.
        const double Transmittance = 0.1;
        const int Draws = 24;
        double m1 = (double)gridSide * gridSide / channels;
        double m2 = (double)side * side / channels;
        double[] first = new double[Draws];
        double[] second = new double[Draws];
        for (int draw = 0; draw < Draws; draw++)
        {
            Complex[,] w = TransmittedPower(new DiffusiveSlab(Transmittance, channels), side, gridSide, (ulong)(100 + draw));
            first[draw] = Trace(w) / (gridSide * gridSide);
            second[draw] = TraceOfProduct(w, w) / (gridSide * gridSide);
        }

        double mean = m2 * Transmittance;
        double meanSquare = mean * mean * (1 + (m1 / m2) + (m1 * ((2 / (3 * Transmittance)) - 2)));
        AssertMean(first, mean, 1e-4 * mean);
        AssertMean(second, meanSquare, 10 * meanSquare / channels / channels);
    }

    [Fact]
    public void The_thin_diffuser_has_the_published_memory_effect()
    {
        // C(q) = [qL / sinh qL]² (Feng, Kane, Lee, Stone, Phys. Rev. Lett. 61, 834 (1988)); ½ at qL = 1.49143.
        const int Columns = 64;
        const double Thickness = 2;
        int[] shifts = [0, 1, 3, 5, 8, 12];
        double[] q = [.. shifts.Select(shift => 2 * Math.PI * shift / Columns)];
        double[] measured = TiltCorrelations(new ThinDiffuser(Thickness), Columns, q, shifts);
        Assert.Equal(1, measured[0], 1e-9);
        for (int i = 1; i < shifts.Length; i++)
        {
            double formula = Math.Pow(q[i] * Thickness / Math.Sinh(q[i] * Thickness), 2);
            double ofGrid = Math.Pow(GridCorrelation(new ThinDiffuser(Thickness), Columns, q[i]), 2);
            // The envelope is cut at the edges of the grid: two ends of about L of 64 macro-pixels.
            Assert.InRange(ofGrid, formula - (2 * Thickness / Columns), formula + (2 * Thickness / Columns));
            // The overlap of 16 × 512 independent speckles has a standard error near 1/√8192.
            Assert.InRange(Math.Sqrt(measured[i]), Math.Sqrt(ofGrid) - (4 / Math.Sqrt(8192)), Math.Sqrt(ofGrid) + (4 / Math.Sqrt(8192)));
        }
    }

    [Fact]
    public void Half_of_the_memory_is_left_at_the_published_tilt()
    {
        double q = 1.49143 / 4;
        double amplitude = GridCorrelation(new ThinDiffuser(4), 4000, q);
        Assert.Equal(0.5, amplitude * amplitude, 3e-3);
    }

    [Fact]
    public void Unscattered_light_takes_its_share_and_has_even_magnitude()
    {
        BenchSettings settings = new() { BallisticFraction = 1 };
        using VirtualBench bench = Benches.Create(settings, Benches.Manifest(16, 8), Benches.Plain(FrameRole.Blank, 1));
        double element = Math.Sqrt(1000.0 / 64);
        Assert.All(bench.Truth.Matrix.Buffer.AsSpan().ToArray(), t => Assert.Equal(element, Math.Sqrt(t.SquaredMagnitude), 1e-5 * element));
    }

    [Fact]
    public void Unscattered_light_adds_to_any_medium_in_its_share()
    {
        // With share b, ⟨T, T_ballistic⟩/N = √b v up to the overlap of Gaussian elements with a fixed vector, 1/√elements.
        MeasurementManifest manifest = Benches.Manifest(32, 4);
        Schedule schedule = Benches.Plain(FrameRole.Blank, 1);
        using VirtualBench part = Benches.Create(new BenchSettings { BallisticFraction = 0.25 }, manifest, schedule);
        using VirtualBench all = Benches.Create(new BenchSettings { BallisticFraction = 1 }, manifest, schedule);
        Complex64[] a = part.Truth.Matrix.Buffer.AsSpan().ToArray();
        Complex64[] b = all.Truth.Matrix.Buffer.AsSpan().ToArray();
        double overlap = a.Zip(b, (x, y) => (double)(x.r * y.r) + (x.i * y.i)).Average() / (1000.0 / 16);
        Assert.InRange(overlap, 0.5 - (4 / Math.Sqrt(a.Length)), 0.5 + (4 / Math.Sqrt(a.Length)));
    }

    private static Complex[,] TransmittedPower(DiffusiveSlab slab, int side, int gridSide, ulong seed)
    {
        using VirtualBench bench = Benches.Create(
            new BenchSettings { Medium = slab, Seed = seed }, Benches.Manifest(side, gridSide), Benches.Plain(FrameRole.Blank, 1));
        ComplexMatrix t = bench.Truth.Matrix;
        double scale = bench.Truth.MatrixPerTransmission * bench.Truth.MatrixPerTransmission;
        var w = new Complex[t.Columns, t.Columns];
        for (int i = 0; i < t.Columns; i++)
        {
            for (int j = 0; j < t.Columns; j++)
            {
                w[i, j] = Product(t, i, j) / scale;
            }
        }

        return w;
    }

    private static Complex Product(ComplexMatrix t, int i, int j)
    {
        Complex sum = 0;
        for (int p = 0; p < t.Rows; p++)
        {
            Span<Complex64> row = t.Row(p);
            sum += Complex.Conjugate(row[i]) * row[j];
        }

        return sum;
    }

    private static double Trace(Complex[,] w) => Enumerable.Range(0, w.GetLength(0)).Sum(i => w[i, i].Real);

    private static double TraceOfProduct(Complex[,] a, Complex[,] b) =>
        Enumerable.Range(0, a.GetLength(0)).Sum(i => Enumerable.Range(0, a.GetLength(0)).Sum(j => (a[i, j] * b[j, i]).Real));

    private static Complex[,] Multiply(Complex[,] a, Complex[,] b)
    {
        int n = a.GetLength(0);
        var product = new Complex[n, n];
        for (int i = 0; i < n; i++)
        {
            for (int j = 0; j < n; j++)
            {
                product[i, j] = Enumerable.Range(0, n).Aggregate(Complex.Zero, (sum, k) => sum + (a[i, k] * b[k, j]));
            }
        }

        return product;
    }

    private static void AssertMean(double[] draws, double expected, double bias)
    {
        double mean = draws.Average();
        double standardError = Math.Sqrt(draws.Sum(d => (d - mean) * (d - mean)) / (draws.Length - 1) / draws.Length);
        Assert.InRange(mean, expected - (4 * standardError) - bias, expected + (4 * standardError) + bias);
    }

    /// <summary>The field correlation that the envelope gives on a grid of so many columns: Σ P e^{iq(n−k)} / Σ P.</summary>
    private static double GridCorrelation(ThinDiffuser diffuser, int columns, double q)
    {
        double sum = 0;
        double norm = 0;
        for (int distance = 1 - columns; distance < columns; distance++)
        {
            double weight = (columns - Math.Abs(distance)) * diffuser.Spread(distance);
            sum += weight * Math.Cos(q * distance);
            norm += weight;
        }

        return sum / norm;
    }

    /// <summary>|⟨E₀(p + shift)* E_q(p)⟩|² over its norms for several tilts, from sixteen diffusers.</summary>
    private static double[] TiltCorrelations(ThinDiffuser diffuser, int columns, double[] q, int[] shifts)
    {
        var overlap = new Complex[q.Length];
        var flatPower = new double[q.Length];
        var tiltedPower = new double[q.Length];
        for (ulong seed = 1; seed <= 16; seed++)
        {
            Complex[][] fields = TiltedFields(diffuser, columns, q, seed);
            for (int i = 0; i < q.Length; i++)
            {
                for (int p = 0; p < fields[i].Length; p++)
                {
                    Complex moved = fields[0][(p / columns * columns) + ((p + shifts[i]) % columns)];
                    overlap[i] += Complex.Conjugate(moved) * fields[i][p];
                    flatPower[i] += moved.Magnitude * moved.Magnitude;
                    tiltedPower[i] += fields[i][p].Magnitude * fields[i][p].Magnitude;
                }
            }
        }

        return [.. overlap.Select((o, i) => o.Magnitude * o.Magnitude / (flatPower[i] * tiltedPower[i]))];
    }

    private static Complex[][] TiltedFields(ThinDiffuser diffuser, int columns, double[] q, ulong seed)
    {
        MeasurementManifest manifest = Benches.Manifest(8, 4);
        manifest = manifest with
        {
            Camera = manifest.Camera with { Size = new ImageSize(columns, 8) },
            Modes = manifest.Modes with { PatternCount = 4 * columns, Grid = new GridShape(4, columns) },
        };
        BenchSettings settings = new() { Medium = diffuser, Seed = seed };
        using VirtualBench bench = Benches.Create(settings, manifest, Benches.Plain(FrameRole.Blank, 1));
        return [.. q.Select(tilt => Field(bench.Truth.Matrix, Ramp(4 * columns, columns, tilt)))];
    }

    private static Complex[] Ramp(int modes, int columns, double q) =>
        [.. Enumerable.Range(0, modes).Select(n => Complex.FromPolarCoordinates(1, q * (n % columns)))];

    private static Complex[] Field(ComplexMatrix matrix, Complex[] input)
    {
        var field = new Complex[matrix.Rows];
        for (int p = 0; p < field.Length; p++)
        {
            Span<Complex64> row = matrix.Row(p);
            for (int n = 0; n < row.Length; n++)
            {
                field[p] += row[n] * input[n];
            }
        }

        return field;
    }
}
