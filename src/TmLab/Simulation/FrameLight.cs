using System.Numerics;
using System.Runtime.InteropServices;

namespace TmLab.Simulation;

/// <summary>The fields of one pattern on the camera.</summary>
internal readonly ref struct FrameFields(BenchOptics optics, int pattern)
{
    public ReadOnlySpan<float> ReferenceReal { get; } = optics.ReferenceReal;

    public ReadOnlySpan<float> ReferenceImaginary { get; } = optics.ReferenceImaginary;

    public ReadOnlySpan<float> StartReal { get; } = optics.Start.Real(pattern);

    public ReadOnlySpan<float> StartImaginary { get; } = optics.Start.Imaginary(pattern);

    public ReadOnlySpan<float> LaterReal { get; } = optics.Later is null ? [] : optics.Later.Real(pattern);

    public ReadOnlySpan<float> LaterImaginary { get; } = optics.Later is null ? [] : optics.Later.Imaginary(pattern);

    public ReadOnlySpan<float> UnscatteredReal { get; } = optics.Unscattered is null ? [] : optics.Unscattered.Real(pattern);

    public ReadOnlySpan<float> UnscatteredImaginary { get; } = optics.Unscattered is null ? [] : optics.Unscattered.Imaginary(pattern);
}

/// <summary>How one frame is lit.</summary>
internal readonly record struct FrameLight(
    double Power, double PhaseRad, double Contrast, double FieldCorrelation, bool HasReference, bool HasSignal)
{
    /// <summary>Mean photoelectrons of every pixel.</summary>
    public void Accumulate(in FrameFields fields, Span<float> electrons)
    {
        electrons.Clear();
        if (HasReference)
        {
            AddIntensity(fields.ReferenceReal, fields.ReferenceImaginary, electrons);
        }

        if (HasSignal && fields.LaterReal.IsEmpty)
        {
            AddSignal(fields.StartReal, fields.StartImaginary, fields, electrons);
        }
        else if (HasSignal)
        {
            float[] re = new float[electrons.Length];
            float[] im = new float[electrons.Length];
            Mix(fields.StartReal, fields.LaterReal, fields.UnscatteredReal, re);
            Mix(fields.StartImaginary, fields.LaterImaginary, fields.UnscatteredImaginary, im);
            AddSignal(re, im, fields, electrons);
        }
    }

    /// <summary>E(t) = c E₀ + √(1 − c²) E₁ + (1 − c) E_unscattered, where E₀ holds the unscattered light too.</summary>
    private void Mix(ReadOnlySpan<float> start, ReadOnlySpan<float> later, ReadOnlySpan<float> unscattered, Span<float> mixed)
    {
        float kept = (float)FieldCorrelation;
        float gained = (float)Math.Sqrt(1 - (FieldCorrelation * FieldCorrelation));
        for (int pixel = 0; pixel < mixed.Length; pixel++)
        {
            mixed[pixel] = (kept * start[pixel]) + (gained * later[pixel]);
        }

        for (int pixel = 0; pixel < unscattered.Length; pixel++)
        {
            mixed[pixel] += (1 - kept) * unscattered[pixel];
        }
    }

    private void AddSignal(ReadOnlySpan<float> re, ReadOnlySpan<float> im, in FrameFields fields, Span<float> electrons)
    {
        AddIntensity(re, im, electrons);
        if (HasReference && Contrast > 0)
        {
            (double sin, double cos) = PortableMath.SinCos(PhaseRad);
            double factor = 2 * Power * Contrast;
            AddInterference(fields.ReferenceReal, fields.ReferenceImaginary, re, im, (float)(factor * cos), (float)(factor * sin), electrons);
        }
    }

    private void AddIntensity(ReadOnlySpan<float> re, ReadOnlySpan<float> im, Span<float> electrons)
    {
        float power = (float)Power;
        for (int pixel = 0; pixel < electrons.Length; pixel++)
        {
            electrons[pixel] += ((re[pixel] * re[pixel]) + (im[pixel] * im[pixel])) * power;
        }
    }

    /// <summary>sum += Re(R* E (c + is)), products and sums apart as in <see cref="ComplexRows"/>.</summary>
    private static void AddInterference(
        ReadOnlySpan<float> rr, ReadOnlySpan<float> ri, ReadOnlySpan<float> er, ReadOnlySpan<float> ei, float c, float s, Span<float> sum)
    {
        int vectorised = sum.Length - (sum.Length % Vector<float>.Count);
        ReadOnlySpan<Vector<float>> vrr = MemoryMarshal.Cast<float, Vector<float>>(rr[..vectorised]);
        ReadOnlySpan<Vector<float>> vri = MemoryMarshal.Cast<float, Vector<float>>(ri[..vectorised]);
        ReadOnlySpan<Vector<float>> ver = MemoryMarshal.Cast<float, Vector<float>>(er[..vectorised]);
        ReadOnlySpan<Vector<float>> vei = MemoryMarshal.Cast<float, Vector<float>>(ei[..vectorised]);
        Span<Vector<float>> vsum = MemoryMarshal.Cast<float, Vector<float>>(sum[..vectorised]);
        for (int i = 0; i < vsum.Length; i++)
        {
            Vector<float> re = (vrr[i] * ver[i]) + (vri[i] * vei[i]);
            Vector<float> im = (vrr[i] * vei[i]) - (vri[i] * ver[i]);
            vsum[i] += (re * c) - (im * s);
        }

        for (int i = vectorised; i < sum.Length; i++)
        {
            float re = (rr[i] * er[i]) + (ri[i] * ei[i]);
            float im = (rr[i] * ei[i]) - (ri[i] * er[i]);
            sum[i] += (re * c) - (im * s);
        }
    }
}
