using System.Numerics;

namespace TmLab.Numerics.LinearAlgebra.Managed;

/// <summary>
/// An elementary reflection H = I − τ v v† with v_0 = 1 such that H† x = (β, 0, …, 0) with β real (the convention of LAPACK's
/// zlarfg; Anderson et al., LAPACK Users' Guide, 3rd ed. (1999)).
/// </summary>
/// <param name="Tau">τ; 0 when x is already of the form wanted.</param>
/// <param name="Beta">β = −sign(Re x_0) ‖x‖.</param>
internal readonly record struct Reflector(Complex Tau, double Beta)
{
    /// <summary>Replaces x by v.</summary>
    public static Reflector Make(Span<double> real, Span<double> imaginary)
    {
        var alpha = new Complex(real[0], imaginary[0]);
        double largest = Largest(real, imaginary);
        if (largest == 0 || (real.Length == 1 && alpha.Imaginary == 0))
        {
            (real[0], imaginary[0]) = (1, 0);
            return new Reflector(Complex.Zero, alpha.Real);
        }

        double norm = Norm(real, imaginary, largest);
        double beta = alpha.Real > 0 ? -norm : norm;
        Complex scale = Complex.One / (alpha - beta);
        for (int k = 1; k < real.Length; k++)
        {
            Complex v = scale * new Complex(real[k], imaginary[k]);
            (real[k], imaginary[k]) = (v.Real, v.Imaginary);
        }

        (real[0], imaginary[0]) = (1, 0);
        return new Reflector((beta - alpha) / beta, beta);
    }

    // Scaled, so that squares neither overflow nor vanish.
    private static double Norm(ReadOnlySpan<double> real, ReadOnlySpan<double> imaginary, double largest)
    {
        double sum = 0;
        for (int k = 0; k < real.Length; k++)
        {
            double r = real[k] / largest, i = imaginary[k] / largest;
            sum += (r * r) + (i * i);
        }

        return largest * Math.Sqrt(sum);
    }

    private static double Largest(ReadOnlySpan<double> real, ReadOnlySpan<double> imaginary)
    {
        double largest = 0;
        for (int k = 0; k < real.Length; k++)
        {
            largest = Math.Max(largest, Math.Max(Math.Abs(real[k]), Math.Abs(imaginary[k])));
        }

        return largest;
    }
}
