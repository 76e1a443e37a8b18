"""Runs the cases of a grid through an executor, keeping each as soon as it is finished."""

import contextlib
import os
from collections.abc import Callable, Iterator
from concurrent.futures import FIRST_COMPLETED, CancelledError, Executor, Future, ThreadPoolExecutor, wait
from pathlib import Path

import numpy as np

from .. import hdf5
from ..batch import prepare
from ..errors import BothwaysError, InputError, SolverError
from ..grid import Grid, read_grid
from ..outfile import StrPath, check_writable
from ..version import program_version
from .record import Record
from .results import KIND, Sweep, read_sweep, write_results
from .work import hurry, know, work

Told = Callable[[int, int], None]
WINDOW = 256
"""Tasks handed to an executor of unknown size at a time: memory does not grow with the number of cases."""
_PATIENCE = 0.2
"""Seconds between looks at what is asked for besides: progress, Ctrl-C."""


def sweep(grid: Grid | StrPath, output: StrPath | None = None, executor: Executor | None = None,
          workers: int | None = None, replace: bool = False, told: Told | None = None) -> Sweep:
    """Runs all cases of a grid and returns their results, which stand in the file `output`.

    Parameters
    ----------
    grid : a grid, its file or the name of a bundled one.
    output : the file of results; by default the one the grid names.
    executor : any of `concurrent.futures` or made like them, such as `Client.get_executor()` of dask.distributed; it is
        not shut down. By default threads on the cores of this machine, or so many `workers`: the kernels release the GIL.
    replace : whether a file that exists may be overwritten.
    told : called with (cases finished, cases in all), also while nothing happens; may raise KeyboardInterrupt to end here.

    Every case is built as a check before any is run. Finished cases stand in a record beside `output` until all are done;
    the same call goes on from there, and the results are the same to the bit but for the seconds. A case that fails is a
    row with its reason. Raises InputError: unsound grid or case, files that cannot be written, or that hold the results of
    another grid; SolverError: the executor lost its workers.
    """
    grid = grid if isinstance(grid, Grid) else read_grid(os.fspath(grid))
    target = output_of(grid, output)
    if not replace and done_already(target, grid):
        _record_path(target).unlink(missing_ok=True)
        return read_sweep(target)
    check_writable(target, replace)
    with contextlib.closing(Record(_record_path(target), _identity(grid), len(grid))) as record:
        left = np.flatnonzero(~record.finished)
        for k in left.tolist():
            grid.case(k)
        if left.size:
            prepare(grid.case(int(left[0])))
            _run(grid, left, record, executor, workers, told)
        write_results(target, grid, record, replace)
        record.discard()
    return read_sweep(target)


def output_of(grid: Grid, output: StrPath | None = None) -> Path:
    """The file of results: as asked for, or as the grid says (beside its file), or named after it in the current folder."""
    if output is not None:
        return Path(output)
    folder = Path(str(grid.file)).parent if grid.file else Path()
    return folder / grid.output if grid.output else Path(Path(str(grid.file or "sweep")).stem + ".h5")


def _record_path(target: Path) -> Path:
    return target.with_name(target.name + ".unfinished")


def _identity(grid: Grid) -> dict:
    return {"grid": grid.digest, "mechanisms": grid.mechanism_digests, "program": program_version()}


def finished_before(target: Path, grid: Grid) -> int:
    """The number of cases that an earlier, unfinished sweep into this file has finished."""
    path = _record_path(target)
    if not path.exists():
        return 0
    with contextlib.closing(Record(path, _identity(grid), len(grid))) as record:
        return record.count


def done_already(target: Path, grid: Grid) -> bool:
    """Whether the file holds the results of this very grid."""
    try:
        with hdf5.opened(target, KIND) as file:
            return file.attrs.get("grid_sha256") == grid.digest
    except InputError:
        return False


def _run(grid: Grid, left: np.ndarray, record: Record, executor: Executor | None, workers: int | None, told: Told | None) -> None:
    know(grid)
    hurry.clear()
    if executor is not None:
        return _through(executor, grid, left, record, told)
    count = workers or len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else workers or os.cpu_count() or 1
    pool = ThreadPoolExecutor(min(count, left.size), "bothways")
    try:
        _through(pool, grid, left, record, told)
    finally:
        pool.shutdown(wait=True, cancel_futures=True)


def _through(executor: Executor, grid: Grid, left: np.ndarray, record: Record, told: Told | None) -> None:
    """Feeds the executor and records what comes back; on the way out, what is in hand is finished and recorded too."""
    window = 4 * getattr(executor, "_max_workers", WINDOW // 4)
    todo, pending = iter(left.tolist()), {}  # type: Iterator[int], dict[Future, int]
    tell = (lambda: told(record.count, len(grid))) if told else (lambda: None)
    try:
        while True:
            _feed(executor, grid, todo, pending, window)
            if not pending:
                return
            _collect(executor, grid, pending, record, _PATIENCE)
            tell()
    except BaseException:
        with contextlib.suppress(BothwaysError):
            _finish(executor, grid, pending, record)
        raise


def _feed(executor: Executor, grid: Grid, todo: Iterator[int], pending: dict[Future, int], window: int) -> None:
    while len(pending) < window:
        k = next(todo, None)
        if k is None:
            return
        pending[executor.submit(work, grid.digest, k)] = k


def _collect(executor: Executor, grid: Grid, pending: dict[Future, int], record: Record, patience: float | None) -> None:
    """Records what is done by now, or within `patience` [s]."""
    done, _ = wait(pending, patience, FIRST_COMPLETED)
    for future in done:
        content = _result(future, record)
        k = pending.pop(future)
        if content is None:
            pending[executor.submit(work, grid.digest, k, grid.packed)] = k
        else:
            record.append(content)


def _result(future: Future, record: Record) -> bytes | None:
    try:
        return future.result()
    except InputError:
        raise
    except (Exception, CancelledError) as err:
        raise SolverError(f"a worker was lost ({type(err).__name__}: {err})", expected="workers that live as long as the sweep",
                          remedy="what is finished is kept: the same command goes on from there", file=record.path) from err


def _finish(executor: Executor, grid: Grid, pending: dict[Future, int], record: Record) -> None:
    """Takes back what has not begun, waits for what has, and records it; at once if interrupted again."""
    for future in list(pending):
        if future.cancel():
            del pending[future]
    try:
        for future in list(pending):
            content = _result(future, record)
            if content is not None:
                record.append(content)
    except KeyboardInterrupt:
        hurry.set()
