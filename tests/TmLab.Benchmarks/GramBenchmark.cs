using BenchmarkDotNet.Attributes;
using TmLab.Numerics.LinearAlgebra;
using TmLab.Numerics.Matrices;

namespace TmLab.Benchmarks;

/// <summary>G += A†A for a tile of 4,096 rows: the engines' products, and the widening sum that they share.</summary>
public class GramBenchmark : IDisposable
{
    private const int Rows = 4096;

    private NativeBuffer<Complex64> _tile = new(0);
    private NativeBuffer<Complex64> _sum = new(0);
    private Complex128Matrix _gram = new(0, 0);
    private ILinearAlgebraEngine? _engine;

    [Params(256, 1024)]
    public int Modes { get; set; }

    [Params(EngineChoice.Native, EngineChoice.Managed)]
    public EngineChoice Engine { get; set; }

    [GlobalSetup]
    public void Fill()
    {
        EngineSelection selection = LinearAlgebraEngines.Choose(Engine);
        _engine = selection.Engine ?? throw new NotSupportedException(selection.Explanation);
        _tile = new NativeBuffer<Complex64>((long)Rows * Modes);
        _sum = new NativeBuffer<Complex64>((long)Modes * Modes);
        _gram = new Complex128Matrix(Modes, Modes);
        var random = new Random(1);
        foreach (ref Complex64 element in _tile.AsSpan())
        {
            element = new Complex64(random.NextSingle() - 0.5f, random.NextSingle() - 0.5f);
        }
    }

    [Benchmark]
    public void AddGram() => _engine!.AddGram(_tile, Rows, _gram);

    [Benchmark]
    public void WideningSum() => GramSum.AddUpper(_sum, _gram);

    [GlobalCleanup]
    public void Dispose()
    {
        _tile.Dispose();
        _sum.Dispose();
        _gram.Dispose();
        GC.SuppressFinalize(this);
    }
}
