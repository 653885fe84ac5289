"""The same job in plain NumPy, SciPy and h5py, one stage a call, as a physicist with care for speed would write it.

Vectorised throughout; blocks of pixels where the temporaries then stay in the cache; the Hadamard product as two real BLAS
products (a complex one would do twice the work); the four-step formula instead of a general fit; Gram matrix and eigenvalues
in place of a full decomposition. Each stage prints the seconds of its parts as one line of JSON; the interpreter's start and
the imports are not in them.
"""

import argparse
import json
import time

import h5py
import numpy as np
import scipy.linalg

import reference_case
from reference_case import STEPS, Case

PIXELS_AT_ONCE = 4096
FRAMES_AT_ONCE = 64


class Clock:
    """Seconds of each named part."""

    def __init__(self):
        self.seconds = {}
        self._last = time.perf_counter()

    def lap(self, part):
        now = time.perf_counter()
        self.seconds[part] = self.seconds.get(part, 0.0) + now - self._last
        self._last = now


def hadamard(modes):
    """H with the 1/N of the inverse and the 1/4 of the four-step formula in it; single precision, powers of two, so exact."""
    return scipy.linalg.hadamard(modes, dtype=np.float32) / np.float32(STEPS * modes)


def demodulate(frames, first, last):
    """Real and imaginary part of 4 D = (I0 - I2) + i (I3 - I1) for a run of pixels, shape (mode, pixel)."""
    steps = frames.reshape(-1, STEPS, frames.shape[-1])[:, :, first:last]
    return (np.subtract(steps[:, 0], steps[:, 2], dtype=np.float32), np.subtract(steps[:, 3], steps[:, 1], dtype=np.float32))


def reconstruct(frames, matrix, clock):
    """Counts (frame, pixel) to the matrix (pixel, mode), both in memory."""
    product = hadamard(frames.shape[0] // STEPS)
    for first in range(0, matrix.shape[0], PIXELS_AT_ONCE):
        last = min(first + PIXELS_AT_ONCE, matrix.shape[0])
        re, im = demodulate(frames, first, last)
        clock.lap("demodulate")
        matrix[first:last].real = re.T @ product
        matrix[first:last].imag = im.T @ product
        clock.lap("hadamard")


def gram(matrix):
    """T^H T in double precision over blocks of single-precision products."""
    total = np.zeros((matrix.shape[1],) * 2, np.complex128)
    for first in range(0, matrix.shape[0], PIXELS_AT_ONCE):
        block = matrix[first : first + PIXELS_AT_ONCE]
        total += block.conj().T @ block
    return total


def singular_values(squares):
    return np.sqrt(np.maximum(squares[::-1], 0))


def read_frames(path):
    with h5py.File(path) as file:
        frames = file["frames"][:]
    return frames.reshape(frames.shape[0], -1)


def read_matrix(path):
    with h5py.File(path) as file:
        return file["matrix"][:]


def write(path, **datasets):
    with h5py.File(path, "w") as file:
        for name, values in datasets.items():
            file[name] = values


def stage_make(a):
    reference_case.make(a.path, Case(a.modes, a.side))
    return {}


def stage_kernel(a):
    """Demodulation and product alone, in memory that has been touched before; the median of the rounds after a warm-up."""
    frames = read_frames(a.path)
    matrix = np.zeros((frames.shape[1], frames.shape[0] // STEPS), np.complex64)
    seconds = []
    for _ in range(a.rounds + 1):
        start = time.perf_counter()
        reconstruct(frames, matrix, Clock())
        seconds.append(time.perf_counter() - start)
    return {"kernel": float(np.median(seconds[1:]))}


def stage_ingest(a):
    """Frames into another file, with mean and saturated share of each."""
    clock = Clock()
    with h5py.File(a.path) as source, h5py.File(a.output, "w") as target:
        frames = source["frames"]
        copy = target.create_dataset("frames", frames.shape, frames.dtype)
        mean, saturated = np.empty(len(frames)), np.empty(len(frames))
        for first in range(0, len(frames), FRAMES_AT_ONCE):
            block = frames[first : first + FRAMES_AT_ONCE]
            mean[first : first + FRAMES_AT_ONCE] = block.mean(axis=(1, 2))
            saturated[first : first + FRAMES_AT_ONCE] = (block == 65535).mean(axis=(1, 2))
            copy[first : first + FRAMES_AT_ONCE] = block
        target["mean_count"], target["saturated_fraction"] = mean, saturated
    clock.lap("ingest")
    return clock.seconds


def stage_reconstruct(a):
    """File to file."""
    clock = Clock()
    frames = read_frames(a.path)
    clock.lap("read")
    matrix = np.empty((frames.shape[1], frames.shape[0] // STEPS), np.complex64)
    reconstruct(frames, matrix, clock)
    write(a.output, matrix=matrix)
    clock.lap("write")
    return clock.seconds


def stage_values(a):
    """Singular values of a stored matrix."""
    clock = Clock()
    matrix = read_matrix(a.path)
    clock.lap("read")
    total = gram(matrix)
    clock.lap("gram")
    values = singular_values(scipy.linalg.eigvalsh(total, overwrite_a=True, check_finite=False))
    clock.lap("eigenvalues")
    write(a.output, singular_values=values)
    clock.lap("write")
    return clock.seconds


def stage_vectors(a):
    """All singular values and vectors of a stored matrix: V from the Gram matrix, U = T V / sigma."""
    clock = Clock()
    matrix = read_matrix(a.path)
    clock.lap("read")
    total = gram(matrix)
    clock.lap("gram")
    squares, vectors = np.linalg.eigh(total)
    values, vectors = singular_values(squares), np.ascontiguousarray(vectors[:, ::-1]).astype(np.complex64)
    clock.lap("eigenvectors")
    output = matrix @ (vectors / values.astype(np.float32))
    clock.lap("output vectors")
    write(a.output, singular_values=values, input_modes=vectors, output_modes=output)
    clock.lap("write")
    return clock.seconds


def stage_job(a):
    """The whole job in one process, for its peak memory: frames to matrix file and singular values."""
    clock = Clock()
    frames = read_frames(a.path)
    matrix = np.empty((frames.shape[1], frames.shape[0] // STEPS), np.complex64)
    reconstruct(frames, matrix, clock)
    del frames
    write(a.output, matrix=matrix)
    values = singular_values(scipy.linalg.eigvalsh(gram(matrix), overwrite_a=True, check_finite=False))
    with h5py.File(a.output, "a") as file:
        file["singular_values"] = values
    return {}


def stage_fidelity(a):
    """Mean and least fidelity of the rows of two matrix files, and the relative difference of their elements."""
    with h5py.File(a.path) as one, h5py.File(a.output) as two:
        ours, theirs = one["matrix"], two["matrix"]
        valid = int(one["pixels/valid"][:].sum())
        fidelity, apart, size = [], 0.0, 0.0
        for first in range(0, ours.shape[0], PIXELS_AT_ONCE):
            x, y = ours[first : first + PIXELS_AT_ONCE], theirs[first : first + PIXELS_AT_ONCE]
            overlap = np.abs(np.einsum("pn,pn->p", x, y.conj())) ** 2
            fidelity.append(overlap / (np.linalg.norm(x, axis=1) ** 2 * np.linalg.norm(y, axis=1) ** 2))
            apart += np.linalg.norm(x - y) ** 2
            size += np.linalg.norm(y) ** 2
    all_rows = np.concatenate(fidelity)
    return {"mean": float(all_rows.mean()), "least": float(all_rows.min()), "valid": valid, "rows": len(all_rows),
            "difference": float(np.sqrt(apart / size))}


def stage_sigma(a):
    """The largest difference of two files' singular values, relative to each value."""
    with h5py.File(a.path) as one, h5py.File(a.output) as two:
        ours, theirs = one["singular_values"][:], two["singular_values"][:]
    count = min(len(ours), len(theirs))
    return {"count": count, "difference": float(np.max(np.abs(ours[:count] - theirs[:count]) / theirs[:count]))}


def stage_rows(a):
    """Rows of a large matrix file against the frames of its measurement file, at the places where 32-bit offsets would break.

    The first and last rows and those around every multiple of 2 GiB, each row's own frames demodulated here.
    """
    with h5py.File(a.path) as measured, h5py.File(a.output) as stored:
        frames, matrix = measured["frames/counts"], stored["matrix"]
        pixels, modes = matrix.shape
        edges = {0, 1, pixels - 2, pixels - 1}
        for boundary in range(2 << 30, 8 * pixels * modes, 2 << 30):
            edges |= {boundary // (8 * modes) + k for k in (-1, 0, 1)}
        product, fidelity = hadamard(modes), []
        for row in sorted(edges):
            y, x = divmod(row, frames.shape[2])
            re, im = demodulate(frames[:, y, x].reshape(-1, 1), 0, 1)
            expected = re[:, 0] @ product + 1j * (im[:, 0] @ product)
            found = matrix[row]
            fidelity.append(abs(np.vdot(found, expected)) ** 2 / (np.linalg.norm(found) ** 2 * np.linalg.norm(expected) ** 2))
    return {"rows": sorted(int(e) for e in edges), "least": float(min(fidelity)), "bytes": 8 * pixels * modes}


def main():
    stages = {name[6:]: stage for name, stage in globals().items() if name.startswith("stage_")}
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("stage", choices=stages)
    parser.add_argument("path")
    parser.add_argument("output", nargs="?")
    parser.add_argument("--modes", type=int)
    parser.add_argument("--side", type=int)
    parser.add_argument("--rounds", type=int, default=3)
    arguments = parser.parse_args()
    print(json.dumps(stages[arguments.stage](arguments)))


if __name__ == "__main__":
    main()
