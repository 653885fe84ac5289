using System.Collections.Immutable;
using TmLab.Matrix;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>
/// Findings on frames as a table of equally long columns, the frames of all findings one after the other. A file without them has none.
/// </summary>
internal static class FrameFindingGroup
{
    private const string Group = "/quality/frame_findings";

    public static void Write(StageFileWriter file, ImmutableArray<FrameFinding> findings)
    {
        file.Add(Group + "/kind", findings.Select(f => (byte)f.Kind).ToArray(), "1");
        file.AddAttribute(
            Group + "/kind", "meaning", string.Join(", ", Enum.GetValues<FrameFindingKind>().Select(k => $"{(int)k} {StoredNames.Of(k)}")));
        file.Add(Group + "/pattern", findings.Select(f => f.Pattern).ToArray(), "1");
        file.Add(Group + "/repaired", findings.Select(f => f.Repaired ? (byte)1 : (byte)0).ToArray(), "1");
        file.Add(Group + "/frame_count", findings.Select(f => f.Frames.Length).ToArray(), "1");
        file.Add(Group + "/frames", findings.SelectMany(f => f.Frames).ToArray(), "1");
    }

    public static ImmutableArray<FrameFinding> Read(StageFileReader file)
    {
        if (!file.Has(Group))
        {
            return [];
        }

        byte[] kind = file.ReadArray<byte>(Group + "/kind", -1);
        int[] pattern = file.ReadArray<int>(Group + "/pattern", kind.Length);
        byte[] repaired = file.ReadArray<byte>(Group + "/repaired", kind.Length);
        int[] count = file.ReadArray<int>(Group + "/frame_count", kind.Length);
        int[] frames = file.ReadArray<int>(Group + "/frames", -1);
        if (count.Any(c => c < 0) || count.Sum(c => (long)c) != frames.Length || kind.Any(k => !Enum.IsDefined((FrameFindingKind)k)))
        {
            throw DamagedFiles.Damaged(file.Path, Group, "does not fit together");
        }

        int[] first = [.. count.Select((_, i) => count.Take(i).Sum())];
        return
        [
            .. kind.Select((k, i) => new FrameFinding(
                (FrameFindingKind)k, [.. frames.AsSpan(first[i], count[i])], pattern[i], repaired[i] != 0)),
        ];
    }
}
