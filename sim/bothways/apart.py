"""Kernels that are compiled once, apart from whoever calls them: a caller holds a jump to one and no copy of it.

What a compiled function calls becomes a part of it, optimised and made into machine code once more, and is read again from
the cache with each function that holds it. For the few kernels that are most of the work of f and J this is too dear, and
next to what they do a jump costs nothing.

The jump goes by way of a cell of memory, which compiled code knows by name, as its place differs from process to process. A
cell is filled when its kernel is first needed.
"""

import _thread
import ctypes
import os
import threading
import traceback
from collections.abc import Callable
from typing import Any, ClassVar

import llvmlite.binding
import numba
from llvmlite import ir
from numba.core import cgutils, types
from numba.extending import intrinsic

from .compiled import JIT, in_cache_folder

_FLOATS, _INTS = types.float64[::1], types.uint32[::1]
_TAKES = (_FLOATS, types.float64, types.float64, _FLOATS, _INTS, _FLOATS, _FLOATS)
_SIGNATURE = types.float64(*_TAKES)


class Apart:
    """A kernel (state, border, T, vessel, ints, floats, work) -> float64 that is compiled once; the arrays are float64 but
    for ints (uint32). It can be called from kernels."""

    every: ClassVar[list["Apart"]] = []

    def __init__(self, function: Callable[..., float]) -> None:
        self._function, self.__doc__, self._lock = function, function.__doc__, threading.RLock()
        self._cell, self._filler = ctypes.c_void_p(), ctypes.CFUNCTYPE(None)(self._fill_for_kernel)
        self._symbol = f"bothways_{function.__module__}_{function.__qualname__}".replace(".", "_")
        llvmlite.binding.add_symbol(self._symbol, ctypes.addressof(self._cell))
        llvmlite.binding.add_symbol(f"{self._symbol}_fill", ctypes.cast(self._filler, ctypes.c_void_p).value)
        self.jump = _jump_by(self._symbol)
        Apart.every.append(self)

    def fill(self) -> None:
        """Compiles the kernel, or fetches it from the cache, unless this process has it."""
        with self._lock, in_cache_folder():
            if not self._cell.value:
                self._made = numba.cfunc(_SIGNATURE, cache=True, error_model="numpy")(self._function)
                self._cell.value = self._made.address

    def _fill_for_kernel(self) -> None:
        """Called by compiled code that found the cell empty. It cannot be told of a failure: Ctrl-C is kept for later."""
        while not self._cell.value:
            try:
                self.fill()
            except KeyboardInterrupt:
                _thread.interrupt_main()
            except BaseException:
                traceback.print_exc()
                os.abort()


def _jump_by(symbol: str) -> Any:
    """The numba function that calls what the cell of this name holds."""
    @intrinsic
    def jump(typing_context, state, border, T, vessel, ints, floats, work):  # type: ignore[no-untyped-def]
        def generate(context, builder, signature, arguments):  # type: ignore[no-untyped-def]
            module = builder.module
            cell = module.globals.get(symbol) or ir.GlobalVariable(module, cgutils.voidptr_t, symbol)
            filler = cgutils.get_or_insert_function(module, ir.FunctionType(ir.VoidType(), []), f"{symbol}_fill")
            with builder.if_then(cgutils.is_null(builder, builder.load(cell)), likely=False):
                builder.call(filler, [])
            kind = ir.FunctionType(context.get_value_type(types.float64), [value.type for value in arguments])
            return builder.call(builder.bitcast(builder.load(cell), kind.as_pointer()), arguments)

        return _SIGNATURE, generate

    return jump


def apart(function: Callable[..., Any]) -> Callable[..., Any]:
    """Makes a kernel one that is compiled apart, for kernels alone to call; see `Apart`."""
    return Apart(function).jump if JIT else function


def fill(*kernels: Any) -> None:
    """Compiles, or fetches, these kernels that stand apart (all, if none is named) now: Ctrl-C ends this, and no run's time
    holds it."""
    for kernel in Apart.every:
        if not kernels or kernel.jump in kernels:
            kernel.fill()
