"""From a plain document (what a TOML file holds, or a dict made in Python) to a Mechanism."""

from collections.abc import Mapping, Sequence
from typing import Any

from ..entry import Entry, odd_character
from ..errors import InputError, shown
from ..rates import Setting
from ..rates.law import PressureNodes, Series
from ..thermo import Substance, read_potential
from ..thermo.polynomial import LARGEST
from ..thermo.unstated import Unstated
from ..units import UnitSystem, unit_system
from .elements import ATOMIC_MASS, ATOMIC_NUMBER, check_atoms, parse_formula, unknown_element
from .equation import ARROWS, is_coefficient
from .model import Mechanism, Reaction, Species, copy_document
from .phase import GAS, LITRE, PER_LITRE, PHASES, SOLUTION, read_standard
from .reactions import read_reactions
from .reduction import check_reduction
from .stated_equilibria import resolve

JOINS = ("closed", "as published")
_OF_PRESSURE = PressureNodes, Series
_LEAST_HEAT_CAPACITY = {GAS: 1.0, SOLUTION: -LARGEST}
"""cp/R of any species must be above this [-]: in a gas cV = cp - R must be positive; in a solution that of an ion may be
negative, and the whole charge's must be positive (case.py)."""


def build(document: Mapping[str, Any], file: object = None, lenient: bool = False) -> Mechanism:
    """The mechanism that a document states; raises InputError naming file and entry at the first fault.

    lenient : for audits, take stated equilibria that contradict one another, adjusted by least squares.
    """
    top = Entry(document, "", file)
    if "mechanism" not in top.data and "case" in top.data:
        raise top.error("this is a case", expected="a mechanism", remedy="'bothways run' runs a case")
    top.expect("mechanism", "elements", "species", "reaction", "reduction")
    head = _head(top)
    check_reduction(top)
    units, masses = head.units, {**ATOMIC_MASS, **_building_blocks(top)}
    name, phase = head.text("name"), head.text("phase", choices=PHASES)
    standard, state = read_standard(head, phase)
    joins = head.text("joins", "closed", choices=JOINS)
    sources = head.texts("sources", ())
    head.done(also=("units",))
    species = _species(top, units, masses, standard, _LEAST_HEAT_CAPACITY[phase])
    setting = Setting(joins, standard, LITRE if state == PER_LITRE else None, ATOMIC_NUMBER)
    reactions = read_reactions(top, units, species, setting)
    if phase == SOLUTION:
        _refuse_partners(top, reactions)
    found = resolve(top, species, reactions, standard, joins, lenient)
    return Mechanism(name, phase, standard, joins, sources, masses, found.species, reactions, copy_document(document), file,
                     state, found.notes, found.undetermined, found.system)


def _head(top: Entry) -> Entry:
    head = top.table("mechanism")
    try:
        head.units = unit_system(head.items("units", (), '["cm", "mol", "s"]'))
    except InputError as err:
        raise head.error(err.problem, expected=err.expected, remedy=err.remedy, key="units") from None
    return head


def _building_blocks(top: Entry) -> dict[str, float]:
    blocks = top.named_numbers("elements", "building block", kind="molar mass", sign="positive", default={})
    for symbol in blocks:
        if symbol in ATOMIC_MASS:
            raise top.error(f"'{symbol}' is a chemical element", key="elements", expected="building blocks that are none",
                            remedy="its molar mass is known: leave it out, or choose another symbol")
        if not (symbol.isalpha() and symbol[0].isupper() and (len(symbol) == 1 or symbol[1:].islower())):
            raise top.error(f"{shown(symbol)} cannot be a building block", key="elements",
                            expected="a capital letter, perhaps followed by small ones")
    return blocks


def _species(top: Entry, units: UnitSystem, masses: Mapping[str, float], standard: float,
             least: float) -> tuple[Species, ...]:
    table = top.table("species")
    if not table.data:
        raise top.error("no species", expected="at least one table [species.NAME]", key="species")
    species = tuple(_one_species(Entry(data, f"species.{name}", top.file, units), name, masses, standard, least)
                    for name, data in table.data.items())
    _check_scales(table)
    return species


def _check_scales(table: Entry) -> None:
    """ΔfG° holds the entropies of the elements, S° does not: mixed in one mechanism they would falsify every K."""
    stated = {name: data.get("potential", {}) for name, data in table.data.items()}
    by_G = [name for name, potential in stated.items() if "G" in potential]
    others = [name for name, potential in stated.items() if not {"G", "cp"} >= set(potential) - {"form"} and name not in by_G]
    if by_G and others:
        raise table.error(f"{by_G[0]} states G (of formation), {others[0]} an absolute entropy: their potentials count from "
                          "different zeros", expected="one kind for all species", key=f"{by_G[0]}.potential.G",
                          remedy="state S, the standard entropy, instead of G")


def _one_species(entry: Entry, name: str, masses: Mapping[str, float], standard: float, least: float) -> Species:
    _check_name(entry, name)
    composition, charge = _composition(entry, masses), _charge(entry)
    pressure = entry.quantity("standard_pressure", "pressure", standard, sign="positive")
    source = entry.text("source", "")
    diameter = entry.quantity("collision_diameter", "length", None, sign="positive")
    well_depth = entry.quantity("well_depth", "temperature", None, sign="positive")
    molar_mass = sum(masses[e] * count for e, count in composition.items())
    substance = Substance(composition, charge, molar_mass, pressure, ATOMIC_NUMBER)
    bare = least < 0 and entry.get("potential", None) is None
    potential = Unstated() if bare else read_potential(entry.table("potential"), substance, least)
    entry.done()
    return Species(name, composition, charge, molar_mass, potential, pressure, source, diameter, well_depth)


def _check_name(entry: Entry, name: str) -> None:
    blank = not name or any(c.isspace() for c in name) or odd_character(name)
    if blank or name in ("M", "+", *ARROWS) or is_coefficient(name):
        raise entry.error(f"{shown(name)} cannot be the name of a species", remedy="choose another name",
                          expected="no white space, no number, and not M, + or =")


def _charge(entry: Entry) -> int:
    charge = entry.number("charge", 0)
    if charge != int(charge):
        raise entry.error(f"{charge} is not a whole number", expected="a whole number of charges", key="charge")
    return int(charge)


def _composition(entry: Entry, masses: Mapping[str, float]) -> dict[str, int]:
    entry.known.update(("formula", "composition"))
    if ("formula" in entry.data) == ("composition" in entry.data):
        raise entry.error("formula and composition are " + ("both stated" if "formula" in entry.data else "both missing"),
                          expected="one of them", remedy="state the elements the species is made of, once")
    key = "formula" if "formula" in entry.data else "composition"
    try:
        return parse_formula(entry.text(key), masses) if key == "formula" else _counted(entry, masses)
    except InputError as err:
        if err.entry:
            raise
        raise entry.error(err.problem, expected=err.expected, remedy=err.remedy, key=key) from None


def _counted(entry: Entry, masses: Mapping[str, float]) -> dict[str, int]:
    counts = entry.named_numbers("composition", "element", sign="positive")
    for symbol in counts:
        if symbol not in masses:
            raise unknown_element(symbol, masses)
    check_atoms(counts)
    return {symbol: int(count) for symbol, count in counts.items()}


def _refuse_partners(top: Entry, reactions: Sequence[Reaction]) -> None:
    """Collision partners and laws of pressure belong to gases: an error where a solution has one."""
    for number, reaction in enumerate(reactions, 1):
        if reaction.equation.partner or any(term.partner or isinstance(term.law.part(), _OF_PRESSURE) for term in reaction.terms):
            raise top.error("a collision partner or a law of pressure in a solution", expected="a law of temperature alone",
                            key=f"reaction {number} '{reaction.equation}'",
                            remedy="state the rate constant of the solution, and the solvent as a species where it reacts")
