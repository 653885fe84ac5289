"""Running a process to its end and reading off its time and peak memory."""

import json
import os
import pathlib
import sys
import tempfile
import time
from dataclasses import dataclass

HERE = pathlib.Path(__file__).resolve().parent
REPOSITORY = HERE.parent.parent
PROGRAM = REPOSITORY / "src/TmLab.Cli/bin/Release/net10.0/TmLab.Cli.dll"
BENCHMARKS = REPOSITORY / "tests/TmLab.Benchmarks/bin/Release/net10.0/TmLab.Benchmarks.dll"


class StageFailed(RuntimeError):
    """A process ended with an exit code other than 0."""


@dataclass(frozen=True)
class Outcome:
    """What a finished process took and printed."""

    seconds: float
    """Wall-clock time from start to end, the runtime's or interpreter's own start included."""
    peak_bytes: int
    """Largest resident memory."""
    text: str
    """Standard output."""

    @property
    def result(self):
        """The last line of the standard output, read as JSON."""
        return json.loads(self.text.strip().splitlines()[-1])


def run(arguments, cwd=None):
    """Runs a command; its peak memory is the kernel's own count for this process alone (wait4)."""
    words = [str(a) for a in arguments]
    with tempfile.TemporaryFile() as out, tempfile.TemporaryFile() as err:
        actions = [(os.POSIX_SPAWN_DUP2, out.fileno(), 1), (os.POSIX_SPAWN_DUP2, err.fileno(), 2)]
        before = pathlib.Path.cwd()
        os.chdir(cwd or before)
        try:
            start = time.perf_counter()
            pid = os.posix_spawnp(words[0], words, os.environ, file_actions=actions)
            _, status, usage = os.wait4(pid, 0)
            seconds = time.perf_counter() - start
        finally:
            os.chdir(before)
        out.seek(0)
        err.seek(0)
        text, trouble = out.read().decode(), err.read().decode()
    code = os.waitstatus_to_exitcode(status)
    if code != 0:
        raise StageFailed(f"exit code {code} of {' '.join(words)}\n{text}{trouble}")
    return Outcome(seconds, usage.ru_maxrss * 1024, text)


def program(*arguments):
    """Runs this repository's program, built in Release."""
    return run(["dotnet", PROGRAM, *arguments])


def script(*arguments):
    """Runs a stage of the NumPy version in a process of its own."""
    return run([sys.executable, HERE / "numpy_job.py", *arguments])


def kernel(case, rounds):
    """Runs this repository's kernel in memory; see tests/TmLab.Benchmarks."""
    return run(["dotnet", BENCHMARKS, "kernel", "--modes", case.modes, "--side", case.side, "--rounds", rounds])


def build():
    """Builds the program and the benchmarks in Release, so that the figures are those of the sources beside this file."""
    for project in ("src/TmLab.Cli", "tests/TmLab.Benchmarks"):
        run(["dotnet", "build", project, "-c", "Release", "-v", "q"], cwd=REPOSITORY)
