"""The door to numba: the decorators of every kernel, and a cache on disk that cannot go stale.

numba notices a change in the file of a cached function, but not in the file of a function it calls. Kernels here
stand in several files and call one another, so the cache folder carries a digest of all of them: any change
starts an empty folder. NUMBA_CACHE_DIR, where it is set, is where these folders stand.
"""

import hashlib
import os
import tempfile
import threading
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from functools import cached_property, update_wrapper
from pathlib import Path
from typing import Any

import numba
from llvmlite import ir
from numba.core import types
from numba.extending import intrinsic

_HERE = Path(__file__).parent
_SOURCES = ("constants.py", "compiled.py", "apart.py", "sums.py", "lanes.py", "kernels/*.py", "integrate/*.py")


def _digest() -> str:
    text = b"".join(path.read_bytes() for pattern in _SOURCES for path in sorted(_HERE.glob(pattern)))
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


_HOW: dict[str, Any] = {"nogil": True, "error_model": "numpy"}
"""No fastmath: sums keep their order and NaN stays NaN. Division by zero gives inf or NaN, as in NumPy. The GIL is released."""


class Kernel:
    """A function that kernels and Python call; compiled for either when it is first called from there.

    For Python there is code that unpacks arrays, and the cache on disk. For kernels there is neither: what they call becomes
    a part of them, and what Python unpacks costs more to compile than most kernels do.
    """

    def __init__(self, function: Callable[..., Any]) -> None:
        update_wrapper(self, function)
        self._function = function

    @cached_property
    def _for_python(self) -> Any:
        with in_cache_folder():
            return numba.njit(cache=True, **_HOW)(self._function)

    @cached_property
    def _for_kernels(self) -> Any:
        return numba.njit(no_cpython_wrapper=True, no_cfunc_wrapper=True, **_HOW)(self._function)

    def __call__(self, *arguments: Any) -> Any:
        return self._for_python(*arguments)

    def prepare(self, *arguments: Any) -> None:
        """Compiles it, or fetches it from the cache, for arguments of these types, without calling it."""
        self._for_python.compile(tuple(map(numba.typeof, arguments)))

    @property
    def _numba_type_(self) -> Any:
        """What numba takes it for in a kernel."""
        return self._for_kernels._numba_type_

_ONE_AT_A_TIME = threading.RLock()
"""The place of the cache is one setting for the whole process."""


def compiled(function: Callable[..., Any]) -> Any:
    """Compiles a kernel at its first call, cached in CACHE_FOLDER."""
    return Kernel(function) if JIT else function


REFUSED, STAND, CROSSED = range(3)
"""What the judge of a step may answer, see integrate/interface.py."""


class callback:
    """A function of three pointers, (float64*, float64*, int64*) -> int64, whose `address` `call` takes.

    Passing an address as a number keeps caller and callee apart: the caller is compiled and cached once, whatever it
    calls. (A function passed as an argument would miss numba's cache in every process.) Compiled when first asked for.
    """

    def __init__(self, function: Callable[..., Any]) -> None:
        self._function = function
        self.__doc__ = function.__doc__

    @cached_property
    def _compiled(self) -> Any:
        pointers = types.CPointer(types.float64), types.CPointer(types.float64), types.CPointer(types.int64)
        with in_cache_folder():
            return numba.cfunc(types.int64(*pointers), cache=True, nopython=True, error_model="numpy")(self._function)

    @property
    def address(self) -> int:
        """Where the compiled function starts."""
        return int(self._compiled.address)


@contextmanager
def in_cache_folder() -> Iterator[None]:
    with _ONE_AT_A_TIME:
        before = numba.config.CACHE_DIR
        numba.config.CACHE_DIR = str(CACHE_FOLDER)
        try:
            yield
        finally:
            numba.config.CACHE_DIR = before


def in_cache(name: str = "") -> bool:
    """Whether kernels with this in their name have been compiled on this machine before."""
    return not JIT or any(name in path.name for path in CACHE_FOLDER.rglob("*.nbi"))


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


@intrinsic
def call(typing_context, address, given, result, context_array):  # type: ignore[no-untyped-def]
    """Calls the `callback` at an address with the data of three arrays; returns its int64."""
    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        arrays = zip(signature.args[1:], arguments[1:], strict=True)
        pointers = [builder.bitcast(context.make_array(kind)(context, builder, value).data, ir.IntType(8).as_pointer())
                    for kind, value in arrays]
        function = ir.FunctionType(ir.IntType(64), [p.type for p in pointers])
        return builder.call(builder.inttoptr(arguments[0], function.as_pointer()), pointers)

    return types.int64(types.int64, given, result, context_array), generate


def _part_of(context, builder, array, kind, first, last):  # type: ignore[no-untyped-def]
    """The value of a one-dimensional view of an array from an index up to another: nothing asked, nothing counted."""
    base = context.make_array(kind)(context, builder, array)
    made = context.make_array(kind)(context, builder)
    width = context.get_constant(types.intp, context.get_abi_sizeof(context.get_data_type(kind.dtype)))
    context.populate_array(made, data=builder.gep(base.data, [first]), shape=(builder.sub(last, first),), strides=(width,),
                           itemsize=width, meminfo=None, parent=None)
    return made._getvalue()


@intrinsic
def _span(typing_context, array, first, last):  # type: ignore[no-untyped-def]
    result = array.copy(readonly=False)

    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        ends = [context.cast(builder, value, kind, types.intp)
                for value, kind in zip(arguments[1:], signature.args[1:], strict=True)]
        return _part_of(context, builder, arguments[0], signature.args[0], *ends)

    return result(array, first, last), generate


@intrinsic
def _span_at(typing_context, array, offsets, slot):  # type: ignore[no-untyped-def]
    result = array.copy(readonly=False)

    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        kind, offset_kind, slot_kind = signature.args
        offsets = context.make_array(offset_kind)(context, builder, arguments[1]).data
        place = context.cast(builder, arguments[2], slot_kind, types.intp)
        places = (place, builder.add(place, context.get_constant(types.intp, 1)))
        ends = [context.cast(builder, builder.load(builder.gep(offsets, [k])), offset_kind.dtype, types.intp) for k in places]
        return _part_of(context, builder, arguments[0], kind, *ends)

    return result(array, offsets, slot), generate


@intrinsic
def _fours(typing_context, array, first, last):  # type: ignore[no-untyped-def]
    result = array.copy(ndim=2, readonly=False)

    def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
        base = context.make_array(signature.args[0])(context, builder, arguments[0])
        first, last = (context.cast(builder, value, kind, types.intp)
                       for value, kind in zip(arguments[1:], signature.args[1:], strict=True))
        made = context.make_array(result)(context, builder)
        rows = builder.ashr(builder.sub(last, first), context.get_constant(types.intp, 2))
        width = context.get_abi_sizeof(context.get_data_type(result.dtype))
        one, four = (context.get_constant(types.intp, k * width) for k in (1, 4))
        context.populate_array(made, data=builder.gep(base.data, [first]), shape=(rows, context.get_constant(types.intp, 4)),
                               strides=(four, one), itemsize=one, meminfo=None, parent=None)
        return made._getvalue()

    return result(array, first, last), generate


def _pointer_to(item):  # type: ignore[no-untyped-def]
    @intrinsic
    def pointer(typing_context, address):  # type: ignore[no-untyped-def]
        result = types.CPointer(item)

        def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
            return builder.inttoptr(arguments[0], context.get_value_type(result))

        return result(types.int64), generate

    return pointer


float64_pointer, uint32_pointer = _pointer_to(types.float64), _pointer_to(types.uint32)
"""An address as a pointer to float64 or uint32, for numba's carray."""

if JIT:
    bits_to_float, float_to_bits, span, span_at, fours = _bits_to_float, _float_to_bits, _span, _span_at, _fours
else:
    import struct

    def span(array, first, last):  # type: ignore[no-untyped-def]
        """array[first:last] (interpreted kernels)."""
        return array[first:last]

    def span_at(array, offsets, slot):  # type: ignore[no-untyped-def]
        """array[offsets[slot]:offsets[slot + 1]] (interpreted kernels)."""
        return array[offsets[slot] : offsets[slot + 1]]

    def fours(array, first, last):  # type: ignore[no-untyped-def]
        """array[first:last] by whole fours, (…, 4) (interpreted kernels)."""
        return array[first : first + (int(last) - int(first)) // 4 * 4].reshape(-1, 4)

    def bits_to_float(bits: int) -> float:
        """The float64 of these 64 bits (interpreted kernels)."""
        return struct.unpack("<d", struct.pack("<Q", bits & 0xFFFFFFFFFFFFFFFF))[0]

    def float_to_bits(value: float) -> int:
        """The 64 bits of a float64 (interpreted kernels)."""
        return struct.unpack("<q", struct.pack("<d", value))[0]
