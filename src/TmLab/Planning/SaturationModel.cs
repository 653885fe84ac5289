namespace TmLab.Planning;

/// <summary>
/// How often a pixel saturates: an even reference of intensity R and fully developed speckle of mean E (Goodman, J. Opt. Soc. Am.
/// 66, 1145 (1976)) give I = |√R + s e^{iθ}|² with s² exponential of mean E and θ uniform.
/// </summary>
internal static class SaturationModel
{
    private const int Angles = 720;

    /// <summary>P(I &gt; limit); for each θ the s beyond the limit are the roots of s² + 2√R s cos θ + R = limit.</summary>
    public static double Share(double reference, double signal, double limit) =>
        Enumerable.Range(0, Angles).Average(i => ShareAt(Math.Cos(2 * Math.PI * (i + 0.5) / Angles), reference, signal, limit));

    private static double ShareAt(double cos, double reference, double signal, double limit)
    {
        double along = Math.Sqrt(reference) * cos;
        double discriminant = (along * along) - reference + limit;
        if (discriminant < 0)
        {
            return 1;
        }

        double root = Math.Sqrt(discriminant);
        double Beyond(double s) => s <= 0 ? 1 : Math.Exp(-s * s / signal);
        return limit > reference ? Beyond(-along + root) : 1 - Beyond(-along - root) + Beyond(-along + root);
    }
}
