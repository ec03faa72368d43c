"""Arrays from NumPy files or MATLAB files, never running what a file brings along."""

from __future__ import annotations

import io
import struct
import zipfile
import zlib

import numpy as np
import scipy.io
from numpy.typing import NDArray
from scipy.sparse import csc_array, csc_matrix

from socibrain.errors import Faults

Array = NDArray[np.float64]

SUFFIXES = (".npy", ".npz", ".mat")
HDF5 = b"\x89HDF\r\n\x1a\n"
BROKEN = (
    ValueError, TypeError, OSError, EOFError, LookupError, OverflowError, MemoryError, SyntaxError,
    struct.error, zipfile.BadZipFile, zlib.error, scipy.io.matlab.MatReadError,
)  # fmt: skip
"""What the readers raise on files that are cut short, or are something else."""


def read_array(content: bytes, suffix: str, variable: str | None, shown: str, faults: Faults) -> Array | None:
    """The one two-dimensional array of numbers in a file, or the one called ``variable``.

    Returns None when there is no such array; the reason is then in ``faults``.
    """
    if suffix == ".mat" and (content.startswith(HDF5) or b"MATLAB 7.3" in content[:128]):
        faults.add(shown, "", "newer-format", "is a MATLAB 7.3 file (HDF5), which is not read",
                   "save it in MATLAB with the option '-v7'")  # fmt: skip
        return None
    try:
        arrays = _matlab(content) if suffix == ".mat" else _numpy(content)
    except BROKEN as error:
        if "allow_pickle" in str(error):
            faults.add(shown, "", "pickle", "holds pickled objects, which may run foreign code: not opened",
                       "save a plain array of numbers")  # fmt: skip
        else:
            faults.add(shown, "", "truncated", f"is cut short or is no {suffix} file",
                       "save or copy it again")  # fmt: skip
        return None
    name = _chosen(arrays, variable, shown, faults)
    return None if name is None else _numbers(arrays[name], name, shown, faults)


def _numpy(content: bytes) -> dict[str, object]:
    loaded = np.load(io.BytesIO(content), allow_pickle=False)
    return {"": loaded} if isinstance(loaded, np.ndarray) else {name: loaded[name] for name in loaded.files}


def _matlab(content: bytes) -> dict[str, object]:
    loaded = scipy.io.loadmat(io.BytesIO(content))  # type: ignore[arg-type]
    return {
        name: array.toarray() if isinstance(array, csc_matrix | csc_array) else array
        for name, array in loaded.items()
        if not name.startswith("__")
    }


def _chosen(arrays: dict[str, object], variable: str | None, shown: str, faults: Faults) -> str | None:
    """The name of the array that is meant."""
    if "" in arrays:
        return ""
    inside = ", ".join(f"'{name}' {np.shape(array)}" for name, array in arrays.items()) or "nothing"  # type: ignore[call-overload]
    if variable is not None:
        if variable not in arrays:
            faults.add(shown, "", "no-variable", f"holds no array '{variable}' but {inside}",
                       "correct `variable:` in the study file")  # fmt: skip
            return None
        return variable
    flat = [name for name, array in arrays.items() if min(np.shape(array), default=0) > 1]  # type: ignore[call-overload]
    if len(flat) != 1:
        found = "several matrices" if flat else "no matrix"
        faults.add(shown, "", "no-variable", f"holds {found}: {inside}",
                   "say which is meant with `variable:` in the study file")  # fmt: skip
        return None
    return flat[0]


def _numbers(array: object, name: str, shown: str, faults: Faults) -> Array | None:
    called = f"array '{name}'" if name else "the array"
    if not isinstance(array, np.ndarray) or array.dtype.kind not in "biuf":
        kind = array.dtype.name if isinstance(array, np.ndarray) else type(array).__name__
        faults.add(shown, "", "not-numbers", f"{called} holds {kind}, not real numbers",
                   "save a plain array of numbers")  # fmt: skip
        return None
    return array.astype(np.float64)
