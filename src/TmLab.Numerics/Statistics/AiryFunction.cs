using MathNet.Numerics;

namespace TmLab.Numerics.Statistics;

/// <summary>The Airy function Ai (Abramowitz and Stegun, §10.4), in whose kernel the laws of extreme eigenvalues are written.</summary>
public static class AiryFunction
{
    /// <summary>Ai(x).</summary>
    public static double Value(double x) => SpecialFunctions.AiryAi(x);

    /// <summary>Ai′(x).</summary>
    public static double Slope(double x) => SpecialFunctions.AiryAiPrime(x);
}
