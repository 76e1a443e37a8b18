"""What a grid may vary: the keys of a case file, and what kind of value each takes."""

from collections.abc import Mapping
from typing import Any

from ..charge import WAYS
from ..entry import Entry
from ..errors import InputError, shown
from ..mechanism.model import copy_document
from ..units import finite

Value = float | str | dict[str, Any]

KINDS: dict[str, str] = {
    "case.mechanism": "text", "vessel.heat": "text", "vessel.holds": "text", "vessel.volume": "volume",
    "vessel.thermal_inertia": "number", "vessel.UA": "heat transfer", "vessel.jacket_temperature": "temperature",
    "start.temperature": "temperature", "start.pressure": "pressure",
    "start.equivalence_ratio": "number", "start.oxidiser": "table", "until.time": "time", "solver.rtol": "number",
    "solver.atol": "number", "solver.method": "text", "solver.most_steps": "number", "solver.longest": "time",
    **{f"start.{way}": "table" for way in WAYS},
}
"""Kind of value of each key: "text", "number", "table", or that of a quantity; besides, species within the tables."""
_PLAIN = ("text", "table", "number")
_OF_SPECIES = {"amount": "amount", "concentration": "concentration"}
TABLES = ("case", "vessel", "start", "until", "solver")
"""The tables of a case file that a grid file may state and vary."""


def kind_of(key: str) -> str:
    """Kind of the value of a key, "start.mole_ratio.H2" included; empty for a key that cannot be varied."""
    table, _, species = key.removeprefix("start.").partition(".")
    if key.startswith("start.") and species and KINDS.get(f"start.{table}") == "table":
        return _OF_SPECIES.get(table, "number")
    return KINDS.get(key, "")


def units_of(key: str) -> str:
    """Kind of the quantity that a key states, empty for texts, tables and plain numbers."""
    kind = kind_of(key)
    return "" if kind in _PLAIN else kind


def read_value(entry: Entry, key: str, value: Any, place: str = "") -> Value:
    """One value of a key: SI number, text or table; `place`: where it stands in the entry."""
    kind = kind_of(key)
    wrong, expected = {
        "text": (not isinstance(value, str), "a text"), "table": (not isinstance(value, Mapping), "a table"),
        "number": (not finite(value), "a finite number")}.get(kind, (False, ""))
    if wrong:
        raise entry.error(f"{shown(value)} is not {expected}", expected=expected, remedy="correct it", key=place)
    if kind in _PLAIN:
        return copy_document(value) if kind == "table" else float(value) if kind == "number" else value
    return entry.convert(value, kind, place)


def leaves(entry: Entry, also: tuple[str, ...] = ()) -> dict[str, Any]:
    """The varied keys of a table such as [vary] and what each states, in order; keys in `also` are somebody else's.

    Raises InputError for a key that cannot be varied.
    """
    found: dict[str, Any] = {}
    for table, inner in entry.data.items():
        if table in also:
            continue
        if table not in TABLES:
            raise entry.unknown("table", table, TABLES, remedy="vary keys of a case file, such as start.temperature")
        for name, value in entry.sub(inner, entry._at(table)).data.items():
            found |= _leaf(entry, f"{table}.{name}", value)
    return found


def _leaf(entry: Entry, key: str, value: Any) -> dict[str, Any]:
    kind = kind_of(key)
    if not kind:
        raise unknown_key(entry, key)
    if kind == "table" and isinstance(value, Mapping):
        return {f"{key}.{species}": inner for species, inner in value.items()}
    return {key: value}


def unknown_key(entry: Entry, key: str, what: str = "key") -> InputError:
    """The error for a key that cannot be varied."""
    return entry.unknown(what, key, KINDS, remedy="vary one of " + ", ".join(KINDS))


def with_setting(document: dict[str, Any], setting: Mapping[str, Value]) -> dict[str, Any]:
    """A copy of a case's document with these keys set."""
    copy = copy_document(document)
    for key, value in setting.items():
        *tables, last = key.split(".", 2)
        inner = copy
        for table in tables:
            inner = inner.setdefault(table, {})
        inner[last] = copy_document(value)
    return copy
