using System.Security.Cryptography;
using Microsoft.Win32.SafeHandles;
using TmLab.Failures;
using TmLab.Quantities;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>Digests of files, for provenance.</summary>
public static class FileDigest
{
    private const int BlockBytes = 1 << 20;

    /// <summary>SHA-256 (FIPS 180-4) of all bytes of a file, as 64 lower-case hexadecimal digits: what <c>sha256sum</c> prints.</summary>
    /// <param name="path">The file.</param>
    /// <param name="progress">Told after every 64 MiB, in bytes.</param>
    /// <param name="cancel">Stops the reading.</param>
    /// <exception cref="BadInputException">The file cannot be read.</exception>
    /// <exception cref="OperationCanceledException">It was stopped.</exception>
    public static string Sha256(string path, IProgress<StageProgress>? progress = null, CancellationToken cancel = default)
    {
        using SafeFileHandle file = InputFiles.Open(path);
        return DamagedFiles.Guard(path, null, () => Hash(file, progress, cancel));
    }

    private static string Hash(SafeFileHandle file, IProgress<StageProgress>? progress, CancellationToken cancel)
    {
        const int blocksBetweenReports = 64;
        using var hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
        byte[] buffer = new byte[BlockBytes];
        long length = RandomAccess.GetLength(file);
        long position = 0;
        for (int block = 0; ; block++)
        {
            cancel.ThrowIfCancellationRequested();
            int count = RandomAccess.Read(file, buffer, position);
            if (count == 0)
            {
                return Convert.ToHexStringLower(hash.GetHashAndReset());
            }

            hash.AppendData(buffer, 0, count);
            position += count;
            if (block % blocksBetweenReports == 0)
            {
                progress?.Report(new StageProgress("computing the digest", position, length, "bytes"));
            }
        }
    }
}
