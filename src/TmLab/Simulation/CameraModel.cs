using TmLab.Numerics.Statistics;
using TmLab.Quantities;

namespace TmLab.Simulation;

/// <summary>Turns mean photoelectrons into counts as <see cref="SimulatedCamera"/> describes; the fixed pattern is drawn once.</summary>
internal sealed class CameraModel
{
    private readonly SimulatedCamera _camera;
    private readonly RandomStreams _streams;
    private readonly int _fullScale;
    private readonly float[] _gain;
    private readonly float[] _offsetElectrons;
    private readonly HashSet<int> _hot;

    public CameraModel(SimulatedCamera camera, ImageSize size, int bitDepth, RandomStreams streams)
    {
        _camera = camera;
        _streams = streams;
        _fullScale = (1 << bitDepth) - 1;
        int[] defective = PickDefective(size.PixelCount, camera.DeadPixelCount + camera.HotPixelCount);
        DeadPixels = [.. defective.Take(camera.DeadPixelCount).Order()];
        HotPixels = [.. defective.Skip(camera.DeadPixelCount).Order()];
        _hot = [.. HotPixels];
        _gain = [.. Enumerable.Range(0, size.PixelCount).Select(
            p => (float)Math.Max(0, 1 + (camera.PrnuRelative * streams.Normal(RandomPurpose.PixelGain, 0, p))))];
        _offsetElectrons = [.. Enumerable.Range(0, size.PixelCount).Select(
            p => (float)(camera.DsnuElectrons * streams.Normal(RandomPurpose.PixelOffset, 0, p)))];
        foreach (int pixel in DeadPixels)
        {
            _gain[pixel] = 0;
        }
    }

    /// <summary>Pixels that see no light, ascending.</summary>
    public int[] DeadPixels { get; }

    /// <summary>Pixels that stand at full scale, ascending.</summary>
    public int[] HotPixels { get; }

    /// <summary>One exposure.</summary>
    /// <param name="meanElectrons">Mean photoelectrons of an ideal pixel.</param>
    /// <param name="frame">The frame's scheduled number: it and the pixel's address the noise.</param>
    /// <param name="counts">Receives the counts.</param>
    public void Expose(ReadOnlySpan<float> meanElectrons, int frame, Span<ushort> counts)
    {
        for (int pixel = 0; pixel < meanElectrons.Length; pixel++)
        {
            PhiloxBlock block = _streams.Block(RandomPurpose.CameraNoise, frame, pixel);
            double electrons = Read((double)meanElectrons[pixel] * _gain[pixel], block) + _offsetElectrons[pixel];
            double value = Math.Round((electrons / _camera.ElectronsPerCount) + _camera.OffsetCounts);
            counts[pixel] = (ushort)Math.Clamp(value, 0, _fullScale);
        }

        foreach (int pixel in _hot)
        {
            counts[pixel] = (ushort)_fullScale;
        }
    }

    /// <summary>Photoelectrons with shot noise, cut at the full well, with read noise.</summary>
    private double Read(double mean, in PhiloxBlock block)
    {
        double normal = RandomStreams.NormalFromWords(block);
        double readNoise = _camera.ReadNoiseElectrons;
        if (!_camera.HasShotNoise)
        {
            return Math.Min(mean, _camera.FullWellElectrons) + (readNoise * normal);
        }

        if (mean < PoissonSampler.NormalFromMean)
        {
            double uniform = RandomStreams.UniformFromWords(block);
            return Math.Min(PoissonSampler.Sample(mean, uniform), _camera.FullWellElectrons) + (readNoise * normal);
        }

        // Two independent normal numbers add to one; where the well is full no shot noise is left, only read noise.
        double noisy = mean + (normal * Math.Sqrt(mean + (readNoise * readNoise)));
        return noisy < _camera.FullWellElectrons ? noisy : _camera.FullWellElectrons + (readNoise * normal);
    }

    private int[] PickDefective(int pixelCount, int wanted)
    {
        RandomStreams streams = _streams;
        return
        [
            .. Enumerable.Range(0, pixelCount)
                .OrderBy(p => streams.Uniform(RandomPurpose.DefectivePixel, 0, p)).ThenBy(p => p).Take(wanted),
        ];
    }
}
