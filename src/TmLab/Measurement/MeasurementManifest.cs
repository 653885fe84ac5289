using TmLab.Quantities;

namespace TmLab.Measurement;

/// <summary>What the bench says of a measurement: the content of <c>measurement.json</c>, checked and typed. Paths are kept as written.</summary>
/// <param name="Title">A line for people; null when not given.</param>
/// <param name="WavelengthNm">Vacuum wavelength, nanometres; null when not given.</param>
/// <param name="Camera">The camera.</param>
/// <param name="Frames">Where the frames are.</param>
/// <param name="Schedule">Where the schedule is, or its short form.</param>
/// <param name="Modes">The patterns shown.</param>
/// <param name="Modulator">The panel; null when not given (masks then cannot be made).</param>
/// <param name="SteppedArm">Which arm carried the phase steps.</param>
/// <param name="SampleTransmittance">Total transmittance measured otherwise, in (0, 1]; null when not given.</param>
/// <param name="Notes">Free text; null when not given.</param>
public sealed record MeasurementManifest(
    string? Title,
    double? WavelengthNm,
    CameraDescription Camera,
    FrameLocation Frames,
    ScheduleLocation Schedule,
    ModeDescription Modes,
    ModulatorDescription? Modulator,
    SteppedArm SteppedArm,
    double? SampleTransmittance,
    string? Notes);

/// <summary>The camera.</summary>
/// <param name="Size">Frame size; null when the manifest leaves it to the frames.</param>
/// <param name="BitDepth">Bits a pixel, 1 … 16; counts run from 0 to 2^BitDepth − 1.</param>
/// <param name="PixelPitchUm">Pixel pitch, micrometres; null when not given.</param>
/// <param name="ElectronsPerCount">Conversion gain, photoelectrons a count; null when not given.</param>
/// <param name="ReadNoiseElectrons">Read noise, photoelectrons r.m.s.; null when not given.</param>
public sealed record CameraDescription(
    ImageSize? Size, int BitDepth, double? PixelPitchUm, double? ElectronsPerCount, double? ReadNoiseElectrons)
{
    /// <summary>The largest count that the camera can give.</summary>
    public int FullScaleCounts => (1 << BitDepth) - 1;
}

/// <summary>How frames are stored.</summary>
public enum FrameStorageKind
{
    /// <summary>Multi-page TIFF files.</summary>
    Tiff,

    /// <summary>One image file a frame.</summary>
    Images,

    /// <summary>Frames back to back in one file.</summary>
    Raw,

    /// <summary>A dataset (frame, y, x) in an HDF5 file.</summary>
    Hdf5,
}

/// <summary>The pixel format of raw frames.</summary>
public enum RawPixelFormat
{
    /// <summary>One byte.</summary>
    UInt8,

    /// <summary>Two bytes, least significant first.</summary>
    UInt16LittleEndian,

    /// <summary>Two bytes, most significant first.</summary>
    UInt16BigEndian,
}

/// <summary>Where the frames are.</summary>
/// <param name="Kind">How they are stored.</param>
/// <param name="Paths">File names relative to the manifest's folder, in order; for <see cref="FrameStorageKind.Images"/> one glob.</param>
/// <param name="Dataset">The HDF5 dataset; null for other kinds.</param>
/// <param name="Pixel">The raw pixel format; null for other kinds.</param>
/// <param name="HeaderBytes">Bytes to skip at the start of a raw file.</param>
public sealed record FrameLocation(
    FrameStorageKind Kind, IReadOnlyList<string> Paths, string? Dataset, RawPixelFormat? Pixel, long HeaderBytes);

/// <summary>The order of a schedule given in short form.</summary>
public enum ScheduleOrder
{
    /// <summary>All steps of a mode, then the next mode.</summary>
    ModeMajor,

    /// <summary>All modes at a step, then the next step.</summary>
    StepMajor,
}

/// <summary>The schedule: a CSV file, or the short form.</summary>
/// <param name="Path">The CSV file relative to the manifest's folder; null for the short form.</param>
/// <param name="Order">The short form's order; null for a file.</param>
/// <param name="Steps">The short form's number of steps; 0 for a file.</param>
public sealed record ScheduleLocation(string? Path, ScheduleOrder? Order, int Steps);

/// <summary>The patterns shown.</summary>
/// <param name="Basis">The set of patterns.</param>
/// <param name="Ordering">The numbering of Hadamard rows; Natural for other bases.</param>
/// <param name="PatternCount">Number of patterns K; equal to the number of modes except for custom patterns.</param>
/// <param name="Grid">The macro-pixel grid; its count is the number of input modes N.</param>
/// <param name="PatternFile">The file of custom patterns relative to the manifest's folder; null otherwise.</param>
/// <param name="PatternDataset">The dataset in it when it is HDF5; null otherwise.</param>
public sealed record ModeDescription(
    BasisKind Basis, HadamardOrdering Ordering, int PatternCount, GridShape Grid, string? PatternFile, string? PatternDataset)
{
    /// <summary>Number of input modes N.</summary>
    public int ModeCount => Grid.Count;
}

/// <summary>What the modulator changes.</summary>
public enum ModulatorKind
{
    /// <summary>The phase (liquid-crystal panel).</summary>
    Phase,

    /// <summary>The amplitude (micromirror panel or amplitude panel).</summary>
    Amplitude,
}

/// <summary>The modulator's panel.</summary>
/// <param name="Kind">What it changes.</param>
/// <param name="Size">Native size, panel pixels.</param>
/// <param name="Region">The part of the panel that carries the macro-pixels.</param>
/// <param name="PixelPitchUm">Panel pixel pitch, micrometres; null when not given.</param>
/// <param name="LutFile">CSV gray,phase_rad relative to the manifest's folder; null when grey is proportional to phase.</param>
/// <param name="FlatnessFile">Flatness image relative to the manifest's folder; null when not given.</param>
public sealed record ModulatorDescription(
    ModulatorKind Kind, ImageSize Size, PixelRectangle Region, double? PixelPitchUm, string? LutFile, string? FlatnessFile);
