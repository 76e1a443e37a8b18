"""The door to numba: the decorator of every kernel, and a cache on disk that cannot go stale.

numba notices a change in the file of a cached function, but not in the file of a function it calls. Kernels here
stand in several files and call one another, so the cache folder carries a digest of all of them: any change
starts an empty folder. NUMBA_CACHE_DIR, where it is set, is where these folders stand.
"""

import hashlib
import os
import tempfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numba
from numba.core import types
from numba.extending import intrinsic

_HERE = Path(__file__).parent


def _digest() -> str:
    sources = [*sorted(_HERE.glob("*.py")), _HERE.parent / "constants.py"]
    text = b"".join(path.read_bytes() for path in sources)
    return hashlib.sha256(text + numba.__version__.encode()).hexdigest()[:16]


def _base_folder() -> Path:
    stated = os.environ.get("NUMBA_CACHE_DIR")
    if stated:
        return Path(stated)
    home = os.environ.get("XDG_CACHE_HOME") or os.path.join(os.path.expanduser("~"), ".cache")
    return Path(home) / "bothways"


def _folder() -> Path:
    for base in (_base_folder(), Path(tempfile.gettempdir()) / f"bothways-{os.getuid() if hasattr(os, 'getuid') else 0}"):
        folder = base / f"kernels-{_digest()}"
        try:
            folder.mkdir(parents=True, exist_ok=True)
        except OSError:
            continue
        if os.access(folder, os.W_OK):
            return folder
    return Path(tempfile.mkdtemp(prefix="bothways-"))


CACHE_FOLDER = _folder()
JIT = not numba.config.DISABLE_JIT


def compiled(function: Callable[..., Any]) -> Callable[..., Any]:
    """Compiles a kernel at its first call, cached in CACHE_FOLDER.

    No fastmath: sums keep their order and NaN stays NaN. Division by zero gives inf or NaN, as in NumPy.
    The GIL is released.
    """
    before = numba.config.CACHE_DIR
    numba.config.CACHE_DIR = str(CACHE_FOLDER)
    try:
        return numba.njit(cache=True, nogil=True, error_model="numpy")(function)
    finally:
        numba.config.CACHE_DIR = before


def in_cache() -> bool:
    """Whether kernels have been compiled on this machine before."""
    return not JIT or any(CACHE_FOLDER.rglob("*.nbi"))


@intrinsic
def _bits_to_float(typing_context, bits):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        return builder.bitcast(arguments[0], context.get_value_type(types.float64))

    return types.float64(types.int64), generate


@intrinsic
def _float_to_bits(typing_context, value):  # type: ignore[no-untyped-def]
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        return builder.bitcast(arguments[0], context.get_value_type(types.int64))

    return types.int64(types.float64), generate


if JIT:
    bits_to_float, float_to_bits = _bits_to_float, _float_to_bits
else:
    import struct

    def bits_to_float(bits: int) -> float:
        """The float64 of these 64 bits (interpreted kernels)."""
        return struct.unpack("<d", struct.pack("<Q", bits & 0xFFFFFFFFFFFFFFFF))[0]

    def float_to_bits(value: float) -> int:
        """The 64 bits of a float64 (interpreted kernels)."""
        return struct.unpack("<q", struct.pack("<d", value))[0]
