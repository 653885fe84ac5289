"""The sizes beyond 32 bits: 4,096 modes from end to end within 24 GB of memory, and a matrix file of more than 4 GB read back."""

import pathlib

import h5py

from processes import program, script
from reference_case import Case

MODES = 4096
SMALLEST_SIDE = 384
LARGEST_PEAK_BYTES = 24 * 10**9
LEAST_FIDELITY = 0.9999


def run(folder, side):
    """Frames to singular values and mask; prints time and peak memory of each stage and stops with a message where one is wrong."""
    folder, case = pathlib.Path(folder), Case(MODES, max(side, SMALLEST_SIDE))
    print(f"\n{case}: frames {case.frame_bytes / 1e9:.1f} GB, matrix {case.matrix_bytes / 1e9:.1f} GB.\n")
    print("| stage | time | peak memory |\n|---|---|---|", flush=True)
    script("make", folder / "measurement", "--modes", case.modes, "--side", case.side)
    _stage("ingest", folder / "measurement", folder / "m.h5")
    (folder / "measurement/frames.h5").unlink()
    _stage("reconstruct", folder / "m.h5", folder / "t.h5")
    _check_rows(folder, case)
    _stage("mask", folder / "t.h5", folder / "mask.png", "--focus", f"{case.side - 1},{case.side - 1}")
    # All vectors would be another 5 GB; where the program can leave them out, it does.
    values = ["--values-only"] if "--values-only" in program("channels", "--help").text else []
    _stage("channels", folder / "t.h5", folder / "c.h5", *values)
    _check_values(folder / "c.h5", case)


def _stage(command, source, output, *options):
    outcome = program(command, source, "-o", output, "--quiet", *options)
    words = " ".join([command, *options])
    print(f"| `{words}` | {outcome.seconds:.1f} s | {outcome.peak_bytes / 2**20:.0f} MiB |", flush=True)
    if outcome.peak_bytes > LARGEST_PEAK_BYTES:
        raise SystemExit(f"{words} took {outcome.peak_bytes} bytes of memory.")


def _check_rows(folder, case):
    """Against h5py and NumPy: rows at both ends of the matrix and on both sides of every multiple of 2 GiB."""
    found = script("rows", folder / "m.h5", folder / "t.h5").result
    if found["bytes"] <= 1 << 32 or found["bytes"] != case.matrix_bytes:
        raise SystemExit(f"The matrix has {found['bytes']} bytes: too few for this test.")
    if found["least"] < LEAST_FIDELITY:
        raise SystemExit(f"A row of the large matrix is wrong: fidelity {found['least']}.")
    print(f"| rows {', '.join(str(r) for r in found['rows'])} read by h5py | fidelity at least {found['least']:.6f} | |", flush=True)


def _check_values(path, case):
    """Independent elements fill the Marchenko-Pastur interval (1967): s / rms s within 1 -+ sqrt(N / P), 2 % for the finite size."""
    with h5py.File(path) as file:
        values = file["singular_values"][:]
    scaled = values / (values**2).mean() ** 0.5
    spread = (case.modes / case.pixels) ** 0.5
    if len(values) != case.modes or abs(scaled[0] - 1 - spread) > 0.02 or abs(scaled[-1] - 1 + spread) > 0.02:
        raise SystemExit(f"{len(values)} singular values from {scaled[-1]} to {scaled[0]} are not those of independent elements.")
    print(f"| {len(values)} singular values | from {scaled[-1]:.4f} to {scaled[0]:.4f} of the r.m.s., predicted {1 - spread:.4f} to {1 + spread:.4f} | |")
