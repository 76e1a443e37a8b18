"""bothways run: the time course of one case."""

import argparse
import sys
import time
import warnings
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from ..batch import prepare, run_and_judge
from ..case import Case, read_case
from ..endpoint import Kind, Verdict
from ..outfile import check_writable
from ..remarks import Remark
from ..report import summary
from ..trajectory import Trajectory, write_trajectory
from . import DONE, FAILED_VERDICT, GAVE_UP, INTERRUPTED, VERBS, spare
from .patience import Patience

if TYPE_CHECKING:
    from tqdm import tqdm

NOT_REACHED = (Kind.NOT_YET, Kind.CANNOT_START)
"""Verdicts that fail a run which was to go on until equilibrium."""


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "run", help=VERBS["run"], formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Integrates a case and writes its trajectory (HDF5); prints a summary.",
        epilog="examples:\n  bothways run hydrogen-kettle --plot\n"
        "  bothways run my-batch.toml --output my-batch.h5 --replace", allow_abbrev=False)
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
    output, picture = _files(case, chosen)
    compile_for(case)
    with remarks_shown(), Patience() as patience:
        trajectory, verdict = _with_progress(case, patience)
        write_trajectory(output, trajectory, replace=chosen.replace)
    print(summary(case, trajectory, verdict, _title(case, chosen.case)))
    print(f"{'file':<12}{output}")
    if picture is not None:
        from ..plots import save_course

        save_course(trajectory, picture, replace=chosen.replace)
        print(f"{'plot':<12}{picture}")
    return _status(case, trajectory, verdict, output)


def _files(case: Case, chosen: argparse.Namespace) -> tuple[Path, Path | None]:
    """The files to write, trajectory and picture, both known to be writable."""
    output = chosen.output or case.output or Path(Path(chosen.case).stem + ".h5")
    inputs = [str(file) for file in (case.file, case.mechanism.file) if file]
    spare(output, *inputs)
    check_writable(output, chosen.replace)
    if chosen.plot is None:
        return output, None
    from ..plots import check_picture

    picture = Path(chosen.plot or output.with_suffix(".png"))
    spare(picture, output, *inputs)
    check_picture(picture, chosen.replace)
    return output, picture


def _title(case: Case, name: str) -> str:
    stated = case.document.get("case", {}).get("title", "")
    return f"{Path(name).stem}: {stated}" if stated else Path(name).stem


def compile_for(case: Case) -> None:
    """Compiles the kernels now, so that no run's time holds it; says so when it takes long."""
    def say(text: str) -> None:
        print(f"bothways: {text}", file=sys.stderr, flush=True)

    began = time.perf_counter()
    if prepare(case, say):
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


def _with_progress(case: Case, patience: Patience) -> tuple[Trajectory, Verdict]:
    if not sys.stderr.isatty():
        return run_and_judge(case, lambda *unused: patience.check())
    from tqdm import tqdm  # takes its time to load

    with tqdm(desc="starting", bar_format="{desc} {elapsed}", leave=False, file=sys.stderr) as bar:
        return run_and_judge(case, _teller(bar, patience))


def _teller(bar: "tqdm", patience: Patience) -> Callable[[int, float, float], None]:
    def told(steps: int, t: float, temperature: float) -> None:
        bar.set_description_str(f"{steps} steps, {t:.4g} s, {temperature:.1f} K", refresh=False)
        bar.update()
        patience.check()

    return told


def _status(case: Case, trajectory: Trajectory, verdict: Verdict, output: Path) -> int:
    if verdict.kind is Kind.WRONG or (trajectory.complete and case.to_equilibrium and verdict.kind in NOT_REACHED):
        print(f"bothways: {case.file}: until.equilibrium: {verdict.kind.value}: {verdict.sentence}", file=sys.stderr)
        return FAILED_VERDICT
    if trajectory.complete:
        return DONE
    interrupted = "interrupted" in trajectory.reason
    remedy = "run it again for the rest" if interrupted else "try another [solver] method or rtol, and see its last states"
    print(f"bothways: {case.file}: the run is incomplete: {trajectory.reason}; {output} holds it up to there "
          f"(complete = 0); {remedy}", file=sys.stderr)
    return INTERRUPTED if interrupted else GAVE_UP


__all__ = ["act", "add_to", "compile_for", "remarks_shown"]
