using System.Collections.Immutable;
using System.Globalization;

namespace TmLab.Numerics.LinearAlgebra;

/// <summary>Singular values and how far they can be trusted. Immutable.</summary>
/// <param name="SingularValues">σ_j, descending: min(P, N) of them, or the leading ones asked for.</param>
/// <param name="Method">The route taken.</param>
/// <param name="ConditionEstimate">The largest over the smallest of the values; infinite when the smallest is lost in rounding.</param>
/// <param name="RelativeErrorEstimate">Estimated relative error of the smallest of the values, u κ² for Gram routes, u κ for the others.</param>
/// <param name="ErrorBounds">
/// For <see cref="SpectrumMethod.Randomised"/>: a singular value of the matrix lies within this of each value, and each value is not
/// above the true one of its rank, both up to rounding. Empty for the other routes.
/// </param>
/// <param name="Passes">How often the matrix was read.</param>
public sealed record SpectrumOutcome(
    ImmutableArray<double> SingularValues,
    SpectrumMethod Method,
    double ConditionEstimate,
    double RelativeErrorEstimate,
    ImmutableArray<double> ErrorBounds,
    int Passes)
{
    /// <summary>The method in words, for a report.</summary>
    public string Description => Method switch
    {
        SpectrumMethod.Gram => Text("eigenvalues of the Gram matrix, single-precision products summed in double"),
        SpectrumMethod.DoubleGram => Text("eigenvalues of the Gram matrix in double precision"),
        SpectrumMethod.TallSkinnyQr => Text("tile-wise QR in double precision"),
        _ => string.Create(
            CultureInfo.InvariantCulture,
            $"randomised block Krylov iteration, {Passes} passes, largest error bound {LargestRelativeBound:G2} of the value"),
    };

    private double LargestRelativeBound => ErrorBounds.Zip(SingularValues, (bound, value) => bound / value).DefaultIfEmpty(0).Max();

    private string Text(string method) => string.Create(
        CultureInfo.InvariantCulture,
        $"{method}, condition number {ConditionEstimate:G3}, estimated relative error of the smallest value {RelativeErrorEstimate:G2}");
}
