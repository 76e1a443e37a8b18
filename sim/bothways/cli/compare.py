"""bothways compare: how far reduced mechanisms depart from their parent over a working range."""

import argparse
import sys
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

from tqdm import tqdm

from ..batch import prepare
from ..case import Case
from ..compare import MEASURES, Comparison, compare_cases, read_limits, read_mapping
from ..compare.file import write_comparison
from ..compare.tables import csv_text, markdown, terminal_text
from ..errors import InputError
from ..mechanism import Mechanism, read_mechanism
from ..outfile import check_writable, write_whole
from ..version import program_version
from . import DONE, FAILED_VERDICT, VERBS, spare

MOST_CASES = 10_000
"""More conditions than this are run only after --yes."""


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    measures = ", ".join(m.name for m in MEASURES if m.limited)
    parser = verbs.add_parser(
        "compare", help=VERBS["compare"], formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Runs every condition of a grid with a mechanism and with reductions of it, and says in what and how far\n"
        "they depart, what they conserve that the parent does not, and what they cost.",
        epilog=f"what can be limited: {measures}\n\nexample:\n  bothways compare methane methane-skeletal --over methane-range "
        "--limit ignition=10% --limit end-temperature='20 K' --markdown table.md --parity parity.png", allow_abbrev=False)
    parser.add_argument("parent", metavar="PARENT", help="a mechanism file, or the name of a bundled one")
    parser.add_argument("reduced", metavar="REDUCED", nargs="+", help="the same: reductions of it")
    add_conditions(parser)
    parser.add_argument("--species", nargs="+", default=[], metavar="NAME", help="species of the parent whose profiles and peaks "
                        "count besides those of the major ones")
    parser.add_argument("--mapping", metavar="FILE", type=Path, help="a TOML file that says which of the parent's species a "
                        "renamed or lumped one stands for")
    _add_files(parser)
    parser.set_defaults(act=act)


def add_conditions(parser: argparse.ArgumentParser) -> None:
    """The arguments that comparing and reducing share."""
    parser.add_argument("--over", metavar="GRID", required=True, help="the conditions: a grid file, or a bundled grid's name")
    parser.add_argument("--limit", metavar="NAME=VALUE", action="append", default=[], help="how large a measure may be, such as "
                        "ignition=10%% or end-temperature='20 K'; may be given several times")
    parser.add_argument("--workers", metavar="N", type=int, help="how many conditions run side by side (default: a few more than "
                        "there are cores)")
    parser.add_argument("--yes", action="store_true", help=f"go on even with more than {MOST_CASES} conditions")
    parser.add_argument("--replace", action="store_true", help="overwrite files that exist")


def _add_files(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("--output", metavar="FILE", type=Path, help="write everything as HDF5")
    parser.add_argument("--csv", metavar="FILE", type=Path, help="write a row for each mechanism and condition as CSV")
    parser.add_argument("--markdown", metavar="FILE", type=Path, help="write the table as Markdown")
    for name, what in (("map", "a map of the errors over T, p and equivalence ratio"),
                       ("parity", "the ignition delays, against 1/T and against the parent's"),
                       ("worst", "the courses of the worst condition with the parent and all reductions")):
        parser.add_argument(f"--{name}", metavar="FILE", type=Path, help=f"draw {what} (PNG, SVG or PDF)")
    parser.add_argument("--measure", metavar="NAME", default="ignition", help="what map and worst condition are about (default: "
                        "ignition)")


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    parent, reduced = read_mechanism(chosen.parent), [read_mechanism(name) for name in chosen.reduced]
    mapping = read_mapping(chosen.mapping) if chosen.mapping else None
    limits = read_limits(chosen.limit)
    _check(chosen, parent, reduced)
    cases = conditions(chosen, parent)
    with ThreadPoolExecutor(workers(chosen)) as executor, bar(len(cases), "conditions") as progress:
        found = compare_cases(parent, reduced, cases, chosen.species, limits, mapping, chosen.mapping, executor,
                              lambda done: progress.update())
    print(terminal_text(found))
    _write(found, chosen)
    return FAILED_VERDICT if found.beyond else DONE


def _check(chosen: argparse.Namespace, parent: Mechanism, reduced: list[Mechanism]) -> None:
    """What is asked for can be written and makes sense, before anything runs."""
    read_limits([f"{chosen.measure}=1"])
    inputs = [str(m.file) for m in (parent, *reduced) if m.file] + [str(chosen.over)] + [str(chosen.mapping or "")]
    files = [path for path in (chosen.output, chosen.csv, chosen.markdown) if path]
    for path in files:
        spare(path, *inputs, *(other for other in files if other is not path))
        check_writable(path, chosen.replace)
    pictures = [path for path in (chosen.map, chosen.parity, chosen.worst) if path]
    for path in pictures:
        from ..plots import check_picture

        spare(path, *inputs, *files, *(other for other in pictures if other is not path))
        check_picture(path, chosen.replace)


def workers(chosen: argparse.Namespace) -> int | None:
    """How many threads; None leaves it to the machine."""
    if chosen.workers is not None and chosen.workers < 1:
        raise InputError(f"{chosen.workers} workers", entry="--workers", expected="one at least", remedy="correct it")
    return chosen.workers


def conditions(chosen: argparse.Namespace, parent: Mechanism) -> list[Case]:
    """The grid's cases for the parent, its kernels compiled; a very large grid needs consent."""
    from ..grid import read_grid

    grid = read_grid(chosen.over, parent)
    if len(grid) > MOST_CASES and not chosen.yes:
        raise InputError(f"{len(grid)} conditions", file=grid.file, expected=f"{MOST_CASES} at most without --yes",
                         remedy="say --yes if you mean it: each takes a run with every mechanism; or choose fewer")
    cases = list(grid.cases(parent))
    prepare(cases[0], lambda text: print(f"bothways: {text}", file=sys.stderr, flush=True))
    return cases


def bar(total: int, unit: str) -> tqdm:
    """A progress bar on stderr, on a terminal only."""
    return tqdm(total=total, unit=f" {unit}", disable=None, leave=False, file=sys.stderr)


def _write(found: Comparison, chosen: argparse.Namespace) -> None:
    if chosen.output:
        write_comparison(chosen.output, found, chosen.replace, program_version())
        print(f"{'file':<12}{chosen.output}")
    texts: list[tuple[Path | None, Callable[[Comparison], str]]] = [(chosen.csv, csv_text), (chosen.markdown, markdown)]
    for path, made in texts:
        if path:
            write_whole(path, made(found).encode(), chosen.replace)
            print(f"{'file':<12}{path}")
    if chosen.map or chosen.parity or chosen.worst:
        _draw(found, chosen)


def _draw(found: Comparison, chosen: argparse.Namespace) -> None:
    from ..plots import error_map, parity, save, worst_courses

    for path, draw in ((chosen.map, lambda: error_map(found, chosen.measure)), (chosen.parity, lambda: parity(found)),
                       (chosen.worst, lambda: worst_courses(found, chosen.measure))):
        if path:
            save(draw(), path, chosen.replace)
            print(f"{'plot':<12}{path}")
