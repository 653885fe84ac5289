using System.Diagnostics;
using TmLab.Failures;
using TmLab.Storage.AtomicFiles;
using TmLab.TestKit;
using Xunit;

namespace TmLab.Storage.Tests.AtomicFiles;

public sealed class AtomicOutputTests
{
    [Fact]
    public void A_committed_output_stands_alone_under_its_name()
    {
        using var folder = new TemporaryFolder();
        AtomicOutput.Write(folder.File("a.json"), false, temporary => File.WriteAllText(temporary, "whole"));
        Assert.Equal(["a.json"], folder.FileNames);
        Assert.Equal("whole", File.ReadAllText(folder.File("a.json")));
    }

    [Fact]
    public void An_existing_file_is_kept_unless_overwriting_was_asked_for()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        File.WriteAllText(path, "old");
        OutputException refused = Assert.Throws<OutputException>(
            () => AtomicOutput.Write(path, false, temporary => File.WriteAllText(temporary, "new")));
        Assert.Equal((OutputFailure.Exists, path, "old"), (refused.Failure, refused.File, File.ReadAllText(path)));
        AtomicOutput.Write(path, true, temporary => File.WriteAllText(temporary, "new"));
        Assert.Equal("new", File.ReadAllText(path));
        Assert.Equal(["a.json"], folder.FileNames);
    }

    [Fact]
    public void A_file_that_appears_while_writing_is_kept()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        OutputException refused = Assert.Throws<OutputException>(() => AtomicOutput.Write(path, false, temporary =>
        {
            File.WriteAllText(temporary, "new");
            File.WriteAllText(path, "someone else's");
        }));
        Assert.Equal(OutputFailure.Exists, refused.Failure);
        Assert.Equal("someone else's", File.ReadAllText(path));
        Assert.Equal(["a.json"], folder.FileNames);
    }

    [Fact]
    public void A_folder_of_that_name_is_refused_even_when_overwriting()
    {
        using var folder = new TemporaryFolder();
        Directory.CreateDirectory(folder.File("a"));
        Assert.Equal(OutputFailure.Exists, Assert.Throws<OutputException>(() => AtomicOutput.Begin(folder.File("a"), true)).Failure);
    }

    [Fact]
    public void A_failing_or_cancelled_writer_leaves_what_was_there()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        File.WriteAllText(path, "old");
        Assert.Throws<OperationCanceledException>(() => AtomicOutput.Write(path, true, temporary =>
        {
            File.WriteAllText(temporary, "half");
            throw new OperationCanceledException();
        }));
        Assert.Equal("old", File.ReadAllText(path));
        Assert.Equal(["a.json"], folder.FileNames);
    }

    [Fact]
    public void A_second_writer_of_the_same_output_is_told()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        using (AtomicOutput first = AtomicOutput.Begin(path, true))
        {
            File.WriteAllText(first.TemporaryPath, "first");
            Assert.Equal(OutputFailure.Busy, Assert.Throws<OutputException>(() => AtomicOutput.Begin(path, true)).Failure);
            using AtomicOutput other = AtomicOutput.Begin(folder.File("b.json"), true);
            first.Commit();
        }

        Assert.Equal("first", File.ReadAllText(path));
        AtomicOutput.Write(path, true, temporary => File.WriteAllText(temporary, "second"));
        Assert.Equal("second", File.ReadAllText(path));
        Assert.Equal(["a.json"], folder.FileNames);
    }

    [Fact]
    public void Many_writers_at_once_never_mix_their_outputs()
    {
        // Each writes its own number many times over; whatever stands in the end must be one writer's alone.
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        int committed = 0;
        Parallel.For(0, 200, new ParallelOptions { MaxDegreeOfParallelism = 8 }, number =>
        {
            try
            {
                AtomicOutput.Write(path, true, temporary =>
                {
                    using var writer = new StreamWriter(new FileStream(temporary, FileMode.CreateNew));
                    for (int k = 0; k < 100; k++)
                    {
                        writer.Write($"{number:D4}");
                        writer.Flush();
                    }
                });
                Interlocked.Increment(ref committed);
            }
            catch (OutputException e) when (e.Failure == OutputFailure.Busy)
            {
                // Expected of most.
            }
        });
        Assert.True(committed > 0);
        string content = File.ReadAllText(path);
        Assert.Equal(string.Concat(Enumerable.Repeat(content[..4], 100)), content);
        Assert.Equal(["a.json"], folder.FileNames);
    }

    [Fact]
    public void What_a_killed_run_left_is_swept()
    {
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        File.WriteAllText(path + AtomicOutput.TemporarySuffix, "half of an earlier output, longer than the new one");
        File.WriteAllText(path + AtomicOutput.LockSuffix, "");
        AtomicOutput.Write(path, false, temporary =>
        {
            Assert.False(File.Exists(temporary));
            File.WriteAllText(temporary, "new");
        });
        Assert.Equal("new", File.ReadAllText(path));
        Assert.Equal(["a.json"], folder.FileNames);
    }

    [Fact]
    public void The_lock_of_a_killed_process_does_not_last()
    {
        // flock(2), as this runtime takes it on Unix, is visible to the program of the same name, which holds it until it is killed.
        const string flock = "/usr/bin/flock";
        Assert.SkipUnless(File.Exists(flock), "needs /usr/bin/flock");
        using var folder = new TemporaryFolder();
        string path = folder.File("a.json");
        File.WriteAllText(path + AtomicOutput.TemporarySuffix, "half");
        using Process holder = Process.Start(flock, ["--no-fork", path + AtomicOutput.LockSuffix, "/bin/sh", "-c", $"touch '{folder.File("held")}'; exec sleep 60"]);
        try
        {
            Assert.True(SpinWait.SpinUntil(() => File.Exists(folder.File("held")), TimeSpan.FromSeconds(10)));
            Assert.Equal(OutputFailure.Busy, Assert.Throws<OutputException>(() => AtomicOutput.Begin(path, false)).Failure);
        }
        finally
        {
            holder.Kill(entireProcessTree: true);
            holder.WaitForExit();
        }

        AtomicOutput.Write(path, false, temporary => File.WriteAllText(temporary, "new"));
        Assert.Equal("new", File.ReadAllText(path));
    }

    [Fact]
    public void A_missing_folder_or_one_that_is_a_file_cannot_be_written_to()
    {
        using var folder = new TemporaryFolder();
        File.WriteAllText(folder.File("plain"), "");
        Assert.Equal(
            OutputFailure.NotWritable,
            Assert.Throws<OutputException>(() => AtomicOutput.Begin(Path.Combine(folder.Path, "missing", "a.json"), false)).Failure);
        Assert.Equal(
            OutputFailure.NotWritable,
            Assert.Throws<OutputException>(() => AtomicOutput.Begin(Path.Combine(folder.Path, "plain", "a.json"), false)).Failure);
        Assert.Equal(["plain"], folder.FileNames);
    }

    [Fact]
    public void A_read_only_disk_cannot_be_written_to()
    {
        using var disk = SmallDisk.Mount(1 << 20, readOnly: true);
        OutputException failure = Assert.Throws<OutputException>(() => AtomicOutput.Begin(disk.File("a.json"), false));
        Assert.Equal(OutputFailure.NotWritable, failure.Failure);
        Assert.Contains("read-only", failure.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_full_disk_is_told_and_leaves_nothing()
    {
        using var disk = SmallDisk.Mount(1 << 20);
        OutputException failure = Assert.Throws<OutputException>(
            () => AtomicOutput.Write(disk.File("a.png"), false, temporary => File.WriteAllBytes(temporary, new byte[2 << 20])));
        Assert.Equal(OutputFailure.DiskFull, failure.Failure);
        Assert.Empty(Directory.GetFileSystemEntries(disk.Path));
    }
}
