namespace TmLab.Simulation;

/// <summary>
/// A thick, fully scattering medium of which only a small part of the channels is seen: independent circular complex Gaussian
/// elements (Goodman, J. Opt. Soc. Am. 66, 1145 (1976); Popoff et al., Phys. Rev. Lett. 104, 100601 (2010)).
/// </summary>
public sealed record IndependentGaussian : Medium
{
    /// <inheritdoc/>
    internal override double Draw(
        MediumShape shape, RandomStreams streams, int realisation, ParallelOptions options, FieldPlanes target)
    {
        Parallel.For(0, target.Rows, options, mode => DrawRow(streams, realisation, target, mode));
        return 1;
    }

    private static void DrawRow(RandomStreams streams, int realisation, FieldPlanes target, int mode)
    {
        Span<float> re = target.Real(mode);
        Span<float> im = target.Imaginary(mode);
        for (int point = 0; point < re.Length; point++)
        {
            (double a, double b) = streams.ComplexNormal(RandomPurpose.Medium, mode, point, realisation);
            (re[point], im[point]) = ((float)a, (float)b);
        }
    }
}
