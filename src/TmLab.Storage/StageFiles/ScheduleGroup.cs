using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Storage.Hdf5;

namespace TmLab.Storage.StageFiles;

/// <summary>The per-frame datasets in <c>/frames</c>: the schedule and the facts.</summary>
internal static class ScheduleGroup
{
    private const string Group = "/frames";

    // The codes in files; never to be renumbered.
    private static readonly ImmutableArray<(byte Code, FrameRole Role)> s_roles =
    [
        (0, FrameRole.Mode),
        (1, FrameRole.Tracker),
        (2, FrameRole.Dark),
        (3, FrameRole.Reference),
        (4, FrameRole.Blank),
    ];

    /// <summary>Writes the schedule.</summary>
    public static void Write(StageFileWriter file, Schedule schedule)
    {
        ImmutableArray<ScheduledFrame> frames = schedule.Frames;
        file.Add(Group + "/role", [.. frames.Select(f => s_roles.First(r => r.Role == f.Role).Code)], "code");
        file.AddAttribute(Group + "/role", "meaning", string.Join(", ", s_roles.Select(r => $"{r.Code} {StoredNames.Of(r.Role)}")));
        file.Add(Group + "/mode", frames.Select(f => f.Mode).ToArray(), "1");
        file.Add(Group + "/step", frames.Select(f => f.Step).ToArray(), "1");
        file.Add(Group + "/phase_rad", frames.Select(f => f.PhaseRad).ToArray(), "rad");
        file.Add(Group + "/time_s", frames.Select(f => f.TimeS).ToArray(), "s");
        file.AddAttribute(Group + "/time_s", "is_measured", schedule.TimesAreMeasured ? 1 : 0);
    }

    /// <summary>Writes the facts on frames.</summary>
    public static void Write(StageFileWriter file, ImmutableArray<FrameFacts> facts)
    {
        file.Add(Group + "/mean_count", facts.Select(f => f.MeanCount).ToArray(), "count");
        file.Add(Group + "/saturated_fraction", facts.Select(f => f.SaturatedFraction).ToArray(), "1");
        file.Add(Group + "/crc32", facts.Select(f => f.Crc32).ToArray(), "1");
    }

    /// <summary>Reads the schedule of <paramref name="frameCount"/> frames.</summary>
    public static Schedule ReadSchedule(StageFileReader file, int frameCount)
    {
        byte[] role = file.ReadArray<byte>(Group + "/role", frameCount);
        int[] mode = file.ReadArray<int>(Group + "/mode", frameCount);
        int[] step = file.ReadArray<int>(Group + "/step", frameCount);
        double[] phase = file.ReadArray<double>(Group + "/phase_rad", frameCount);
        double[] time = file.ReadArray<double>(Group + "/time_s", frameCount);
        bool measured = file.Attribute<int>(Group + "/time_s", "is_measured") != 0;
        return new Schedule(
            [.. Enumerable.Range(0, frameCount).Select(f => new ScheduledFrame(f, Role(file, f, role[f]), mode[f], step[f], phase[f], time[f]))],
            measured);
    }

    /// <summary>Reads the facts on <paramref name="frameCount"/> frames.</summary>
    public static ImmutableArray<FrameFacts> ReadFacts(StageFileReader file, int frameCount)
    {
        float[] mean = file.ReadArray<float>(Group + "/mean_count", frameCount);
        float[] saturated = file.ReadArray<float>(Group + "/saturated_fraction", frameCount);
        uint[] crc = file.ReadArray<uint>(Group + "/crc32", frameCount);
        return [.. Enumerable.Range(0, frameCount).Select(f => new FrameFacts(mean[f], saturated[f], crc[f]))];
    }

    private static FrameRole Role(StageFileReader file, int frame, byte code)
    {
        foreach ((byte known, FrameRole role) in s_roles)
        {
            if (known == code)
            {
                return role;
            }
        }

        throw DamagedFiles.Damaged(file.Path, Group + "/role", $"holds the code {code} for frame {frame}, which is not known");
    }
}
