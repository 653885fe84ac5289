using System.Globalization;
using System.Runtime.InteropServices;
using System.Text;
using TmLab.Measurement;
using TmLab.Numerics.Matrices;
using TmLab.Simulation;

namespace TmLab.Tests.Simulation;

/// <summary>The files of data-demo as the program would write them today.</summary>
internal static class DemoFolder
{
    public static string Path { get; } = Find();

    public static string ManifestText { get; } = """
        {
          "format": "tm-measurement",
          "version": 1,
          "title": "storm-lantern pane of the Quillhaven light (invented), 256 modes",
          "wavelength_nm": 632.8,
          "camera": {
            "width": 36,
            "height": 36,
            "bit_depth": 12,
            "pixel_pitch_um": 6.5,
            "electrons_per_count": 7.5,
            "read_noise_e": 1.6
          },
          "frames": {"kind": "raw", "path": "frames.raw", "pixel": "uint16-le"},
          "schedule": "schedule.csv",
          "modes": {"basis": "hadamard", "count": 256, "grid": [16, 16]},
          "modulator": {
            "kind": "phase",
            "width": 512,
            "height": 512,
            "pixel_pitch_um": 15.0,
            "region": {"x": 0, "y": 0, "width": 512, "height": 512}
          },
          "notes": "Invented data, made by a seeded simulation; see README.md beside this file."
        }

        """.ReplaceLineEndings("\n");

    public static string ScheduleText()
    {
        var text = new StringBuilder("frame,role,mode,step,phase_rad,time_s\n");
        foreach (ScheduledFrame f in DemoMeasurement.Schedule.Frames)
        {
#pragma warning disable CA1308 // The file format writes roles in lower case.
            string role = f.Role.ToString().ToLowerInvariant();
#pragma warning restore CA1308
            string stepped = f.IsStepped ? string.Create(CultureInfo.InvariantCulture, $"{f.Mode},{f.Step},{f.PhaseRad:F9}") : ",,";
            text.Append(CultureInfo.InvariantCulture, $"{f.Index},{role},{stepped},{f.TimeS:F4}\n");
        }

        return text.ToString();
    }

    /// <summary>Drift, step and power of every frame.</summary>
    public static string TruthText(BenchTruth truth)
    {
        var text = new StringBuilder("frame,drift_phase_rad,step_phase_rad,power\n");
        for (int frame = 0; frame < truth.Power.Length; frame++)
        {
            string step = double.IsNaN(truth.StepPhaseRad[frame])
                ? "" : truth.StepPhaseRad[frame].ToString("F6", CultureInfo.InvariantCulture);
            text.Append(CultureInfo.InvariantCulture, $"{frame},{truth.DriftPhaseRad[frame]:F6},{step},{truth.Power[frame]:F6}\n");
        }

        return text.ToString();
    }

    /// <summary>A complex64 array in NumPy's file format, version 1.0 (the format's description in NumPy's manual, numpy.lib.format).</summary>
    public static byte[] Npy(ComplexMatrix matrix)
    {
        string header = string.Create(
            CultureInfo.InvariantCulture, $"{{'descr': '<c8', 'fortran_order': False, 'shape': ({matrix.Rows}, {matrix.Columns}), }}");
        int padded = ((10 + header.Length + 1 + 63) / 64 * 64) - 10;
        header = header.PadRight(padded - 1) + "\n";
        return
        [
            0x93, .. "NUMPY"u8, 1, 0, (byte)padded, (byte)(padded >> 8), .. Encoding.ASCII.GetBytes(header),
            .. MemoryMarshal.AsBytes(matrix.Buffer.AsSpan()),
        ];
    }

    private static string Find()
    {
        string? folder = AppContext.BaseDirectory;
        while (folder is not null && !File.Exists(System.IO.Path.Combine(folder, "TmLab.sln")))
        {
            folder = System.IO.Path.GetDirectoryName(folder);
        }

        return System.IO.Path.Combine(folder ?? throw new DirectoryNotFoundException("No TmLab.sln above the test program."), "data-demo");
    }
}
