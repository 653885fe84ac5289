"""How time grows with modes and pixels: fitted exponents of time ~ size^exponent."""

import pathlib
import statistics
import tempfile

import numpy as np

import processes
from processes import program, script
from reference_case import Case

MODES = [256, 512, 1024, 2048, 4096]
SIDES = [32, 64, 128, 256, 512]
SIDE_FOR_MODES = 96
MODES_FOR_SIDES = 256


def run(folder, rounds):
    """Prints a table for each of the two sweeps.

    The start of the process, measured by itself, is taken off the times of whole processes before fitting; the last column is the
    exponent between the two largest sizes, where fixed costs weigh least.
    """
    folder = pathlib.Path(folder)
    start = statistics.median(program("--version").seconds for _ in range(rounds))
    print(f"\nTime against modes, {SIDE_FOR_MODES} x {SIDE_FOR_MODES} pixels; start of the process {start:.2f} s taken off:\n")
    _sweep(folder, [Case(n, SIDE_FOR_MODES) for n in MODES], MODES, start, rounds)
    print(f"\nTime against pixels, {MODES_FOR_SIDES} modes:\n")
    _sweep(folder, [Case(MODES_FOR_SIDES, side) for side in SIDES], [side * side for side in SIDES], start, rounds)


def _sweep(folder, cases, sizes, start, rounds):
    measured = [_times(folder, case, start, rounds) for case in cases]
    print("| stage | " + " | ".join(f"{size:,}" for size in sizes) + " | exponent | of the largest two |")
    print("|" + "---|" * (len(sizes) + 3))
    for stage in measured[0]:
        seconds = [times[stage] for times in measured]
        cells = " | ".join(f"{s:.3g} s" for s in seconds)
        print(f"| {stage} | {cells} | {exponent(sizes, seconds):.2f} | {exponent(sizes[-2:], seconds[-2:]):.2f} |", flush=True)


def exponent(sizes, seconds):
    """Least-squares slope of log time over log size."""
    return float(np.polyfit(np.log(sizes), np.log(seconds), 1)[0])


def _times(folder, case, start, rounds):
    values = "--values-only" in program("channels", "--help").text
    options = ["--values-only"] if values else []
    with tempfile.TemporaryDirectory(dir=folder) as name:
        work = pathlib.Path(name)
        script("make", work / "measurement", "--modes", case.modes, "--side", case.side)
        program("ingest", work / "measurement", "-o", work / "m.h5", "--quiet")
        reconstruct, spectrum = [], []
        for _ in range(rounds):
            reconstruct.append(_process("reconstruct", work / "m.h5", work / "t.h5", start))
            spectrum.append(_process("channels", work / "t.h5", work / "c.h5", start, *options))
    return {
        "kernel in memory": processes.kernel(case, rounds).result["kernel"],
        "`reconstruct`": statistics.median(reconstruct),
        "`channels" + "".join(f" {o}" for o in options) + "`": statistics.median(spectrum),
    }


def _process(command, source, output, start, *options):
    output.unlink(missing_ok=True)
    seconds = program(command, source, "-o", output, "--quiet", *options).seconds
    # A process that does less than the noise of its start has no time worth the name, but a logarithm wants one.
    return max(seconds - start, 1e-3)
