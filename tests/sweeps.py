"""Grids for tests of sweeps, small and quick; comparing of results; sweeps in processes of their own."""

import os
import signal
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np

from bothways import Grid, Sweep, build_grid


def grid_of(count: int = 8, mechanism: str = "hydrogen-oxygen", until: float = 2e-5, **grid: Any) -> Grid:
    """Hydrogen and air over temperature and pressure, too short to ignite in every case."""
    return build_grid({
        "grid": {"title": "a test"} | grid, "case": {"mechanism": mechanism}, "until": {"time": until},
        "start": {"fuel": {"H2": 1}, "oxidiser": {"O2": 1, "N2": 3.76}, "equivalence_ratio": 0.8},
        "samples": {"count": count, "seed": 1, "start": {
            "temperature": {"from": 1000.0, "to": 2000.0, "spacing": "reciprocal"},
            "pressure": {"from": "1 bar", "to": "20 bar", "spacing": "logarithmic"}}}})


def assert_same(found: Sweep, expected: Sweep) -> None:
    """Every value equal to the bit but the seconds; courses too."""
    assert found.variables == expected.variables and found.species == expected.species
    assert found.digest == expected.digest
    for name in found.variables.keys() - {"seconds"}:
        np.testing.assert_array_equal(found[name], expected[name], err_msg=name, strict=True)
    if "course_steps" in found:
        for k in range(len(found)):
            one, other = found.course(k), expected.course(k)
            for name in one:
                np.testing.assert_array_equal(one[name], other[name], err_msg=name, strict=True)


def in_a_process(action: Callable[[], Any], killed_when: Callable[[], bool] | None = None) -> int:
    """Runs an action in a copy of this process, whose kernels are ready; its exit status, minus the signal that ended it.

    0: it returned; 1: it raised. killed_when : asked again and again; once true the copy is killed (SIGKILL).
    """
    child = os.fork()
    if child == 0:
        try:
            action()
            os._exit(0)
        except BaseException:
            os._exit(1)
    ended, status = 0, 0
    while killed_when is not None and not ended:
        if killed_when():
            os.kill(child, signal.SIGKILL)
            break
        time.sleep(0.0005)
        ended, status = os.waitpid(child, os.WNOHANG)
    if not ended:
        status = os.waitpid(child, 0)[1]
    return -os.WTERMSIG(status) if os.WIFSIGNALED(status) else os.WEXITSTATUS(status)


def size_of(path: Path) -> int:
    return path.stat().st_size if path.exists() else 0


def record_of(output: Path) -> Path:
    return output.with_name(output.name + ".unfinished")
