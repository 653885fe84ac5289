using BenchmarkDotNet.Running;
using TmLab.Benchmarks;

// "kernel …" times the reconstruction kernel on the reference case; anything else goes to BenchmarkDotNet
// (--filter '*WalshHadamard*', --list flat, --job short).
if (args is ["kernel", .. string[] options])
{
    Console.WriteLine(KernelTiming.Measure(KernelTiming.Options.Parse(options)).ToJson());
    return;
}

BenchmarkSwitcher.FromAssembly(typeof(KernelTiming).Assembly).Run(args);
