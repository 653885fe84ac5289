using BenchmarkDotNet.Attributes;
using TmLab.Numerics.Matrices;
using TmLab.Quantities;
using TmLab.Reconstruction;

namespace TmLab.Benchmarks;

/// <summary>One tile on one thread: demodulation, inverse Hadamard transform and interleaving, no I/O.</summary>
public class TileKernelBenchmark : IDisposable
{
    private const int Side = 32;
    private const int Pixels = Side * Side;

    private NativeBuffer<ushort> _counts = new(0);
    private NativeBuffer<Complex64> _rows = new(0);
    private TileKernel? _kernel;
    private float[] _ones = [];

    [Params(256, 1024, 4096)]
    public int Modes { get; set; }

    /// <summary>Pixels taken together; 0 for what the program chooses.</summary>
    [Params(0, 16, 32, 64)]
    public int Lanes { get; set; }

    [GlobalSetup]
    public void Fill()
    {
        var kernelCase = new KernelCase(Modes, steps: 4);
        _kernel = new TileKernel(kernelCase.Basis, kernelCase.Weights, Lanes == 0 ? null : Lanes);
        int length = kernelCase.FrameCount * Pixels;
        _counts = new NativeBuffer<ushort>(length + _kernel.Lanes);
        _rows = new NativeBuffer<Complex64>((long)Modes * Pixels);
        _ones = [.. Enumerable.Repeat(1f, Pixels + _kernel.Lanes)];
        using var frames = new CountsInMemory(kernelCase.FrameCount, new ImageSize(Side, Side));
        frames.Read(0, kernelCase.FrameCount, 0, Pixels, _counts.Slice(0, length));
    }

    [Benchmark]
    public void Tile() => _kernel!.Run(_counts.AsSpan(), Pixels, Pixels, _ones, _ones, _rows.AsSpan());

    [GlobalCleanup]
    public void Dispose()
    {
        _kernel?.Dispose();
        _counts.Dispose();
        _rows.Dispose();
        GC.SuppressFinalize(this);
    }
}
