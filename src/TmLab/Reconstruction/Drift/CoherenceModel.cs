namespace TmLab.Reconstruction.Drift;

/// <summary>
/// At each pixel the background and the modulation of the fringes are not independent: with reference intensity α and a mutual
/// coherence that β takes up, a = α + β |D|² whatever the pattern (for a coherent reference β = 1/α, D = R* E). Fitted over all patterns,
/// this tells more of the steps than the fringes alone: four free steps are otherwise undetermined by one.
/// </summary>
/// <param name="Alpha">α, counts; 0 for pixels that cannot serve.</param>
/// <param name="Beta">β, 1/counts; 0 likewise.</param>
/// <param name="Weight">Inverse variance of a count about the model, 1/counts²; 0 for pixels that cannot serve.</param>
internal sealed record CoherenceModel(double[] Alpha, double[] Beta, double[] Weight)
{
    /// <summary>Fewer patterns than this do not determine α and β well enough.</summary>
    public const int FewestGroups = 8;

    /// <summary>Number of pixels that can serve.</summary>
    public int UsablePixels => Weight.Count(w => w > 0);

    /// <summary>Fits all pixels by least squares over the groups.</summary>
    /// <param name="fits">The groups with their present fields and backgrounds; NaN leaves a pixel of a group out.</param>
    /// <param name="pixels">Number of pixels.</param>
    /// <param name="variance">Variance of a count at each pixel; null as long as it is not known: then shot noise gives relative weights.</param>
    public static CoherenceModel Fit(GroupFit[] fits, int pixels, double[]? variance)
    {
        var sums = new Sums(pixels);
        foreach (GroupFit fit in fits)
        {
            sums.Add(fit);
        }

        var model = new CoherenceModel(new double[pixels], new double[pixels], new double[pixels]);
        for (int p = 0; p < pixels; p++)
        {
            if (sums.TrySolve(p, out double alpha, out double beta))
            {
                (model.Alpha[p], model.Beta[p]) = (alpha, beta);
                model.Weight[p] = 1 / (variance?[p] ?? Math.Max(alpha, 1));
            }
        }

        return model;
    }

    private sealed class Sums(int pixels)
    {
        private readonly int[] _n = new int[pixels];
        private readonly double[] _a = new double[pixels];
        private readonly double[] _q = new double[pixels];
        private readonly double[] _aq = new double[pixels];
        private readonly double[] _qq = new double[pixels];

        public void Add(GroupFit fit)
        {
            ReadOnlySpan<double> background = fit.Background, re = fit.FieldReal, im = fit.FieldImaginary;
            for (int p = 0; p < background.Length; p++)
            {
                double a = background[p], q = (re[p] * re[p]) + (im[p] * im[p]);
                if (!double.IsNaN(a))
                {
                    _n[p]++;
                    _a[p] += a;
                    _q[p] += q;
                    _aq[p] += a * q;
                    _qq[p] += q * q;
                }
            }
        }

        public bool TrySolve(int p, out double alpha, out double beta)
        {
            double spread = _qq[p] - (_q[p] * _q[p] / _n[p]);
            beta = (_aq[p] - (_a[p] * _q[p] / _n[p])) / spread;
            alpha = (_a[p] - (beta * _q[p])) / _n[p];
            return _n[p] >= FewestGroups && spread > 0 && beta > 0 && alpha > 0;
        }
    }
}
