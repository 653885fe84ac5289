#!/usr/bin/python3
"""Runs the whole job and a plain NumPy version of it, alternately, and prints ratios of time and memory as a Markdown table.

    python3 tests/compare/compare.py              the reference case
    python3 tests/compare/compare.py --small      a small case, to see that everything works
    python3 tests/compare/compare.py --growth     time against modes and pixels, with fitted exponents
    python3 tests/compare/compare.py --large      4,096 modes and a matrix file over 4 GB, once
"""

import argparse
import pathlib
import statistics
import tempfile

import growth
import large
import machine
import processes
from processes import program, script
from reference_case import Case

LEADING = 64
MEMORY = "512MiB"

# The matrices of both sides agree up to rounding and what the drift estimate makes of it; singular values of one and the same
# matrix up to single-precision products summed in double.
LEAST_FIDELITY = 0.9999
SINGULAR_VALUE_TOLERANCE = 1e-4


class Pairs:
    """Seconds of both sides, one entry a round."""

    def __init__(self, name, needed=None, baseline="NumPy"):
        self.name, self.needed, self.baseline = name, needed, baseline
        self.theirs, self.ours = [], []

    @property
    def ratio(self):
        return statistics.median(t / o for t, o in zip(self.theirs, self.ours))

    def row(self):
        wanted = "" if self.needed is None else f"{self.needed:g}"
        return (f"| {self.name} | {statistics.median(self.theirs):.2f} s | {statistics.median(self.ours):.2f} s "
                f"| {self.ratio:.1f} | {wanted} |")


class Comparison:
    """One run: the measurement, the files of both sides, and what was measured."""

    def __init__(self, folder, case, rounds):
        self.folder, self.case, self.rounds = pathlib.Path(folder), case, rounds
        self.measurement = self.folder / "measurement"
        self.can_values, self.can_top = options_of_channels()
        self.notes = []

    def path(self, name):
        return self.folder / name

    def prepare(self):
        script("make", self.measurement, "--modes", self.case.modes, "--side", self.case.side)
        program("ingest", self.measurement, "-o", self.path("m.h5"), "--quiet")
        program("reconstruct", self.path("m.h5"), "-o", self.path("t.h5"), "--quiet")
        program("channels", self.path("t.h5"), "-o", self.path("c.h5"), "--quiet")
        script("reconstruct", self.measurement / "frames.h5", self.path("script-t.h5"))
        script("values", self.path("t.h5"), self.path("script-c.h5"))

    def verify(self):
        """Ratios of two different results mean nothing: both sides must have found the same."""
        rows = script("fidelity", self.path("t.h5"), self.path("script-t.h5")).result
        require(rows["valid"] == rows["rows"], f"only {rows['valid']} of {rows['rows']} rows are valid")
        require(rows["least"] >= LEAST_FIDELITY, f"the least fidelity of a row is {rows['least']}")
        values = script("sigma", self.path("c.h5"), self.path("script-c.h5")).result
        require(values["count"] == min(self.case.modes, self.case.pixels), "singular values are missing")
        require(values["difference"] <= SINGULAR_VALUE_TOLERANCE, f"singular values differ by {values['difference']}")
        self.notes.append(
            f"Same results: fidelity of the rows at least {rows['least']:.6f}, elements apart by {rows['difference']:.1e} (r.m.s., "
            f"relative), {values['count']} singular values apart by at most {values['difference']:.1e}.")

    def stages(self):
        """Each stage as a pair of functions that run one side and give its seconds."""
        frames, m, t = self.measurement / "frames.h5", self.path("m.h5"), self.path("t.h5")
        yield Pairs("kernel in memory (demodulation + Hadamard)", 20), \
            lambda: script("kernel", frames).result["kernel"], \
            lambda: processes.kernel(self.case, 3).result["kernel"]
        yield Pairs("`ingest`"), self.theirs("ingest", frames), self.ours("ingest", self.measurement)
        yield Pairs("`reconstruct`, drift followed in every frame, which the script does not do", 4), \
            self.theirs("reconstruct", frames), self.ours("reconstruct", m)
        yield Pairs("`reconstruct --drift none`, like for like", 4), \
            self.theirs("reconstruct", frames), self.ours("reconstruct", m, "--drift", "none")
        if self.can_values:
            yield Pairs("`channels --values-only`, native engine", 1.8), \
                self.theirs("values", t), self.ours("channels", t, "--values-only", "--engine", "native")
            yield Pairs("`channels --values-only`, managed engine"), \
                self.theirs("values", t), self.ours("channels", t, "--values-only", "--engine", "managed")
        yield Pairs("`channels`, all with vectors"), self.theirs("vectors", t), self.ours("channels", t)
        if self.can_top:
            leading = self.ours("channels", t, "--top", LEADING)
            yield Pairs(f"`channels --top {LEADING}` against NumPy's full spectrum with vectors", 3), self.theirs("vectors", t), leading
            yield Pairs(f"`channels --top {LEADING}` against this program's full spectrum with vectors", 3, "tmlab"), \
                self.ours("channels", t), leading

    def theirs(self, stage, source):
        """The script's seconds, the sum of its parts: neither the interpreter's start nor its imports count against it."""
        return lambda: sum(self.fresh(lambda out: script(stage, source, out)).result.values())

    def ours(self, command, source, *options):
        """This program's seconds, the whole process: start, digest of the input, work, flush to the disk."""
        return lambda: self.fresh(lambda out: program(command, source, "-o", out, "--quiet", *options)).seconds

    def fresh(self, work):
        """Every round writes a new file: overwriting would time the removal of the old one."""
        output = self.path("round.h5")
        try:
            return work(output)
        finally:
            output.unlink(missing_ok=True)

    def time(self):
        for pairs, theirs, ours in self.stages():
            for number in range(self.rounds):
                turns = [(pairs.theirs, theirs), (pairs.ours, ours)]
                for seconds, side in turns if number % 2 == 0 else turns[::-1]:
                    seconds.append(side())
            print(pairs.row(), flush=True)

    def memory(self):
        theirs = self.fresh(lambda out: script("job", self.measurement / "frames.h5", out)).peak_bytes
        with tempfile.TemporaryDirectory(dir=self.folder) as out:
            ours = program("run", self.measurement, "-o", out, "--memory", MEMORY, "--quiet").peak_bytes
        print(f"| peak memory of the whole job, `run --memory {MEMORY}` | {theirs / 2**20:.0f} MiB | {ours / 2**20:.0f} MiB "
              f"| {ours / theirs:.2f} of it | under 0.4 |", flush=True)

    def start(self):
        seconds = [program("--version").seconds for _ in range(self.rounds)]
        self.notes.append(f"Start of the .NET runtime and this program (`--version`), part of every time of its own: {statistics.median(seconds):.2f} s.")
        if not self.can_values:
            self.notes.append("Left out: this build of the program has no `channels --values-only`.")
        if not self.can_top:
            self.notes.append("Left out: this build of the program has no `channels --top`.")


def options_of_channels():
    text = program("channels", "--help").text
    return "--values-only" in text, "--top" in text


def require(condition, trouble):
    if not condition:
        raise SystemExit(f"The two sides disagree, so there is nothing to compare: {trouble}.")


def compare(folder, case, rounds):
    comparison = Comparison(folder, case, rounds)
    comparison.prepare()
    comparison.verify()
    print(f"{case}: frames {case.frame_bytes / 1e6:.0f} MB, matrix {case.matrix_bytes / 1e6:.0f} MB; median of {rounds} rounds.\n")
    print("| stage | NumPy | tmlab | ratio | wanted |\n|---|---|---|---|---|", flush=True)
    comparison.time()
    comparison.memory()
    comparison.start()
    print("\n" + "\n".join(comparison.notes))


def main():
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    mode = parser.add_mutually_exclusive_group()
    mode.add_argument("--small", action="store_true", help="256 modes, 64 x 64 pixels")
    mode.add_argument("--growth", action="store_true", help="fit the growth of the times")
    mode.add_argument("--large", action="store_true", help="4,096 modes end to end, matrix file over 4 GB")
    parser.add_argument("--modes", type=int, default=1024, help="Hadamard modes, a power of two (1024)")
    parser.add_argument("--side", type=int, default=256, help="the camera region is SIDE x SIDE pixels (256)")
    parser.add_argument("--rounds", type=int, default=5, help="how often each stage is run on each side (5)")
    parser.add_argument("--folder", help="where to put the data, about 4 GB (20 GB with --large); the system's temporary folder if not given")
    parser.add_argument("--no-build", action="store_true", help="take the Release build that is there")
    a = parser.parse_args()
    if not a.no_build:
        processes.build()
    case = Case(256, 64) if a.small else Case(a.modes, a.side)
    print(machine.describe(), flush=True)
    with tempfile.TemporaryDirectory(dir=a.folder, prefix="tmlab-compare-") as folder:
        if a.growth:
            growth.run(folder, a.rounds)
        elif a.large:
            large.run(folder, a.side)
        else:
            compare(folder, case, a.rounds)
    print("\n" + machine.load(), flush=True)


if __name__ == "__main__":
    main()
