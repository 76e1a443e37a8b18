"""A mechanism with what can be mended without judgement: range joins closed, cycles of stated equilibria closed.

Which range is moved: always the upper one of a join, in turn, by its two constants of integration (the last two
coefficients; F and G of Shomate's equation), because the lower range holds 298.15 K and with it ΔfH° and S°. Heat
capacities stay as they are. Stated equilibria take the values of the least-squares repair, weighted by their uncertainties
(mechanism/misfits.py). Nothing else is touched.
"""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..constants import GAS_CONSTANT as R
from ..mechanism.files import parse_toml
from ..mechanism.misfits import smallest_repair
from ..mechanism.model import Mechanism, Species
from ..mechanism.toml_writer import to_toml
from ..thermo import nine_coefficients, seven_coefficients, shomate
from ..thermo.polynomial import Shift, closed

SMALLEST = 1e-4
"""Species whose joins all meet within this in h/RT and s/R are left alone [-], as loading leaves them unmentioned."""
_NOTHING = 1e-9
"""Changes below this part of an uncertainty are round-off [-]."""
_CONSTANTS: Mapping[str, tuple[tuple[int, float, str], tuple[int, float, str]]] = {
    seven_coefficients.NAME: ((5, 1.0, "a6"), (6, 1.0, "a7")),
    nine_coefficients.NAME: ((7, 1.0, "b1"), (8, 1.0, "b2")),
    shomate.NAME: ((5, R * 1e-3, "F"), (6, R, "G")),
}
"""Of each form with ranges: place, size in common coefficients and symbol of the constants of h and of s."""


@dataclass(frozen=True)
class Change:
    """One number that a repair changed."""

    entry: str
    text: str
    before: float
    after: float

    def __str__(self) -> str:
        return f"{self.entry}: {self.text} from {self.before!r} to {self.after!r}"


def repaired(mechanism: Mechanism) -> tuple[dict[str, Any], tuple[Change, ...]]:
    """The mechanism's document with its joins and its cycles closed, and each change."""
    document, changes = mechanism.to_dict(), []
    for species in mechanism.species:
        ranges = species.potential.ranges()
        whole, shifts = closed(ranges)
        if any(max(abs(s.h), abs(s.s)) > SMALLEST for s in shifts):
            changes += _close(document["species"][species.name]["potential"], species, whole.rows - ranges.rows, shifts)
    changes += _close_cycles(document, mechanism)
    return document, tuple(changes)


def _close_cycles(document: dict[str, Any], mechanism: Mechanism) -> list[Change]:
    """Sets the stated equilibria to values that close all cycles, where they do not yet."""
    system, changes = mechanism.equilibria, []
    if system is None or not system.stated:
        return []
    moved = smallest_repair(system)
    for j, (number, reaction) in enumerate(system.reactions):
        stated, entry = system.stated[j], document["reaction"][number - 1]["equilibrium"]
        after = (stated.K * float(np.exp(moved[0, j])), stated.dH + float(moved[1, j]) * R * system.T0,
                 (stated.dCp or 0.0) + float(moved[2, j]) * R)
        for k, (key, unit) in enumerate((("K", ""), ("dH", " J/mol"), ("dCp", " J/(mol K)"))):
            if abs(moved[k, j]) > _NOTHING * system.spreads[k, j]:
                before = (stated.K, stated.dH, stated.dCp or 0.0)[k]
                entry[key] = f"{after[k]!r}{unit}" if unit else after[k]
                place = f"reaction {number} '{reaction.equation}'.equilibrium"
                changes.append(Change(place, f"{key}{f' [{unit.strip()}]' * bool(unit)}", before, after[k]))
    return changes


def _close(potential: dict[str, Any], species: Species, moved: np.ndarray, shifts: Sequence[Shift]) -> list[Change]:
    """Applies what closing moved in the constants of every range but the lowest."""
    changes = []
    for k, shift in enumerate(shifts, 1):
        row = potential["a"][k]
        for (place, size, symbol), column in zip(_CONSTANTS[potential["form"]], (7, 8), strict=True):
            before = float(row[place])
            row[place] = before + size * float(moved[k, column])
            if row[place] != before:
                entry = f"species.{species.name}.potential.a[{k + 1}]"
                changes.append(Change(entry, f"{symbol} of the range above {shift.temperature:g} K", before, row[place]))
    return changes


def repaired_text(mechanism: Mechanism, original: str | None) -> tuple[str, tuple[Change, ...]]:
    """The repaired mechanism as TOML: the original text with only these numbers replaced where that can be done (comments
    and spelling stay), else written anew."""
    document, changes = repaired(mechanism)
    if original is not None:
        edited = _edited(original, mechanism.document, document)
        if edited is not None and parse_toml(edited) == document:
            return edited, changes
    return to_toml(document), changes


_LIST = re.compile(r"\[[^\[\]]*\]")
_NUMBER = re.compile(r"[-+0-9.eE_]+")


def _edited(text: str, old: Mapping[str, Any], new: Mapping[str, Any]) -> str | None:
    """The text with the rows that differ replaced, each looked for behind its species' header; None if one is not found."""
    for name, species in new["species"].items():
        rows, kept = (one.get("potential", {}).get("a", []) for one in (species, old["species"][name]))
        for row, before in zip(rows, kept, strict=True):
            if list(row) != list(before):
                found = _place(text, name, before)
                if found is None:
                    return None
                text = text[: found[0]] + _with_numbers(text[found[0] : found[1]], before, row) + text[found[1] :]
    return text


def _place(text: str, name: str, row: Sequence[float]) -> tuple[int, int] | None:
    """Where a row of coefficients stands behind the header of its species."""
    spelled = "|".join(f"{quote}{re.escape(name)}{quote}" for quote in ("", '"', "'"))
    header = re.search(rf"^\s*\[\s*species\s*\.\s*(?:{spelled})\s*[.\]]", text, re.MULTILINE)
    for match in _LIST.finditer(text, header.end()) if header else ():
        numbers = [word.group().replace("_", "") for word in _NUMBER.finditer(match.group())]
        if len(numbers) == len(row) and all(_equal(word, value) for word, value in zip(numbers, row, strict=True)):
            return match.span()
    return None


def _equal(word: str, value: float) -> bool:
    try:
        return float(word) == float(value)
    except ValueError:
        return False


def _with_numbers(text: str, before: Sequence[float], after: Sequence[float]) -> str:
    """The text of a list with its changed members replaced."""
    new = iter(zip(before, after, strict=True))

    def number(match: re.Match[str]) -> str:
        old, value = next(new)
        return match.group() if old == value else repr(float(value))

    return _NUMBER.sub(number, text)
