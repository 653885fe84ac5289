using System.Collections.Immutable;
using TmLab.Quantities;

namespace TmLab.Channels;

/// <summary>
/// The channels of a transmission matrix, T = U Σ V†, besides the vectors themselves. Invalid rows and columns took no part:
/// row j of the output modes is the pixel (X[j], Y[j]), row j of the input modes is the macro-pixel Mode[j]. Immutable.
/// </summary>
/// <param name="Title">The measurement's title; null when it has none.</param>
/// <param name="WavelengthNm">Vacuum wavelength, nanometres; null when unknown.</param>
/// <param name="CameraRegion">Size of the camera region.</param>
/// <param name="Grid">The macro-pixel grid.</param>
/// <param name="Y">Camera row of each pixel that took part.</param>
/// <param name="X">Camera column of each pixel that took part.</param>
/// <param name="Mode">Index of each macro-pixel that took part.</param>
/// <param name="SingularValues">Singular values, descending, in the matrix' unit (not calibrated: only ratios mean something).</param>
/// <param name="ChannelCount">How many leading channels have vectors stored; 0 for values only.</param>
/// <param name="ParticipationNumber">(Σσ²)² / Σσ⁴: how many channels carry the transmission; NaN when only leading values are known.</param>
/// <param name="MarchenkoPastur">The spectrum beside the law for the matrix' shape; null when only leading values are known.</param>
/// <param name="Method">How the decomposition was computed, in words.</param>
/// <param name="Engine">The linear-algebra engine that was used, in words.</param>
/// <param name="DiagonalError">Largest |U†TV − Σ| relative to σ₁ over the stored channels; NaN for values only.</param>
/// <param name="Warnings">What a careful user should know, one sentence each.</param>
public sealed record ChannelFacts(
    string? Title,
    double? WavelengthNm,
    ImageSize CameraRegion,
    GridShape Grid,
    ImmutableArray<int> Y,
    ImmutableArray<int> X,
    ImmutableArray<int> Mode,
    ImmutableArray<double> SingularValues,
    int ChannelCount,
    double ParticipationNumber,
    MarchenkoPasturComparison? MarchenkoPastur,
    string Method,
    string Engine,
    double DiagonalError,
    ImmutableArray<string> Warnings)
{
    /// <summary>s̃ = σ / √⟨σ²⟩, so that the mean of s̃² is 1 (Popoff et al., Phys. Rev. Lett. 104, 100601 (2010)).</summary>
    public ImmutableArray<double> NormalisedSingularValues
    {
        get
        {
            double rms = Math.Sqrt(SingularValues.Average(s => s * s));
            return [.. SingularValues.Select(s => s / rms)];
        }
    }
}

/// <summary>A spectrum beside the Marchenko–Pastur law of the same shape; x = s̃² has mean 1 in both.</summary>
/// <param name="AspectRatio">γ = min(P, N) / max(P, N), in (0, 1].</param>
/// <param name="LowerEdge">(1 − √γ)².</param>
/// <param name="UpperEdge">(1 + √γ)².</param>
/// <param name="Probability">The probabilities at which quantiles are compared.</param>
/// <param name="PredictedQuantile">The law's quantiles of x.</param>
/// <param name="MeasuredQuantile">The spectrum's quantiles of x.</param>
/// <param name="Distance">Largest difference of the two cumulative distributions (Kolmogorov–Smirnov distance; no p-value: spectra are rigid).</param>
/// <param name="IsCompatible">Whether that distance is within what independent elements give.</param>
public sealed record MarchenkoPasturComparison(
    double AspectRatio,
    double LowerEdge,
    double UpperEdge,
    ImmutableArray<double> Probability,
    ImmutableArray<double> PredictedQuantile,
    ImmutableArray<double> MeasuredQuantile,
    double Distance,
    bool IsCompatible);
