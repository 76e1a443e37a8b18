"""bothways run: the time course of one case."""

import argparse
import sys
import time
import warnings
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path

from tqdm import tqdm

from ..batch import Remark, run
from ..case import Case, read_case
from ..outfile import check_writable
from ..report import summary
from ..trajectory import Trajectory, write_trajectory
from . import BAD_INPUT, DONE, INTERRUPTED

GAVE_UP = 3


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "run", help="predict a batch's time course", formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Integrates a case and writes its trajectory (HDF5); prints a summary.",
        epilog="examples:\n  bothways run hydrogen-kettle --plot\n  bothways run my-batch.toml --output my-batch.h5 --replace")
    parser.add_argument("case", metavar="CASE", help="a case file, or the name of a bundled case")
    parser.add_argument("--output", metavar="FILE", type=Path, help="the trajectory file (default: as the case says, "
                        "else CASE.h5 in this folder)")
    parser.add_argument("--plot", nargs="?", const="", metavar="FILE", help="draw the course as well (PNG, SVG or PDF; "
                        "default: beside the trajectory, .png)")
    parser.add_argument("--replace", action="store_true", help="overwrite files that exist")
    parser.set_defaults(act=act)


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    case = read_case(chosen.case)
    output = chosen.output or case.output or Path(Path(chosen.case).stem + ".h5")
    picture = None if chosen.plot is None else Path(chosen.plot or output.with_suffix(".png"))
    for path in filter(None, (output, picture)):
        check_writable(path, chosen.replace)
    _compile(case)
    with remarks_shown():
        trajectory = _with_progress(case)
    write_trajectory(output, trajectory, replace=chosen.replace)
    print(summary(case, trajectory, _title(case, chosen.case)))
    print(f"{'file':<12}{output}")
    if picture is not None:
        from ..plots import save_course

        save_course(trajectory, picture, replace=chosen.replace)
        print(f"{'plot':<12}{picture}")
    return _status(trajectory)


def _title(case: Case, name: str) -> str:
    stated = case.document.get("case", {}).get("title", "")
    return f"{Path(name).stem}: {stated}" if stated else Path(name).stem


def _compile(case: Case) -> None:
    """Compiles the kernels now, so that no run's time holds it; says so when it takes long."""
    def say(text: str) -> None:
        print(f"bothways: {text}", file=sys.stderr, flush=True)

    began = time.perf_counter()
    if case.equations().prepare(say):
        say(f"compiled in {time.perf_counter() - began:.0f} s")


@contextmanager
def remarks_shown() -> Iterator[None]:
    """Prints remarks as plain lines on stderr."""
    with warnings.catch_warnings(record=True) as caught:
        warnings.simplefilter("always", Remark)
        yield
    for warning in caught:
        if issubclass(warning.category, Remark):
            print(f"bothways: note: {warning.message}", file=sys.stderr)


def _with_progress(case: Case) -> Trajectory:
    bar_format = "{desc} {elapsed}"
    with tqdm(desc="starting", bar_format=bar_format, disable=None, leave=False, file=sys.stderr) as bar:
        return run(case, _teller(bar))


def _teller(bar: tqdm) -> Callable[[int, float, float], None]:
    def told(steps: int, t: float, temperature: float) -> None:
        bar.set_description_str(f"{steps} steps, {t:.4g} s, {temperature:.1f} K", refresh=False)
        bar.update()

    return told


def _status(trajectory: Trajectory) -> int:
    if trajectory.complete:
        return DONE
    print(f"bothways: the run is incomplete: {trajectory.reason}; the file holds it up to there", file=sys.stderr)
    return INTERRUPTED if "interrupted" in trajectory.reason else GAVE_UP


__all__ = ["BAD_INPUT", "act", "add_to", "remarks_shown"]
