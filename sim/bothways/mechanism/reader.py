"""From a plain document (what a TOML file holds, or a dict made in Python) to a Mechanism."""

from collections.abc import Mapping
from typing import Any

from ..entry import Entry
from ..errors import InputError
from ..thermo import read_potential
from ..units import UnitSystem, unit_system
from .elements import ATOMIC_MASS, parse_formula
from .model import Mechanism, Reaction, Species, copy_document
from .reactions import read_reactions

PHASES = ("ideal gas",)
JOINS = ("closed", "as published")


def build(document: Mapping[str, Any], file: object = None) -> Mechanism:
    """The mechanism that a document states; raises InputError naming file and entry at the first fault."""
    top = Entry(document, "", file)
    head = _head(top)
    units, masses = head.units, {**ATOMIC_MASS, **_building_blocks(top)}
    name, phase = head.text("name"), head.text("phase", choices=PHASES)
    standard = head.quantity("standard_pressure", "pressure", sign="positive")
    joins = head.text("joins", "closed", choices=JOINS)
    sources = head.texts("sources", ())
    head.done(also=("units",))
    species = _species(top, units, masses, standard)
    reactions = read_reactions(top, units, species)
    top.done()
    return Mechanism(name, phase, standard, joins, sources, masses, species, reactions, copy_document(document), file)


def _head(top: Entry) -> Entry:
    head = top.table("mechanism")
    stated = head.get("units", ())
    if not isinstance(stated, (list, tuple)):
        raise head.error(f"{stated!r} is not a list", expected='a list such as ["cm", "mol", "s"]', key="units")
    try:
        head.units = unit_system(stated)
    except InputError as err:
        raise head.error(err.problem, expected=err.expected, key="units") from None
    return head


def _building_blocks(top: Entry) -> dict[str, float]:
    blocks = top.named_numbers("elements", "molar mass", "positive", {})
    for symbol in blocks:
        if not (symbol.isalpha() and symbol[0].isupper() and (len(symbol) == 1 or symbol[1:].islower())):
            raise top.error(f"'{symbol}' cannot be a building block", key="elements",
                            expected="a capital letter, perhaps followed by small ones")
    return blocks


def _species(top: Entry, units: UnitSystem, masses: Mapping[str, float], standard: float) -> tuple[Species, ...]:
    table = top.get("species", what="tables [species.NAME]")
    if not isinstance(table, Mapping) or not table:
        raise top.error("no species", expected="at least one table [species.NAME]", key="species")
    return tuple(_one_species(Entry(data, f"species.{name}", top.file, units), name, masses, standard)
                 for name, data in table.items())


def _one_species(entry: Entry, name: str, masses: Mapping[str, float], standard: float) -> Species:
    if not name or any(c.isspace() for c in name) or name in ("M", "+", "=", "⇌", "⇄"):
        raise entry.error(f"'{name}' cannot be the name of a species", expected="no white space, and not M, + or =")
    composition = _composition(entry, masses)
    charge = entry.number("charge", 0)
    if charge != int(charge):
        raise entry.error(f"{charge} is not a whole number", expected="a whole number of charges", key="charge")
    species = Species(
        name, composition, int(charge), sum(masses[e] * count for e, count in composition.items()),
        read_potential(entry.table("potential")),
        entry.quantity("standard_pressure", "pressure", standard, sign="positive"), entry.text("source", ""),
        entry.quantity("collision_diameter", "length", None, sign="positive"),
        entry.quantity("well_depth", "temperature", None, sign="positive"))
    entry.done()
    return species


def _composition(entry: Entry, masses: Mapping[str, float]) -> dict[str, int]:
    entry.known.update(("formula", "composition"))
    if ("formula" in entry.data) == ("composition" in entry.data):
        raise entry.error("formula and composition are " + ("both stated" if "formula" in entry.data else "both missing"),
                          expected="one of them")
    if "formula" in entry.data:
        try:
            return parse_formula(entry.text("formula"), masses)
        except InputError as err:
            raise entry.error(err.problem, expected=err.expected, remedy=err.remedy, key="formula") from None
    return _counted(entry, masses)


def _counted(entry: Entry, masses: Mapping[str, float]) -> dict[str, int]:
    counts = entry.named_numbers("composition", sign="positive")
    for symbol, count in counts.items():
        if symbol not in masses:
            raise entry.error(f"unknown element '{symbol}'", key="composition",
                              remedy="state its molar mass under [elements] if it is a building block")
        if count != int(count):
            raise entry.error(f"{count} atoms of {symbol}", expected="a whole number", key="composition")
    if not counts:
        raise entry.error("no atoms", expected="at least one element", key="composition")
    return {symbol: int(count) for symbol, count in counts.items()}
