using BenchmarkDotNet.Attributes;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;

namespace TmLab.Benchmarks;

/// <summary>Demodulation of one pattern at four steps over a run of pixels, against its scalar twin.</summary>
public class WeightedFrameSumBenchmark
{
    private static readonly int[] Frames = [0, 1, 2, 3];
    private static readonly Complex64[] Weights = [new(0.25f, 0), new(0, -0.25f), new(-0.25f, 0), new(0, 0.25f)];

    private ushort[] _counts = [];
    private float[] _real = [];
    private float[] _imaginary = [];

    [Params(64, 4096)]
    public int Pixels { get; set; }

    [GlobalSetup]
    public void Fill()
    {
        var random = new Random(1);
        _counts = [.. Enumerable.Range(0, Frames.Length * Pixels).Select(_ => (ushort)random.Next(1 << 13))];
        (_real, _imaginary) = (new float[Pixels], new float[Pixels]);
    }

    [Benchmark]
    public void Vector() => WeightedFrameSum.Run(_counts, Pixels, Frames, Weights, _real, _imaginary);

    [Benchmark(Baseline = true)]
    public void Scalar() => WeightedFrameSum.RunScalar(_counts, Pixels, Frames, Weights, _real, _imaginary);
}
