using BenchmarkDotNet.Attributes;
using TmLab.Numerics.Matrices;
using TmLab.Numerics.Transforms;

namespace TmLab.Benchmarks;

/// <summary>The two fast transforms on the planes of a tile, at the lanes that the tile kernel would choose.</summary>
public class TransformBenchmark : IDisposable
{
    private NativeBuffer<float>[] _planes = [];
    private FourierPlan _plan = new(1, FourierSign.Positive);
    private int _lanes;

    [Params(256, 1024, 4096)]
    public int Modes { get; set; }

    [GlobalSetup]
    public void Fill()
    {
        // Zeros: a transform in place grows its input with every call, and zeros cost what other numbers do.
        _lanes = Math.Clamp(32768 / Modes, 16, 64);
        _planes = [.. Enumerable.Range(0, 4).Select(_ => new NativeBuffer<float>((long)Modes * _lanes))];
        _plan = new FourierPlan(Modes, FourierSign.Positive);
    }

    [Benchmark]
    public void WalshHadamardBothPlanes()
    {
        WalshHadamard.Transform(_planes[0].AsSpan(), Modes, _lanes);
        WalshHadamard.Transform(_planes[1].AsSpan(), Modes, _lanes);
    }

    [Benchmark]
    public void WalshHadamardScalarBothPlanes()
    {
        WalshHadamard.TransformScalar(_planes[0].AsSpan(), Modes, _lanes);
        WalshHadamard.TransformScalar(_planes[1].AsSpan(), Modes, _lanes);
    }

    [Benchmark]
    public void Fourier() =>
        _plan.Transform(_planes[0].AsSpan(), _planes[1].AsSpan(), _planes[2].AsSpan(), _planes[3].AsSpan(), _lanes);

    [GlobalCleanup]
    public void Dispose()
    {
        foreach (NativeBuffer<float> plane in _planes)
        {
            plane.Dispose();
        }

        _planes = [];
        GC.SuppressFinalize(this);
    }
}
