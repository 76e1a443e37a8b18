"""bothways sweep: the cases of a grid, on this machine or a cluster, nothing finished ever lost."""

import argparse
import sys
import time
from collections.abc import Iterator
from concurrent.futures import Executor
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from tqdm import tqdm

from ..endpoint import Kind
from ..errors import InputError
from ..grid import Grid, read_grid
from ..outcome import DONE as CASE_DONE
from ..outcome import outcome
from ..report import time_text
from ..sweep import Sweep, done_already, finished_before, output_of, summary_of, sweep
from . import DONE, FAILED_VERDICT, GAVE_UP, INTERRUPTED, VERBS, spare
from .patience import Patience
from .run import NOT_REACHED, compile_for

UNASKED = 10_000
"""More cases than this want --yes."""
_TRIED = 3
_CONNECT = "5s"


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "sweep", help=VERBS["sweep"], formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Runs a base case over a grid: products of values and ranges, rows of a CSV file, seeded samples. One\n"
        "HDF5 file holds each case's inputs, milestones, end, equilibrium, verdict and statistics.\n\n"
        "Finished cases are kept at once in FILE.unfinished: after whatever ends it, the same command goes on from there.",
        epilog="examples:\n  bothways sweep hydrogen-kettle-map --plot\n"
        "  bothways sweep my-grid.toml --output my-grid.h5 --workers 8\n"
        "  bothways sweep my-grid.toml --scheduler tcp://192.168.0.5:8786", allow_abbrev=False)
    parser.add_argument("grid", metavar="GRID", help="a grid file, or the name of a bundled grid")
    parser.add_argument("--output", metavar="FILE", type=Path, help="the file of results (default: as the grid says, else "
                        "GRID.h5 in this folder)")
    where = parser.add_mutually_exclusive_group()
    where.add_argument("--workers", metavar="N", type=int, help="threads to use (default: one for each core)")
    where.add_argument("--scheduler", metavar="ADDRESS", help="run on the cluster of this dask.distributed scheduler (needs "
                       "the optional extra 'cluster')")
    parser.add_argument("--plot", nargs="?", const="", metavar="FILE", help="draw ignition delays as well (PNG, SVG or PDF; "
                        "default: beside the results, .png)")
    parser.add_argument("--yes", action="store_true", help=f"go on with more than {UNASKED} cases")
    parser.add_argument("--replace", action="store_true", help="overwrite files that exist")
    parser.set_defaults(act=act)


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    if chosen.workers is not None and chosen.workers < 1:
        raise InputError(f"{chosen.workers} workers", expected="at least 1", entry="--workers")
    grid = read_grid(chosen.grid)
    output, picture = _files(grid, chosen)
    if not chosen.replace and done_already(output, grid):
        print(f"bothways: note: {output} holds this sweep already; it was not run again", file=sys.stderr)
    else:
        _announce(grid, output, chosen)
    try:
        with Patience() as patience:
            found = _run(grid, output, chosen, patience)
    except KeyboardInterrupt:
        print(f"bothways: interrupted: {finished_before(output, grid)} of {len(grid)} cases are finished and kept; the same "
              "command goes on from there", file=sys.stderr)
        return INTERRUPTED
    print(summary_of(grid, found, Path(chosen.grid).stem))
    print(f"{'file':<12}{output}")
    if picture is not None:
        from ..plots import save_ignition

        save_ignition(found, picture, replace=chosen.replace)
        print(f"{'plot':<12}{picture}")
    return _status(grid, found, output)


def _files(grid: Grid, chosen: argparse.Namespace) -> tuple[Path, Path | None]:
    output = output_of(grid, chosen.output)
    inputs = [str(file) for file in (grid.file, *(m.file for m in grid.mechanisms.values())) if file]
    spare(output, *inputs)
    if chosen.plot is None:
        return output, None
    from ..plots import check_picture

    picture = Path(chosen.plot or output.with_suffix(".png"))
    spare(picture, output, *inputs)
    check_picture(picture, chosen.replace)
    return output, picture


def _announce(grid: Grid, output: Path, chosen: argparse.Namespace) -> None:
    """Compiles; tells of a large sweep how long it may take, and refuses it unless --yes."""
    first = grid.case(0)
    compile_for(first)
    before = finished_before(output, grid)
    if before:
        print(f"bothways: {before} of {len(grid)} cases were finished before; going on", file=sys.stderr)
    left = len(grid) - before
    if left <= UNASKED:
        return
    text = f"{left} cases, about {time_text(_seconds_each(grid) * left)} of one core"
    if not chosen.yes:
        raise InputError(text, expected=f"at most {UNASKED} cases unasked", remedy="say --yes, or make the grid coarser",
                         file=grid.file)
    print(f"bothways: {text}", file=sys.stderr)


def _seconds_each(grid: Grid) -> float:
    """Mean seconds a case, from a few across the grid."""
    some = [k * (len(grid) - 1) // (_TRIED - 1) for k in range(_TRIED)]
    began = time.perf_counter()
    for k in some:
        outcome(grid.case(k))
    return (time.perf_counter() - began) / len(some)


def _run(grid: Grid, output: Path, chosen: argparse.Namespace, patience: Patience) -> Sweep:
    with tqdm(total=len(grid), unit=" cases", disable=None, leave=False, file=sys.stderr) as bar:
        def told(finished: int, cases: int) -> None:
            bar.update(finished - bar.n if bar.n else _begun(bar, finished))
            patience.check()

        with _executor(chosen.scheduler) as executor:
            return sweep(grid, output, executor, chosen.workers, chosen.replace, told)


def _begun(bar: tqdm, finished: int) -> int:
    """The first report: what was finished before does not count in the rate."""
    bar.initial = bar.n = max(0, finished - 1)
    return finished - bar.n


@contextmanager
def _executor(scheduler: str | None) -> Iterator[Executor | None]:
    """That of the cluster, if one is asked for."""
    if scheduler is None:
        yield None
        return
    with _client(scheduler) as client:
        if not client.scheduler_info()["workers"]:
            raise InputError("the scheduler has no workers", expected="at least one", remedy="start them", entry="--scheduler")
        yield client.get_executor()


def _client(scheduler: str) -> Any:
    try:
        from distributed import Client
    except ImportError:
        raise InputError("the package distributed is not installed", expected="it, for a cluster", entry="--scheduler",
                         remedy="pip install 'bothways[cluster]'") from None
    try:
        return Client(scheduler, timeout=_CONNECT)
    except (OSError, ValueError, TimeoutError) as err:
        raise InputError(f"no scheduler answers at '{scheduler}' ({type(err).__name__})", entry="--scheduler",
                         expected="the address of a running one, such as tcp://192.168.0.5:8786",
                         remedy="start it, or correct the address") from None


def _status(grid: Grid, found: Sweep, output: Path) -> int:
    kinds = set(found["verdict"])
    unmet = {kind.value for kind in NOT_REACHED} if grid.base.get("until", {}).get("equilibrium") else set()
    if kinds & {Kind.WRONG.value, *unmet}:
        print(f"bothways: {grid.file}: the verdict over some cases is {' or '.join(sorted(kinds & {Kind.WRONG.value, *unmet}))}; "
              f"see 'verdict' in {output}", file=sys.stderr)
        return FAILED_VERDICT
    failed = len(found) - found.tally().get(CASE_DONE, 0)
    if failed:
        print(f"bothways: {grid.file}: {failed} of {len(found)} cases are not done; {output} says why of each ('reason')",
              file=sys.stderr)
    return GAVE_UP if failed else DONE
