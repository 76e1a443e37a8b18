"""Grid files: the base case, and the tables that say what varies."""

import os
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from ..entry import Entry
from ..errors import InputError, hint
from ..mechanism import Mechanism, bundled_cases, read_mechanism
from ..mechanism.files import bundled_folder, mechanism_path, read_toml
from ..mechanism.model import copy_document
from .keys import TABLES, leaves
from .model import Factor, Grid
from .ranges import read_samples, values_of
from .rows import read_rows


def bundled_grids() -> dict[str, Path]:
    """Names and files of the bundled grids."""
    return {path.stem: path for path in sorted((bundled_folder() / "grids").glob("*.toml"))}


def read_grid(name: str | Path, mechanism: Mechanism | None = None) -> Grid:
    """The grid in a file, or a bundled one by its name; see `build_grid`.

    Raises InputError: no such file or name (with the nearest), and every fault in grid, base case or mechanisms.
    """
    bundled = bundled_grids()
    path = bundled.get(str(name), Path(name))
    if not os.path.exists(path) and path.suffix != ".toml" and "/" not in str(name):
        raise InputError(f"no bundled grid and no file '{name}'{hint(name, bundled)}", expected="a grid",
                         remedy="'bothways mechanisms' lists the bundled grids")
    return build_grid(read_toml(path), path, mechanism)


def build_grid(document: Mapping[str, Any], file: object = None, mechanism: Mechanism | None = None) -> Grid:
    """The grid that a document states: a base case, [vary], [rows] and [samples]; its first case is built as a check.

    mechanism : used instead of those that base and factors name, which then may not vary.
    """
    top = Entry(document, "", file)
    top.expect("grid", "vary", "rows", "samples", *TABLES)
    head = top.table("grid", {})
    title, output = head.text("title", ""), head.text("file", "")
    peaks, trajectories, (base, folder) = head.texts("peaks", ()), head.flag("trajectories"), _base(top, head)
    head.done()
    factors = _factors(top)
    if not factors:
        raise top.error("nothing varies", expected="[vary], [rows] or [samples]", remedy='such as [vary] with '
                        'start.temperature = ["1000 K", "1200 K"]')
    names = _names(top, base, factors, mechanism)
    found = {name: mechanism or _mechanism(top, name, folder, in_base) for name, in_base in names.items()}
    _check_peaks(head, peaks, found)
    return Grid(base, factors, found, title, tuple(peaks), trajectories, output, file)


def _check_peaks(head: Entry, peaks: tuple[str, ...], mechanisms: Mapping[str, Mechanism]) -> None:
    known = {name for m in mechanisms.values() for name in m.names}
    for name in peaks:
        if name not in known:
            raise head.unknown("species", name, known, key="peaks")


def _base(top: Entry, head: Entry) -> tuple[dict[str, Any], Path]:
    """The base case's document and the folder its mechanism is relative to; tables of the grid file go before its own."""
    folder = Path(str(top.file)).parent if top.file else Path()
    stated = head.text("case", "")
    base: dict[str, Any] = {}
    if stated:
        bundled = bundled_cases()
        path = bundled.get(stated, folder / stated)
        if not path.exists():
            raise head.error(f"no bundled case and no file '{stated}'{hint(stated, bundled)}", expected="a case", key="case",
                             remedy="'bothways mechanisms' lists the bundled cases; a file is named by its path")
        base = {name: copy_document(table) for name, table in read_toml(path).items() if name != "output"}
        if "mechanism" not in document_table(top, "case"):
            folder = path.parent
    for name in TABLES:
        if name in top.data:
            base[name] = {**base.get(name, {}), **copy_document(document_table(top, name))}
    return base, folder


def document_table(top: Entry, name: str) -> Mapping[str, Any]:
    """A table of the file, empty if there is none."""
    return top.table(name, {}).data


def _factors(top: Entry) -> tuple[Factor, ...]:
    factors = []
    for name, read in (("rows", read_rows), ("samples", read_samples)):
        if name in top.data:
            keys, settings = read(top.table(name))
            factors.append(Factor(keys, tuple(settings)))
    vary = top.table("vary", {})
    for key, stated in leaves(vary).items():
        factors.append(Factor((key,), tuple((value,) for value in values_of(vary, key, stated))))
    _check_once(top, [key for factor in factors for key in factor.keys])
    return tuple(factors)


def _check_once(top: Entry, keys: list[str]) -> None:
    for key in keys:
        if keys.count(key) > 1 or any(other.startswith(f"{key}.") for other in keys):
            raise top.error(f"{key} varies twice", expected="each key in one place of [vary], [rows] and [samples]",
                            remedy="leave one out")


def _names(top: Entry, base: dict[str, Any], factors: tuple[Factor, ...], given: Mechanism | None) -> dict[str, bool]:
    """Names of the mechanisms of all cases, and whether the base states them."""
    varied = {str(setting[f.keys.index("case.mechanism")]): False for f in factors if "case.mechanism" in f.keys
              for setting in f.settings}
    if varied and given:
        raise top.error("the mechanism varies", expected="a grid without case.mechanism, for mechanisms given apart from it",
                        remedy="leave it out", key="case.mechanism")
    name = base.get("case", {}).get("mechanism", "")
    if (not varied and not isinstance(name, str)) or not (varied or name or given):
        raise top.error("the key 'mechanism' is missing" if not name else "the mechanism is not a text", key="case",
                        expected="a bundled name or a path", remedy="add it")
    return varied or {name: True}


def _mechanism(top: Entry, name: str, folder: Path, in_base: bool) -> Mechanism:
    own = Path(str(top.file)).parent if top.file else Path()
    try:
        return read_mechanism(mechanism_path(name, folder if in_base else own))
    except InputError as err:
        if err.file is None:
            raise top.error(err.problem, expected=err.expected, remedy=err.remedy, key="case.mechanism") from None
        raise
