"""The first start on a machine: kernels compiled in two processes side by side, each its own share of them.

What one has compiled the other finds in the cache on disk. No kernel is in both shares, so neither waits for the other, nor do
they write the same files. The other process is this module, started as a program of its own: what the user's program holds
does not matter to it. Whatever it leaves undone, because it failed or could not be started, is compiled here when it is needed.
"""

import os
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
from numba import carray

from .apart import fill
from .compiled import JIT, callback, in_cache
from .integrate import OWN_METHODS, CompiledSystem, Problem, Resolvent, warm_up
from .kernels import callbacks, equations, judge, molar

_LAST = ("equations.produce", "judge.judge", "equations.bordered_jacobian", "equations.columns", "callbacks.J_of_bordered")

PATIENCE = 60.0
"""The other process is given this [s], and twice what the share of this one took, to end after it."""


def compiled_before() -> bool:
    """Whether what every run needs was compiled on this machine before, to the end."""
    return all(in_cache(name) for name in _LAST)


def side_by_side(method: str) -> None:
    """Compiles what a run with this method needs, into the cache, the integrators and J in another process."""
    other, began = _other_process(method), time.perf_counter()
    try:
        _own_share()
        if other is not None:
            other.wait(PATIENCE + 2.0 * (time.perf_counter() - began))
    except subprocess.TimeoutExpired:
        pass
    finally:
        if other is not None and other.poll() is None:
            other.kill()
            other.wait()


def _other_process(method: str) -> subprocess.Popen | None:
    """The other process at work; None where there is one core only, or no interpreter to start."""
    if not JIT or _cores() < 2 or not Path(sys.executable or "").name.startswith("python"):
        return None
    here = str(Path(__file__).resolve().parents[1])
    found = {**os.environ, "PYTHONPATH": os.pathsep.join(filter(None, [here, *map(str, sys.path)]))}
    command = [sys.executable, "-P", "-m", f"{__package__}.{Path(__file__).stem}", method]
    try:
        return subprocess.Popen(command, env=found, stdin=subprocess.DEVNULL, stdout=subprocess.DEVNULL,
                                stderr=subprocess.DEVNULL)
    except OSError:
        return None


def _cores() -> int:
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


def _own_share() -> None:
    """f, the judge, and what Python calls."""
    v, ints, square = np.empty(1), np.empty(1, dtype=np.uint32), np.empty((1, 1))
    fill(equations.produce)
    _ = judge.judge.address, callbacks.f_of_bordered.address
    arguments = v, v, ints, v, v
    equations.rates_of_change.prepare(*arguments, v)
    equations.jacobian.prepare(*arguments, v, square)
    equations.bordered_jacobian.prepare(*arguments, v)
    molar.molar_functions.prepare(1.0, 0, ints, v, v, v, v, v)
    molar.molar_functions_at.prepare(v, ints, v, square, square, square, square)


def _other_share(method: str) -> None:
    """J, the method, and what is solved between its steps."""
    fill(equations.columns)
    _ = callbacks.J_of_bordered.address
    if method in OWN_METHODS:
        warm_up(_decay(), method)
    solve = Resolvent((np.zeros(1, dtype=np.int32), np.array([0, 1], dtype=np.int32)), np.ones(1), 0).of(np.ones(1), 0.1)
    solve(np.ones(1))


def _decay() -> Problem:
    """y' = -y, which any method can be tried on."""
    start, places = np.ones(1), np.zeros(1, dtype=np.int64)
    pattern = np.zeros(1, dtype=np.int32), np.array([0, 1], dtype=np.int32)
    system = CompiledSystem(_f.address, _J.address, 0, np.zeros(1, dtype=np.int64), pattern, np.ones(1), 0, places, start)
    return Problem(lambda t, y: -y, lambda t, y: -np.ones((1, 1)), start, 1.0, 1e-6, np.ones(1), (), system)


@callback
def _f(y, out, context):  # type: ignore[no-untyped-def]
    carray(out, (1,))[0] = -carray(y, (1,))[0]
    return 1


@callback
def _J(y, out, context):  # type: ignore[no-untyped-def]
    carray(out, (1,))[0] = -1.0
    return 1


if __name__ == "__main__":
    _other_share(sys.argv[1])
