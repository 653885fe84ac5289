"""The invented measurement of the comparison: frames of a medium of independent Gaussian elements, made with a fixed seed."""

import json
import pathlib
from dataclasses import dataclass

import h5py
import numpy as np

STEPS = 4
REFERENCE_COUNTS = 8000.0
SIGNAL_COUNTS = 1500.0
MODES_AT_ONCE = 16


@dataclass(frozen=True)
class Case:
    """How large the measurement is."""

    modes: int
    """Hadamard modes N, a power of two."""
    side: int
    """The camera region is side x side pixels."""
    seed: int = 20260101

    @property
    def pixels(self):
        return self.side * self.side

    @property
    def frame_bytes(self):
        return 2 * STEPS * self.modes * self.pixels

    @property
    def matrix_bytes(self):
        return 8 * self.modes * self.pixels

    def __str__(self):
        return f"{self.modes} modes x {STEPS} steps, {self.side} x {self.side} pixels"


def make(folder, case):
    """Writes measurement.json and frames.h5.

    I = |R + E exp(i delta)|^2 with delta = 0, pi/2, pi, 3 pi/2, |R|^2 = 8,000 counts, E[k, p] complex Gaussian of mean square
    1,500 counts, rounded to whole counts; no noise besides the rounding, no drift. As the patterns are orthogonal, E drawn so is
    the field of a matrix T = E H / N of independent Gaussian elements; T itself is never needed here.
    """
    folder = pathlib.Path(folder)
    folder.mkdir(parents=True, exist_ok=True)
    _describe(folder, case)
    with h5py.File(folder / "frames.h5", "w") as file:
        frames = file.create_dataset("frames", (STEPS * case.modes, case.side, case.side), np.uint16)
        for first in range(0, case.modes, MODES_AT_ONCE):
            count = min(MODES_AT_ONCE, case.modes - first)
            block = _frames(case, first, count)
            frames[STEPS * first : STEPS * (first + count)] = block.reshape(-1, case.side, case.side)


def _frames(case, first, count):
    random = np.random.default_rng([case.seed, first])
    parts = random.standard_normal((count, 2, case.pixels), np.float32) * np.float32(np.sqrt(SIGNAL_COUNTS / 2))
    re, im = parts[:, 0], parts[:, 1]
    background = REFERENCE_COUNTS + re * re + im * im
    swing = 2 * np.float32(np.sqrt(REFERENCE_COUNTS))
    # |R + E e^{i delta}|^2 = R^2 + |E|^2 + 2 R Re(E e^{i delta})
    steps = [background + swing * part for part in (re, -im, -re, im)]
    return np.clip(np.rint(np.stack(steps, axis=1)), 0, 65535).astype(np.uint16)


def _describe(folder, case):
    columns = 1 << ((case.modes.bit_length() - 1 + 1) // 2)
    (folder / "measurement.json").write_text(json.dumps({
        "format": "tm-measurement",
        "version": 1,
        "title": "invented medium of independent Gaussian elements, for comparisons",
        "wavelength_nm": 633.0,
        "camera": {"width": case.side, "height": case.side, "bit_depth": 16},
        "frames": {"kind": "hdf5", "path": "frames.h5", "dataset": "/frames"},
        "schedule": {"order": "mode-major", "steps": STEPS},
        "modes": {"basis": "hadamard", "count": case.modes, "grid": [case.modes // columns, columns]},
        "modulator": {"kind": "phase", "width": 1024, "height": 1024,
                      "region": {"x": 0, "y": 0, "width": 1024, "height": 1024}},
    }, indent=2))
