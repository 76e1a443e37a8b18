"""bothways audit: what is wrong with a mechanism, before it misleads."""

import argparse
import os
from pathlib import Path

from ..audit import Audit, as_json, audit, check_rows_file, repaired_text, summary, write_rows
from ..errors import InputError
from ..mechanism import Mechanism, read_mechanism
from ..mechanism.toml_reader import read_text
from ..outfile import check_writable, write_whole
from ..units import parse_quantity
from . import DONE, FAILED_VERDICT, VERBS, spare


def add_to(verbs) -> None:  # type: ignore[no-untyped-def]
    """Adds the verb to the parser."""
    parser = verbs.add_parser(
        "audit", help=VERBS["audit"], formatter_class=argparse.RawDescriptionHelpFormatter,
        description="Looks a mechanism over for what breaks physics though it integrates happily: rates above the collision\n"
        "rate, published reverse constants against those of K(T), thermochemistry, stoichiometry, fall-off. The worst\n"
        "first, each with its place, its size and what is likelier at fault. Exit status 1 if anything is an error.",
        epilog="examples:\n  bothways audit methane\n"
        "  bothways audit n-alkanes --all --range 800 2000 --pressures '1 bar' '20 bar'\n"
        "  bothways audit n-alkanes --rows n-alkanes.csv --plot n-alkanes.png --repair closed.toml", allow_abbrev=False)
    parser.add_argument("mechanism", metavar="MECHANISM", help="a mechanism file, or the name of a bundled mechanism")
    parser.add_argument("--all", action="store_true", dest="every", help="show every finding, notices too, and the sources")
    parser.add_argument("--range", nargs=2, metavar=("LOW", "HIGH"), help="working temperatures (K, or quoted with their unit; "
                        "default 300 2500 for gases)")
    parser.add_argument("--pressures", nargs="+", metavar="P", help="working pressures (Pa, or quoted with their unit; default "
                        "0.1, 1, 10 and 100 bar)")
    parser.add_argument("--json", action="store_true", help="print the whole audit as JSON instead of the table")
    parser.add_argument("--rows", metavar="FILE", type=Path, help="write all findings to FILE (.csv or .h5)")
    parser.add_argument("--plot", metavar="FILE", type=Path, help="draw decades above the collision rate, published against "
                        "derived reverse constants, and jumps of K (PNG, SVG or PDF)")
    parser.add_argument("--repair", metavar="OUT.toml", type=Path, help="write a copy with range joins and cycles of stated "
                        "equilibria closed, nothing else touched, and list each change")
    parser.add_argument("--replace", action="store_true", help="overwrite files that exist")
    parser.set_defaults(act=act)


def act(chosen: argparse.Namespace) -> int:
    """Carries out the verb."""
    _check_files(chosen)
    mechanism = read_mechanism(chosen.mechanism, lenient=True)
    for path in filter(None, (chosen.rows, chosen.plot, chosen.repair)):
        spare(path, str(mechanism.file))
    found = audit(mechanism, _range(chosen.range), _pressures(chosen.pressures))
    print(as_json(found) if chosen.json else summary(found, chosen.every))
    _write(found, chosen)
    return DONE if found.passed else FAILED_VERDICT


def _check_files(chosen: argparse.Namespace) -> None:
    """Refuses files that cannot be written before anything is worked out."""
    asked = [path for path in (chosen.rows, chosen.plot, chosen.repair) if path is not None]
    if len(set(map(os.path.realpath, asked))) < len(asked):
        raise InputError("two results would go to one file", expected="a file of its own for each", remedy="name another one")
    if chosen.rows is not None:
        check_rows_file(chosen.rows, chosen.replace)
    if chosen.plot is not None:
        from ..plots import check_picture

        check_picture(chosen.plot, chosen.replace)
    if chosen.repair is not None:
        check_writable(chosen.repair, chosen.replace)


def _range(texts: list[str] | None) -> tuple[float, float] | None:
    if texts is None:
        return None
    low, high = (_quantity(text, "temperature", "K", "--range") for text in texts)
    return low, high


def _pressures(texts: list[str] | None) -> list[float] | None:
    return None if texts is None else [_quantity(text, "pressure", "Pa", "--pressures") for text in texts]


def _quantity(text: str, kind: str, unit: str, option: str) -> float:
    """The SI value of a bare number or a quantity with its unit."""
    try:
        return parse_quantity(text if len(text.split()) > 1 else f"{text} {unit}", kind)
    except InputError as err:
        raise InputError(err.problem, expected=err.expected, entry=option) from None


def _write(found: Audit, chosen: argparse.Namespace) -> None:
    """The files that were asked for; what is said of them goes to the table, not between the braces of JSON."""
    said: list[str] = []
    if chosen.rows is not None:
        write_rows(found, chosen.rows, chosen.replace)
        said.append(f"{'rows':<12}{chosen.rows}")
    if chosen.plot is not None:
        from ..plots import save_audit_figure

        save_audit_figure(found, chosen.plot, chosen.replace)
        said.append(f"{'plot':<12}{chosen.plot}")
    if chosen.repair is not None:
        said += _repair(found.survey.mechanism, chosen.repair, chosen.replace)
    if said and not chosen.json:
        print("\n".join(said))


def _repair(mechanism: Mechanism, path: Path, replace: bool) -> list[str]:
    original = read_text(Path(str(mechanism.file))) if mechanism.file is not None else None
    text, changes = repaired_text(mechanism, original)
    write_whole(path, text.encode(), replace)
    return [f"{'repaired':<12}{path}: {len(changes)} numbers changed", *(f"{'':<12}{change}" for change in changes)]
