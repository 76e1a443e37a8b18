"""bothways reduce: a smaller mechanism that keeps stated limits over a working range."""

import argparse
import textwrap
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

import numpy as np

from ..compare import read_limits
from ..compare.tables import terminal_text
from ..mechanism import Mechanism, read_mechanism, write_mechanism
from ..outfile import check_writable
from ..reduce import METHODS, Reduced, reduce_cases
from . import DONE, VERBS, spare
from .compare import add_conditions, bar, conditions, workers


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "reduce", help=VERBS["reduce"], formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Leaves species out of a mechanism, and with them their reactions, as far as stated limits allow in every\n"
        "condition of a grid: by a directed relation graph, a threshold found by bisection, and a last pass that tries the\n"
        "species left one by one. The result is an ordinary mechanism file that says how it came about. What is not limited\n"
        "may go wrong: judge it with 'bothways compare' in conditions that the search did not see.",
        epilog="example:\n  bothways reduce methane --over methane-range --limit ignition=10% --limit end-temperature='20 K' "
        "--output methane-small.toml", allow_abbrev=False)
    parser.add_argument("parent", metavar="PARENT", help="a mechanism file, or the name of a bundled one")
    add_conditions(parser)
    parser.add_argument("--keep", nargs="+", default=[], metavar="NAME", help="species that stay and whose rates are followed "
                        "(default: the charged ones that fall to half; whatever is charged stays as well)")
    parser.add_argument("--method", choices=METHODS, default="DRGEP", help="how relations are measured (default: DRGEP)")
    parser.add_argument("--certain", type=float, default=1.0, metavar="SHARE", help="species of at least this importance are "
                        "not tried in the last pass; 0 leaves the pass out (default: 1)")
    parser.add_argument("--margin", type=float, default=1.0, metavar="SHARE", help="share of each limit that the search may use, "
                        "to leave room for conditions it does not see (default: 1)")
    parser.add_argument("--name", default="", help="of the new mechanism (default: the parent's and the number of species)")
    parser.add_argument("--output", metavar="FILE", type=Path, help="the mechanism file (default: PARENT-reduced.toml, here)")
    parser.set_defaults(act=act)


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    parent, limits = read_mechanism(chosen.parent), read_limits(chosen.limit)
    output = chosen.output or Path(f"{Path(chosen.parent).stem}-reduced.toml")
    _check(output, parent, chosen)
    cases = conditions(chosen, parent)
    with ThreadPoolExecutor(workers(chosen)) as executor, bar(0, "trials") as progress:
        def told(text: str) -> None:
            progress.set_description_str(text, refresh=False)
            progress.update()

        found = reduce_cases(parent, cases, limits, chosen.keep, chosen.method, chosen.certain, chosen.margin, chosen.name,
                             executor, told)
    write_mechanism(found.mechanism, output, chosen.replace)
    print("\n".join([*_summary(parent, found), "", terminal_text(found.comparison), f"{'file':<12}{output}"]))
    return DONE


def _check(output: Path, parent: Mechanism, chosen: argparse.Namespace) -> None:
    spare(output, *([str(parent.file)] if parent.file else []), str(chosen.over))
    check_writable(output, chosen.replace)


def _summary(parent: Mechanism, found: Reduced) -> list[str]:
    """What stays, what went how."""
    notes, kept = found.mechanism.document["reduction"], found.mechanism.names
    left = [parent.names[k] for k in np.argsort(-found.importance, kind="stable") if parent.names[k] not in kept]
    by_graph = [name for name in left if name not in found.found.removed]
    head = f"{notes['method']}, threshold {found.found.threshold:.3g}, {found.trials} trials in {notes['conditions']} conditions"
    lists = (("kept", kept), ("left out by the threshold", by_graph), ("left out in the last pass", found.found.removed))
    lines = [head, *(f"{title}: {', '.join(names)}" for title, names in lists if names)]
    return [line for text in lines for line in textwrap.wrap(text, 110, subsequent_indent="    ")]
