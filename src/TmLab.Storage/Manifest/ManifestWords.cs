using TmLab.Measurement;

namespace TmLab.Storage.Manifest;

/// <summary>The words of a manifest and of a schedule, stated once for reading and writing.</summary>
internal static class ManifestWords
{
    public const string Format = "tm-measurement";
    public const int Version = 1;

    public static readonly (string Word, FrameStorageKind Value)[] StorageKinds =
    [
        ("tiff", FrameStorageKind.Tiff), ("images", FrameStorageKind.Images), ("raw", FrameStorageKind.Raw), ("hdf5", FrameStorageKind.Hdf5),
    ];

    public static readonly (string Word, RawPixelFormat Value)[] RawPixels =
    [
        ("uint8", RawPixelFormat.UInt8), ("uint16-le", RawPixelFormat.UInt16LittleEndian), ("uint16-be", RawPixelFormat.UInt16BigEndian),
    ];

    public static readonly (string Word, BasisKind Value)[] Bases =
    [
        ("hadamard", BasisKind.Hadamard), ("hadamard-binary", BasisKind.HadamardBinary), ("fourier", BasisKind.Fourier),
        ("pixel", BasisKind.Pixel), ("custom", BasisKind.Custom),
    ];

    public static readonly (string Word, HadamardOrdering Value)[] Orderings =
        [("natural", HadamardOrdering.Natural), ("sequency", HadamardOrdering.Sequency)];

    public static readonly (string Word, ScheduleOrder Value)[] Orders =
        [("mode-major", ScheduleOrder.ModeMajor), ("step-major", ScheduleOrder.StepMajor)];

    public static readonly (string Word, SteppedArm Value)[] Arms = [("signal", SteppedArm.Signal), ("reference", SteppedArm.Reference)];

    public static readonly (string Word, ModulatorKind Value)[] ModulatorKinds =
        [("phase", ModulatorKind.Phase), ("amplitude", ModulatorKind.Amplitude)];

    public static readonly (string Word, FrameRole Value)[] Roles =
    [
        ("mode", FrameRole.Mode), ("tracker", FrameRole.Tracker), ("dark", FrameRole.Dark),
        ("reference", FrameRole.Reference), ("blank", FrameRole.Blank),
    ];

    public static string Of<T>((string Word, T Value)[] words, T value) =>
        Array.Find(words, w => EqualityComparer<T>.Default.Equals(w.Value, value)).Word;
}
