"""What a worker does: a case of a grid by its number. The grid goes once to each process, the task is a few bytes."""

import threading

from ..batch import prepare
from ..grid import Grid, unpacked
from ..outcome import outcome
from .packing import packed

_grids: dict[str, Grid] = {}
_lock = threading.Lock()
_MOST = 4
hurry = threading.Event()
"""Set where the cases in hand of this process shall be dropped: somebody does not want to wait."""


def know(grid: Grid) -> None:
    """Keeps a grid for the tasks of this process."""
    with _lock:
        while len(_grids) >= _MOST and grid.digest not in _grids:
            del _grids[next(iter(_grids))]
        _grids[grid.digest] = grid


def work(digest: str, k: int, whole: bytes | None = None) -> bytes | None:
    """Runs case k of the grid with this digest; its packed row. None if this process does not know the grid.

    whole : the packed grid, for a process that does not know it. Only Ctrl-C is raised: see `outcome`.
    """
    grid = _grids.get(digest)
    if grid is None:
        if whole is None:
            return None
        grid = _learnt(digest, whole)
    return packed(k, _row(grid, k))


def _learnt(digest: str, whole: bytes) -> Grid:
    """The grid, built once though several threads may ask for it at once, and its kernels made ready."""
    with _lock:
        known = _grids.get(digest)
    if known is None:
        known = unpacked(whole)
        if known.digest != digest:
            raise RuntimeError("the grid arrived altered")
        prepare(known.case(0))
        know(known)
    return known


def _row(grid: Grid, k: int) -> dict:
    case = grid.case(k)
    peaks = [name for name in grid.peaks if name in case.mechanism.names]
    return outcome(case, peaks, grid.trajectories, _stop)


def _stop(steps: int, time: float, temperature: float) -> None:
    if hurry.is_set():
        raise KeyboardInterrupt


