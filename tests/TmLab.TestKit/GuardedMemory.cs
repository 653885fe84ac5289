using System.Runtime.InteropServices;

namespace TmLab.TestKit;

/// <summary>
/// Elements that end exactly at a page which may not be touched (Linux): reading or writing past the end stops the process.
/// Elsewhere ordinary memory. The elements must be whole: a type whose size divides the page.
/// </summary>
public sealed unsafe partial class GuardedMemory<T> : IDisposable
    where T : unmanaged
{
    private const int ReadWrite = 3, Private = 2, Anonymous = 0x20;

    private readonly nint _map;
    private readonly nuint _bytes;
    private readonly int _length;
    private readonly T* _first;

    public GuardedMemory(int length)
    {
        _length = length;
        nuint page = (nuint)Environment.SystemPageSize;
        nuint data = ((nuint)(length * sizeof(T)) + page - 1) / page * page;
        _bytes = data + page;
        if (OperatingSystem.IsLinux())
        {
            _map = GuardedMemoryNative.Map(0, _bytes, ReadWrite, Private | Anonymous, -1, 0);
            if (_map == -1 || GuardedMemoryNative.Protect(_map + (nint)data, page, 0) != 0)
            {
                throw new InvalidOperationException("No guarded memory was to be had.");
            }
        }
        else
        {
            _map = (nint)NativeMemory.AllocZeroed(_bytes);
        }

        _first = (T*)((byte*)_map + data) - length;
    }

    public Span<T> Span => new(_first, _length);

    public void Dispose()
    {
        if (OperatingSystem.IsLinux())
        {
            _ = GuardedMemoryNative.Unmap(_map, _bytes);
        }
        else
        {
            NativeMemory.Free((void*)_map);
        }
    }
}

internal static partial class GuardedMemoryNative
{
    [LibraryImport("libc", EntryPoint = "mmap")]
    internal static partial nint Map(nint address, nuint length, int protection, int flags, int file, nint offset);

    [LibraryImport("libc", EntryPoint = "mprotect")]
    internal static partial int Protect(nint address, nuint length, int protection);

    [LibraryImport("libc", EntryPoint = "munmap")]
    internal static partial int Unmap(nint address, nuint length);
}
