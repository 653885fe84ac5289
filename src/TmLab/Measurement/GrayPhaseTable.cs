using System.Collections.Immutable;

namespace TmLab.Measurement;

/// <summary>A modulator's calibration: the phase that each grey level gives. Grey levels rise strictly; phases are monotone.</summary>
/// <param name="Gray">Grey levels 0 … 255, strictly rising.</param>
/// <param name="PhaseRad">The phase at each of them, radians, strictly rising.</param>
public sealed record GrayPhaseTable(ImmutableArray<int> Gray, ImmutableArray<double> PhaseRad);
