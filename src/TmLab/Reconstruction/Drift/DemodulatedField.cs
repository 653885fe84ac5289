using System.Numerics;
using TmLab.Measurement;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;

namespace TmLab.Reconstruction.Drift;

/// <summary>The demodulated field D = R* E of one group over the whole camera region.</summary>
internal sealed class DemodulatedField
{
    private readonly float[] _real;
    private readonly float[] _imaginary;

    private DemodulatedField(int pixels)
    {
        int padded = (pixels + ModePlanes.LaneMultiple - 1) / ModePlanes.LaneMultiple * ModePlanes.LaneMultiple;
        _real = new float[padded];
        _imaginary = new float[padded];
    }

    /// <summary>Reads the group's frames and demodulates them.</summary>
    public static DemodulatedField Read(IFrameBlockReader reader, StepGroup group, StepFit fit)
    {
        int pixels = reader.FrameSize.PixelCount;
        var field = new DemodulatedField(pixels);
        int padded = field._real.Length;
        var counts = new ushort[padded * group.Frames.Length];
        for (int s = 0; s < group.Frames.Length; s++)
        {
            reader.Read(group.Frames[s], 1, 0, pixels, counts.AsSpan(s * padded, pixels));
        }

        int[] rows = [.. Enumerable.Range(0, group.Frames.Length)];
        Complex64[] weights = [.. fit.Field.Select(Complex64.FromComplex)];
        WeightedFrameSum.Run(counts, padded, rows, weights, field._real, field._imaginary);
        return field;
    }

    /// <summary>Σ_p D_p conj(other_p), in double precision.</summary>
    public Complex Overlap(DemodulatedField other)
    {
        double re = 0, im = 0;
        for (int p = 0; p < _real.Length; p++)
        {
            double ar = _real[p], ai = _imaginary[p], br = other._real[p], bi = other._imaginary[p];
            re += (ar * br) + (ai * bi);
            im += (ai * br) - (ar * bi);
        }

        return new Complex(re, im);
    }
}
