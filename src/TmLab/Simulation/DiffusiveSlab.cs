using TmLab.Numerics;

namespace TmLab.Simulation;

/// <summary>
/// A lossless diffusive slab seen through part of its channels: t̃ = P₂ U √τ V† P₁ with Haar-random U and V of
/// <paramref name="TransverseModes"/> channels and transmission eigenvalues τ from the bimodal law
/// p(τ) = (τ̄/2)/(τ√(1−τ)), τ = 1/cosh²x with x uniform on [0, 1/τ̄] (Dorokhov 1984; Beenakker, Rev. Mod. Phys. 69, 731 (1997)).
/// The controlled fractions are m₁ = macro-pixels / channels and m₂ = pupil points / channels (Goetschy and Stone, Phys. Rev.
/// Lett. 111, 063901 (2013)).
/// </summary>
/// <param name="MeanTransmittance">τ̄, in (0, 1]; the drawn eigenvalues have the law's own mean τ̄ tanh(1/τ̄).</param>
/// <param name="TransverseModes">Number of channels on either side; at least the number of macro-pixels and of pupil points.</param>
public sealed record DiffusiveSlab(double MeanTransmittance, int TransverseModes) : Medium
{
    /// <summary>
    /// The transmission eigenvalues of the whole slab, descending: the law's quantiles at (m + ½)/M rather than independent draws,
    /// because the true eigenvalues repel and lie almost regularly.
    /// </summary>
    public IReadOnlyList<double> TransmissionEigenvalues() =>
        [.. Enumerable.Range(0, TransverseModes).Select(m => Eigenvalue((m + 0.5) / (TransverseModes * MeanTransmittance)))];

    /// <inheritdoc/>
    /// <remarks>
    /// With V P₁ the isometry Q₁ of a Gaussian matrix X and A = √τ Q₁ = Q R, the product U Q is again a Haar isometry Q₂ that does
    /// not depend on R. So t̃ = P₂ Q₂ R with R from A†A = R†R: two Gaussian matrices of M × N are enough, and no M × M one.
    /// Isometries come from X†X = L L† as Q = X L^{-†}, whose law is Haar as that of the QR decomposition with positive diagonal.
    /// </remarks>
    internal override double Draw(
        MediumShape shape, RandomStreams streams, int realisation, ParallelOptions options, FieldPlanes target)
    {
        Preconditions.InRange(MeanTransmittance, 0.005, 1);
        Preconditions.AtLeast(TransverseModes, Math.Max(target.Rows, target.Columns));
        double[] tau = [.. TransmissionEigenvalues()];
        double[] ones = [.. Enumerable.Repeat(1.0, TransverseModes)];

        TallGaussian input = TallGaussian.Draw(streams, 2 * realisation, TransverseModes, target.Rows, options);
        HermitianFactor inputFactor = HermitianFactor.Cholesky(input.Gram(ones, options));
        HermitianFactor transmitted = HermitianFactor.Cholesky(inputFactor.Whiten(input.Gram(tau, options)));

        TallGaussian output = TallGaussian.Draw(streams, (2 * realisation) + 1, TransverseModes, target.Rows, options);
        HermitianFactor outputFactor = HermitianFactor.Cholesky(output.Gram(ones, options));
        Parallel.For(0, target.Columns, options, point => WriteOutput(output, outputFactor, transmitted, point, target));
        return tau.Sum() / TransverseModes / TransverseModes;
    }

    private static double Eigenvalue(double x)
    {
        double e = PortableMath.Exp(-x);
        double sech = 2 * e / (1 + (e * e));
        return sech * sech;
    }

    /// <summary>Row of t̃: (row of X₂) L₂^{-†} L_C†, where R = L_C†.</summary>
    private static void WriteOutput(
        TallGaussian output, HermitianFactor outputFactor, HermitianFactor transmitted, int point, FieldPlanes target)
    {
        double[] re = output.RowReal(point);
        double[] im = output.RowImaginary(point);
        outputFactor.SolveRowByAdjoint(re, im);
        transmitted.MultiplyRowByAdjoint(re, im);
        for (int mode = 0; mode < re.Length; mode++)
        {
            target.Real(mode)[point] = (float)re[mode];
            target.Imaginary(mode)[point] = (float)im[mode];
        }
    }
}
