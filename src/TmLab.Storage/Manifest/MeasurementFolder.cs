using System.Collections.Immutable;
using System.Numerics;
using TmLab.Failures;
using TmLab.Measurement;
using TmLab.Shaping;
using TmLab.Storage.Frames;
using TmLab.Storage.Images;

namespace TmLab.Storage.Manifest;

/// <summary>Opens what a bench delivered: a folder with <c>measurement.json</c>, a schedule and frames.</summary>
public static class MeasurementFolder
{
    /// <summary>
    /// Opens a measurement and checks everything that can be checked without decoding frames. All problems are collected before it
    /// stops: those of the manifest first; when it is sound, those of schedule, frames and side files together.
    /// </summary>
    /// <param name="folderOrManifestPath">A folder that holds <c>measurement.json</c>, or a manifest file of any name.</param>
    /// <param name="allowOutside">Whether the manifest may name files outside its folder.</param>
    /// <exception cref="BadInputException">Anything is wrong; it carries every problem found.</exception>
    public static OpenedMeasurement Open(string folderOrManifestPath, bool allowOutside = false)
    {
        (string path, MeasurementOpening opening) = Begin(folderOrManifestPath, allowOutside, needsAllModes: true);
        return opening.Open(path);
    }

    /// <summary>Opens a part of a measurement: like <see cref="Open"/>, but patterns may be missing from the schedule.</summary>
    /// <param name="folderOrManifestPath">A folder that holds <c>measurement.json</c>, or a manifest file of any name.</param>
    /// <exception cref="BadInputException">Anything is wrong; it carries every problem found.</exception>
    public static OpenedMeasurement OpenPart(string folderOrManifestPath)
    {
        (string path, MeasurementOpening opening) = Begin(folderOrManifestPath, allowOutside: false, needsAllModes: false);
        return opening.Open(path);
    }

    /// <summary>Opens what a measurement is to be: everything but its frames, which need not be there. Patterns may be missing.</summary>
    /// <param name="folderOrManifestPath">A folder that holds <c>measurement.json</c>, or a manifest file of any name.</param>
    /// <exception cref="BadInputException">Anything is wrong; it carries every problem found.</exception>
    public static OpenedPlan OpenPlan(string folderOrManifestPath)
    {
        (string path, MeasurementOpening opening) = Begin(folderOrManifestPath, allowOutside: false, needsAllModes: false);
        return opening.OpenPlan(path);
    }

    private static (string Path, MeasurementOpening Opening) Begin(string folderOrManifestPath, bool allowOutside, bool needsAllModes)
    {
        string path = ManifestPathOf(folderOrManifestPath);
        string name = Path.GetFileName(path);
        MeasurementManifest manifest = ManifestJson.Parse(InputFile.ReadAll(path, name, ManifestJson.LargestBytes), name);
        var problems = new ProblemList(name);
        var paths = new ManifestPaths(Path.GetDirectoryName(path)!, allowOutside, problems);
        return (path, new MeasurementOpening(manifest, paths, problems, needsAllModes));
    }

    private static string ManifestPathOf(string folderOrManifestPath)
    {
        string full = Path.GetFullPath(folderOrManifestPath);
        if (File.Exists(full))
        {
            return full;
        }

        if (!Directory.Exists(full))
        {
            throw new BadInputException(folderOrManifestPath, null, "there is no such folder or manifest", "check the path");
        }

        string manifest = Path.Combine(full, ManifestJson.FileName);
        return File.Exists(manifest)
            ? manifest
            : throw new BadInputException(folderOrManifestPath, null, $"the folder holds no {ManifestJson.FileName}", "name a measurement folder");
    }
}

/// <summary>The steps of opening one measurement; each adds its problems and lets the others go on.</summary>
internal sealed class MeasurementOpening(
    MeasurementManifest manifest, ManifestPaths paths, ProblemList problems, bool needsAllModes)
{
    public OpenedPlan OpenPlan(string manifestPath)
    {
        (ImmutableArray<ScheduledFrame> Rows, bool HasTimes)? rows = Guarded(ReadScheduleRows);
        ImmutableArray<Complex> patterns = Guarded(ReadPatterns) ?? [];
        GrayPhaseTable? lut = Guarded(ReadLut);
        ImmutableArray<byte> flatness = Guarded(ReadFlatness) ?? [];
        problems.ThrowIfAny();
        return new OpenedPlan(manifestPath, manifest, MakeSchedule(rows), patterns, lut, flatness);
    }

    public OpenedMeasurement Open(string manifestPath)
    {
        IFrameSource? frames = null;
        try
        {
            (ImmutableArray<ScheduledFrame> Rows, bool HasTimes)? rows = Guarded(ReadScheduleRows);
            frames = Guarded(OpenFrames);
            CheckCounts(rows?.Rows.Length, frames);
            ImmutableArray<Complex> patterns = Guarded(ReadPatterns) ?? [];
            GrayPhaseTable? lut = Guarded(ReadLut);
            ImmutableArray<byte> flatness = Guarded(ReadFlatness) ?? [];
            problems.ThrowIfAny();
            return new OpenedMeasurement(manifestPath, manifest, MakeSchedule(rows), frames!, FramesName, patterns, lut, flatness);
        }
        catch
        {
            frames?.Dispose();
            throw;
        }
    }

    private string FramesName => manifest.Frames.Paths[0];

    private T? Guarded<T>(Func<T?> step)
    {
        try
        {
            return step();
        }
        catch (BadInputException bad)
        {
            problems.Add(bad.Problems);
            return default;
        }
    }

    private (ImmutableArray<ScheduledFrame> Rows, bool HasTimes)? ReadScheduleRows()
    {
        if (manifest.Schedule.Path is not { } name || paths.Resolve(name, "schedule") is not { } path)
        {
            return null;
        }

        var found = new ProblemList(name);
        (ImmutableArray<ScheduledFrame> Rows, bool HasTimes)? read = ScheduleCsv.Read(path, found);
        if (read is { } whole)
        {
            found.Add(ScheduleChecks.Check(whole.Rows, manifest.Modes, name, needsAllModes));
        }

        problems.Add(found.ToImmutable());
        return read;
    }

    private IFrameSource? OpenFrames()
    {
        string?[] resolved = [.. manifest.Frames.Paths.Select(p => paths.Resolve(p, "frames.path"))];
        if (resolved.Contains(null))
        {
            return null;
        }

        IFrameSource source = FrameSource.Open(manifest.Frames, manifest.Camera, resolved!);
        if (manifest.Camera.Size is { } size && size != source.FrameSize)
        {
            problems.Add("camera", $"the manifest says {size} pixels, the frames in {FramesName} have {source.FrameSize}", "correct camera.width and camera.height");
        }

        return source;
    }

    private void CheckCounts(int? rowCount, IFrameSource? frames)
    {
        if (frames is null)
        {
            return;
        }

        if (manifest.Schedule.Path is { } name)
        {
            problems.Add(rowCount is { } rows ? ScheduleChecks.FrameCount(rows, frames.FrameCount, name, FramesName) : []);
            return;
        }

        long meant = (long)manifest.Modes.PatternCount * manifest.Schedule.Steps;
        if (meant != frames.FrameCount)
        {
            problems.Add(
                "schedule", $"{manifest.Modes.PatternCount} modes × {manifest.Schedule.Steps} steps are {meant} frames, but {FramesName} holds {frames.FrameCount}",
                "correct modes.count or schedule.steps, or give the schedule as a CSV file");
        }
    }

    private Schedule MakeSchedule((ImmutableArray<ScheduledFrame> Rows, bool HasTimes)? rows)
    {
        if (rows is { } read)
        {
            return new Schedule(read.Rows, read.HasTimes);
        }

        return manifest.Schedule.Order == ScheduleOrder.StepMajor
            ? Schedule.StepMajor(manifest.Modes.PatternCount, manifest.Schedule.Steps)
            : Schedule.ModeMajor(manifest.Modes.PatternCount, manifest.Schedule.Steps);
    }

    private ImmutableArray<Complex>? ReadPatterns()
    {
        ModeDescription modes = manifest.Modes;
        if (modes.PatternFile is not { } name || paths.Resolve(name, "modes.patterns") is not { } path)
        {
            return null;
        }

        ImmutableArray<Complex> patterns = CustomPatternFile.Read(path, name, modes);
        problems.Add(ModeChecks.CheckPatterns(patterns.AsSpan(), modes.ModeCount, name));
        return patterns;
    }

    private GrayPhaseTable? ReadLut()
    {
        if (manifest.Modulator?.LutFile is not { } name || paths.Resolve(name, "modulator.lut") is not { } path)
        {
            return null;
        }

        var found = new ProblemList(name);
        GrayPhaseTable? lut = PhaseLutCsv.Read(path, found);
        problems.Add(found.ToImmutable());
        return lut;
    }

    private ImmutableArray<byte>? ReadFlatness()
    {
        if (manifest.Modulator?.FlatnessFile is not { } name || paths.Resolve(name, "modulator.flatness") is not { } path)
        {
            return null;
        }

        using FileStream stream = InputFile.OpenSequential(path, name);
        ModulatorImage image = ModulatorImageFile.Read(stream, name);
        if (image.Size != manifest.Modulator.Size || image.Depth != ModulatorImageDepth.EightBit)
        {
            throw new BadInputException(
                name, null, $"the flatness image has {image.Size} pixels ({image.Depth}), the panel {manifest.Modulator.Size} at 8 bits",
                "give an 8-bit grey image of the panel's native size");
        }

        return image.Levels;
    }
}
