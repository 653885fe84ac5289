using System.Runtime.InteropServices;
using System.Text.Json;
using TmLab.EndToEndTests.Running;
using TmLab.Matrix;
using TmLab.Numerics.Matrices;
using TmLab.Storage.StageFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.EndToEndTests;

/// <summary>From a plan over the virtual bench to a matrix, as a user types it.</summary>
public sealed class PlanAndSimulateTests
{
    private static readonly string[] s_small =
        ["--grid", "8x8", "--camera", "24x24", "--panel", "64x64", "--step-by", "signal", "--drift", "0.4"];

    [Fact]
    public void A_plan_predicts_what_its_simulated_measurement_is_worth()
    {
        using var folder = new TemporaryFolder();
        JsonElement plan = Succeed(folder, ["plan", .. s_small, "-o", "plan"]);
        Succeed(folder, "simulate", "plan", "-o", "measured");
        Succeed(folder, "ingest", "measured", "-o", "m.h5");
        Succeed(folder, "reconstruct", "m.h5", "-o", "t.h5");

        double predicted = plan.GetProperty("predicted_fidelity").GetDouble();
        Assert.InRange(Fidelity(folder, "t.h5", "measured") - predicted, -0.02, 0.02);
        Assert.Equal(64, plan.GetProperty("image_count").GetInt32());
        Assert.Equal(
            plan.GetProperty("frame_bytes").GetInt64(), new FileInfo(folder.File("measured/frames.raw")).Length);
        Assert.Contains(plan.GetProperty("variations").EnumerateArray(), v => v.GetProperty("change").GetString() == "one step more");
    }

    [Fact]
    public void A_simulation_depends_on_its_seed_and_not_on_threads()
    {
        using var folder = new TemporaryFolder();
        Succeed(folder, ["plan", .. s_small, "-o", "plan"]);
        string[] bench =
        [
            "simulate", "plan", "--medium", "slab", "--ballistic", "0.1", "--grain", "2.5", "--drift-sine", "0.3,2", "--drift-jump", "0.5,1", "--power-walk", "0.01",
            "--decorrelation-time", "50", "--step-jitter", "0.02", "--step-scale", "0.01", "--fault", "dropped@40", "--fault", "swapped@60", "--dead-pixels", "2",
            "--stray", "1,2,3,4,20000",
        ];
        Succeed(folder, [.. bench, "--seed", "5", "--threads", "1", "-o", "one"]);
        Succeed(folder, [.. bench, "--seed", "5", "--threads", "3", "-o", "three"]);
        Succeed(folder, [.. bench, "--seed", "6", "--threads", "3", "-o", "other"]);

        IReadOnlyList<string> files = FolderTree.Entries(folder.File("one"));
        Assert.Equal(["frames.raw", "measurement.json", "schedule.csv", "truth-frames.csv", "truth-matrix.npy"], files);
        Assert.All(files, f => Assert.Equal(File.ReadAllBytes(folder.File($"one/{f}")), File.ReadAllBytes(folder.File($"three/{f}"))));
        Assert.NotEqual(File.ReadAllBytes(folder.File("one/frames.raw")), File.ReadAllBytes(folder.File("other/frames.raw")));
    }

    [Fact]
    public void A_lost_pattern_is_planned_again_and_joined()
    {
        using var folder = new TemporaryFolder();
        Succeed(folder, ["plan", .. s_small, "--trackers-every", "8", "-o", "plan"]);

        // Behind 16 plain frames and five trackers; two of its four steps are shaken, which mixes its field with its conjugate.
        int frame = 16 + (4 * (37 + 5));
        Succeed(folder, "simulate", "plan", "--fault", $"shaken@{frame}", "--fault", $"shaken@{frame + 2}", "-o", "first");
        Succeed(folder, "ingest", "first", "-o", "m.h5");
        Succeed(folder, "reconstruct", "m.h5", "-o", "t.h5");
        MarkAsLost(folder, 37);

        JsonElement repair = Succeed(folder, "plan", "--repair", "lost.h5", "--measurement", "m.h5", "--step-by", "signal", "-o", "repair");
        Assert.Equal(1, repair.GetProperty("planned_pattern_count").GetInt32());
        Assert.Equal("pattern-000000.png pattern-000037.png", string.Join(' ', FolderTree.Entries(folder.File("repair/patterns"))));
        Succeed(folder, "simulate", "repair", "--drift", "0.4", "-o", "second");
        Succeed(folder, "ingest", "--merge", "first", "second", "-o", "joined.h5");
        Succeed(folder, "reconstruct", "joined.h5", "-o", "mended.h5");

        // One pattern of 64 is 1/64 of the matrix, and about half of it was lost. The plan promises 0.996.
        double damaged = Fidelity(folder, "t.h5", "first");
        double mended = Fidelity(folder, "mended.h5", "first");
        Assert.True(mended - damaged > 0.4 / 64, $"{damaged} became {mended}");
        Assert.InRange(mended, 0.99, 1);
    }

    [Theory]
    [InlineData("plan", "--grid", "6x6", "-o", "p")]
    [InlineData("plan", "--basis", "fourier", "--modulator", "amplitude", "-o", "p")]
    [InlineData("plan", "--lut", "nothing.csv", "-o", "p")]
    [InlineData("plan", "--repair", "nothing.h5", "-o", "p")]
    [InlineData("simulate", "nowhere", "-o", "p")]
    [InlineData("ingest", "--merge", "nowhere", "neither", "-o", "m.h5")]
    public void Impossible_plans_and_missing_inputs_give_3_and_leave_nothing(params string[] arguments)
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, arguments);
        Assert.True(result.ExitCode == 3, result.ToString());
        Assert.Empty(FolderTree.Entries(folder.Path));
    }

    [Theory]
    [InlineData("plan", "--steps", "2", "-o", "p")]
    [InlineData("plan", "--grid", "16", "-o", "p")]
    [InlineData("plan", "--basis", "hadamrd", "-o", "p")]
    [InlineData("simulate", "plan", "--fault", "lost@3", "-o", "p")]
    [InlineData("simulate", "plan", "--drift-sine", "1", "-o", "p")]
    [InlineData("ingest", "a", "--merge", "b", "c", "-o", "m.h5")]
    [InlineData("ingest", "-o", "m.h5")]
    public void Words_that_make_no_sense_give_2(params string[] arguments)
    {
        using var folder = new TemporaryFolder();
        ToolResult result = Tool.Run(folder, arguments);
        Assert.True(result.ExitCode == 2, result.ToString());
        Assert.Empty(FolderTree.Entries(folder.Path));
    }

    [Fact]
    public void A_plan_keeps_what_is_there_unless_forced()
    {
        using var folder = new TemporaryFolder();
        Succeed(folder, ["plan", .. s_small, "-o", "plan/"]);
        ToolResult refused = Tool.Run(folder, ["plan", .. s_small, "-o", "plan"]);
        Assert.True(refused.ExitCode == 5, refused.ToString());
        Succeed(folder, ["plan", .. s_small, "--steps", "5", "--force", "-o", "plan"]);
    }

    private static void MarkAsLost(TemporaryFolder folder, int pattern)
    {
        using var matrix = new MatrixFileReader(folder.File("t.h5"));
        TransmissionMatrixFacts facts = matrix.Facts;
        using var writer = new MatrixFileWriter(folder.File("lost.h5"), false, matrix.Provenance, matrix.RowCount, matrix.ColumnCount);
        var rows = new Complex64[matrix.RowCount * matrix.ColumnCount];
        matrix.ReadRows(0, matrix.RowCount, rows);
        writer.WriteRows(0, rows);
        writer.Complete(facts with
        {
            Quality = facts.Quality with { LostPatterns = [pattern] },
        });
    }

    /// <summary>Mean over the valid rows of |⟨a,b⟩|²/(⟨a,a⟩⟨b,b⟩) with the truth.</summary>
    private static double Fidelity(TemporaryFolder folder, string matrixFile, string measurement)
    {
        using var matrix = new MatrixFileReader(folder.File(matrixFile));
        byte[] npy = File.ReadAllBytes(folder.File($"{measurement}/truth-matrix.npy"));
        Complex64[] truth = MemoryMarshal.Cast<byte, Complex64>(npy.AsSpan(10 + BitConverter.ToUInt16(npy, 8))).ToArray();
        int columns = matrix.ColumnCount;
        var rows = new Complex64[matrix.RowCount * columns];
        matrix.ReadRows(0, matrix.RowCount, rows);
        return Enumerable.Range(0, matrix.RowCount).Where(p => matrix.Facts.Pixels.Valid[p])
            .Average(p => RowFidelity(rows.AsSpan(p * columns, columns), truth.AsSpan(p * columns, columns)));
    }

    private static double RowFidelity(ReadOnlySpan<Complex64> a, ReadOnlySpan<Complex64> b)
    {
        double re = 0, im = 0, aa = 0, bb = 0;
        for (int n = 0; n < a.Length; n++)
        {
            re += (a[n].r * (double)b[n].r) + (a[n].i * (double)b[n].i);
            im += (a[n].r * (double)b[n].i) - (a[n].i * (double)b[n].r);
            aa += a[n].SquaredMagnitude;
            bb += b[n].SquaredMagnitude;
        }

        return ((re * re) + (im * im)) / (aa * bb);
    }

    private static JsonElement Succeed(TemporaryFolder folder, params string[] arguments)
    {
        ToolResult result = Tool.Run(folder, [.. arguments, "--json"]);
        Assert.True(result.ExitCode == 0, result.ToString());
        using JsonDocument document = JsonDocument.Parse(result.Stdout);
        return document.RootElement.Clone();
    }
}
