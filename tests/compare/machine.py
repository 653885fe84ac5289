"""What both sides ran on, in general terms."""

import contextlib
import io
import os
import pathlib
import platform

import h5py
import numpy as np
import scipy


def describe():
    """Processors, vector instructions, versions, and the variables that steer OpenBLAS on both sides alike."""
    lines = [
        f"{os.cpu_count()} processors ({platform.machine()}, {_vector_instructions()}), {_memory_gib():.0f} GiB of memory.",
        f"Python {platform.python_version()}, NumPy {np.__version__} with {_blas()}, SciPy {scipy.__version__}, h5py {h5py.__version__}.",
        f"Environment of both sides: {_variables() or 'no variable for OpenBLAS or threads is set'}.",
        load(),
    ]
    return "\n".join(lines)


def load():
    return "Load average of the last minute: {:.1f}.".format(os.getloadavg()[0])


def _vector_instructions():
    info = pathlib.Path("/proc/cpuinfo")
    flags = info.read_text().split() if info.exists() else []
    return ", ".join(name for name, flag in (("AVX2", "avx2"), ("AVX-512", "avx512f")) if flag in flags) or "no AVX2"


def _memory_gib():
    return os.sysconf("SC_PAGE_SIZE") * os.sysconf("SC_PHYS_PAGES") / 2**30


def _blas():
    """The library that NumPy has really loaded, which the build's own description does not tell."""
    maps = pathlib.Path("/proc/self/maps")
    np.ones((2, 2)) @ np.ones((2, 2))
    loaded = maps.read_text() if maps.exists() else ""
    names = {pathlib.Path(line.split()[-1]).name for line in loaded.splitlines() if "blas" in line.lower()}
    if names:
        return ", ".join(sorted(names))
    with contextlib.redirect_stdout(io.StringIO()) as text:
        np.show_config()
    return "OpenBLAS" if "openblas" in text.getvalue() else "an unknown BLAS"


def _variables():
    wanted = ("OPENBLAS", "OMP_", "GOTO_", "DOTNET_Enable", "DOTNET_Tiered", "DOTNET_gc", "TMLAB_")
    return ", ".join(f"{name}={value}" for name, value in sorted(os.environ.items()) if name.startswith(wanted))
