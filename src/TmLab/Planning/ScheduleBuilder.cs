using System.Collections.Immutable;
using TmLab.Measurement;
using TmLab.Numerics;

namespace TmLab.Planning;

/// <summary>What a schedule consists of. Immutable.</summary>
public sealed record ScheduleSettings
{
    /// <summary>Number of patterns of the basis.</summary>
    public required int PatternCount { get; init; }

    /// <summary>The patterns to show as modes, in this order, each once; empty for all of them from 0 on.</summary>
    public ImmutableArray<int> Patterns { get; init; } = [];

    /// <summary>Number of equal phase steps 2πs/S, at least 1.</summary>
    public int Steps { get; init; } = 4;

    /// <summary>The pattern that is shown again and again.</summary>
    public int TrackerPattern { get; init; }

    /// <summary>A tracker stands before every so many modes, and one at the end; 0 for no trackers.</summary>
    public int TrackerEveryModes { get; init; } = 16;

    /// <summary>Dark frames at the start.</summary>
    public int DarkFrames { get; init; } = 4;

    /// <summary>Reference frames (signal arm blocked) after the dark ones.</summary>
    public int ReferenceFrames { get; init; }

    /// <summary>Blank frames (reference arm blocked) after those; they show the tracker pattern.</summary>
    public int BlankFrames { get; init; }

    /// <summary>Frames a second.</summary>
    public double FrameRateHz { get; init; } = 100;
}

/// <summary>Lays out the frames of a measurement: dark, reference and blank frames, then modes in order with trackers between.</summary>
public static class ScheduleBuilder
{
    /// <summary>The schedule.</summary>
    /// <exception cref="ArgumentException">A number is out of range, or the tracker pattern is none of the patterns.</exception>
    public static Schedule Build(ScheduleSettings settings)
    {
        Check(settings);
        ImmutableArray<ScheduledFrame>.Builder frames = ImmutableArray.CreateBuilder<ScheduledFrame>();
        AddPlain(frames, FrameRole.Dark, settings.DarkFrames, settings);
        AddPlain(frames, FrameRole.Reference, settings.ReferenceFrames, settings);
        AddPlain(frames, FrameRole.Blank, settings.BlankFrames, settings);
        int[] patterns = settings.Patterns.IsDefaultOrEmpty ? [.. Enumerable.Range(0, settings.PatternCount)] : [.. settings.Patterns];
        for (int shown = 0; shown < patterns.Length; shown++)
        {
            if (settings.TrackerEveryModes > 0 && shown % settings.TrackerEveryModes == 0)
            {
                AddSteps(frames, FrameRole.Tracker, settings.TrackerPattern, settings);
            }

            AddSteps(frames, FrameRole.Mode, patterns[shown], settings);
        }

        if (settings.TrackerEveryModes > 0)
        {
            AddSteps(frames, FrameRole.Tracker, settings.TrackerPattern, settings);
        }

        return new Schedule(frames.ToImmutable(), timesAreMeasured: true);
    }

    private static void Check(ScheduleSettings settings)
    {
        Preconditions.InRange(settings.PatternCount, 1, 1 << 24);
        Preconditions.Require(
            settings.Patterns.IsDefaultOrEmpty || settings.Patterns.Distinct().Count() == settings.Patterns.Length, "A pattern is named twice.");
        foreach (int pattern in settings.Patterns.IsDefault ? [] : settings.Patterns)
        {
            Preconditions.InRange(pattern, 0, settings.PatternCount - 1);
        }

        Preconditions.InRange(settings.Steps, 1, 1000);
        Preconditions.InRange(settings.TrackerPattern, 0, settings.PatternCount - 1);
        Preconditions.InRange(settings.TrackerEveryModes, 0, int.MaxValue);
        Preconditions.InRange(settings.DarkFrames, 0, 1 << 20);
        Preconditions.InRange(settings.ReferenceFrames, 0, 1 << 20);
        Preconditions.InRange(settings.BlankFrames, 0, 1 << 20);
        Preconditions.InRange(settings.FrameRateHz, 1e-9, 1e9);
    }

    private static void AddPlain(
        ImmutableArray<ScheduledFrame>.Builder frames, FrameRole role, int count, ScheduleSettings settings)
    {
        for (int i = 0; i < count; i++)
        {
            frames.Add(new ScheduledFrame(frames.Count, role, -1, -1, double.NaN, frames.Count / settings.FrameRateHz));
        }
    }

    private static void AddSteps(
        ImmutableArray<ScheduledFrame>.Builder frames, FrameRole role, int pattern, ScheduleSettings settings)
    {
        for (int step = 0; step < settings.Steps; step++)
        {
            double phaseRad = 2 * Math.PI * step / settings.Steps;
            frames.Add(new ScheduledFrame(frames.Count, role, pattern, step, phaseRad, frames.Count / settings.FrameRateHz));
        }
    }
}
