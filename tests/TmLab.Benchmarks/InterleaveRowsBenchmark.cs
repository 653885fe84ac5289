using BenchmarkDotNet.Attributes;
using TmLab.Numerics.Kernels;
using TmLab.Numerics.Matrices;

namespace TmLab.Benchmarks;

/// <summary>Planes of 1,024 modes to rows of complex numbers, against the scalar twin.</summary>
public class InterleaveRowsBenchmark
{
    private const int Modes = 1024;
    private const int Lanes = 32;

    private readonly float[][] _planes = [.. Enumerable.Range(0, 4).Select(_ => new float[Modes * Lanes])];
    private readonly float[] _scale = [.. Enumerable.Repeat(1f, Lanes)];
    private readonly Complex64[] _rows = new Complex64[Modes * Lanes];

    [Benchmark]
    public void Vector() => InterleaveRows.Run(Planes(), Lanes, _scale, _rows);

    [Benchmark(Baseline = true)]
    public void Scalar() => InterleaveRows.RunScalar(Planes(), Lanes, _scale, _rows);

    private ModePlanes Planes() => new(Modes, Lanes, _planes[0], _planes[1], _planes[2], _planes[3]);
}
