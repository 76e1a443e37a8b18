"""The charge of a batch: amounts from ratios, amounts, concentrations or an equivalence ratio, with T, p and V."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from .constants import GAS_CONSTANT as R
from .entry import REQUIRED, Entry
from .errors import closest
from .mechanism import Mechanism
from .mechanism.phase import LITRE, SOLUTION

WAYS = ("mole_ratio", "mass_ratio", "amount", "concentration", "fuel")
_OXYGEN_NEEDED = {"C": 2.0, "H": 0.5, "D": 0.5, "S": 2.0, "O": -1.0, "N": 0.0,
                  "He": 0.0, "Ne": 0.0, "Ar": 0.0, "Kr": 0.0, "Xe": 0.0}
"""Atoms of O that an atom takes up in the complete products CO2, H2O, N2 and SO2."""


@dataclass(frozen=True)
class Charge:
    """amount (N) [mol] at temperature [K], pressure [Pa] (NaN of a solution), volume [m3]."""

    amount: np.ndarray
    temperature: float
    pressure: float
    volume: float

    @property
    def concentration(self) -> np.ndarray:
        """(N) [mol/m3]."""
        return self.amount / self.volume


def read_charge(start: Entry, mechanism: Mechanism, holds: str, volume: float | None,
                given: float | None = None) -> Charge:
    """The charge of the table [start] in a vessel of `volume` [m3] (1 m3 where none is stated).

    given : temperature at the start [K] where the vessel gives it; none need be stated then.
    """
    temperature = start.quantity("temperature", "temperature", REQUIRED if given is None else given, "positive")
    way = _way(start)
    if mechanism.phase == SOLUTION:
        return _dissolved(start, way, mechanism, volume, temperature)
    with np.errstate(all="ignore"):  # what leaves the range of floating-point numbers is reported below
        if way in ("amount", "concentration"):
            charge = _absolute(start, way, mechanism, holds, volume, temperature)
        else:
            charge = _relative(start, way, mechanism, volume, temperature)
    start.done()
    _check_range(start, way, charge)
    return charge


def _way(start: Entry) -> str:
    """How the charge is stated: one of WAYS."""
    start.known.update(WAYS)
    stated = [way for way in WAYS if way in start.data]
    if len(stated) != 1:
        found = " and ".join(stated) + " are stated" if stated else "no charge is stated"
        near = [(key, way) for key in start.data if key not in start.known for way in closest(key, WAYS)[:1]]
        missing = "is '{}' meant to be {}?".format(*near[0]) if near else "add one"
        raise start.error(found, remedy="leave the others out" if stated else missing,
                          expected="one of mole_ratio, mass_ratio, amount, concentration, or fuel with oxidiser and "
                          "equivalence_ratio")
    return stated[0]


def _check_range(start: Entry, way: str, charge: Charge) -> None:
    numbers = np.append(charge.amount, [np.sum(charge.amount), charge.pressure, charge.volume])
    if not (np.all(np.isfinite(numbers)) and np.min(numbers[-3:]) > 0):
        raise start.error(f"amount {numbers[-3]:g} mol, pressure {numbers[-2]:g} Pa, volume {numbers[-1]:g} m3",
                          expected="positive, finite values", remedy="correct the charge or the volume", key=way)


def _relative(start: Entry, way: str, mechanism: Mechanism, volume: float | None, temperature: float) -> Charge:
    pressure = start.quantity("pressure", "pressure", sign="positive")
    parts = _fuel_and_oxidiser(start, mechanism) if way == "fuel" else _named(start, way, mechanism)
    if way == "mass_ratio":
        parts = parts / mechanism.molar_mass
    space = 1.0 if volume is None else volume
    total = pressure * space / (R * temperature)
    return Charge(parts / np.sum(parts) * total, temperature, pressure, space)


def _absolute(start: Entry, way: str, mechanism: Mechanism, holds: str, volume: float | None,
              temperature: float) -> Charge:
    amount = _named(start, way, mechanism, way)
    if way == "concentration":
        space = 1.0 if volume is None else volume
        amount = amount * space
    pressure = start.quantity("pressure", "pressure", None, "positive")
    if way == "amount" and pressure is not None:
        if volume is not None:
            raise start.error("amounts, temperature, volume and pressure are all stated",
                              expected="three of them",
                              remedy="leave out vessel.volume or start.pressure: each follows from the others")
        return Charge(amount, temperature, pressure, float(np.sum(amount)) * R * temperature / pressure)
    if pressure is not None:
        raise start.error("concentrations, temperature and pressure are all stated", expected="two of them",
                          remedy="leave out start.pressure: it follows from the others")
    space = 1.0 if volume is None else volume
    return Charge(amount, temperature, float(np.sum(amount)) * R * temperature / space, space)


def _dissolved(start: Entry, way: str, mechanism: Mechanism, volume: float | None, temperature: float) -> Charge:
    """The charge of a solution: amounts or concentrations in a stated volume, neutral, without a pressure."""
    if "pressure" in start.data:
        raise start.error("a pressure is stated for a solution", expected="temperature and concentrations or amounts",
                          remedy="leave it out: its volume is constant and pressure plays no part", key="pressure")
    if way not in ("amount", "concentration"):
        raise start.error(f"{way} states no concentrations", expected="concentration, or amount with vessel.volume", key=way,
                          remedy="state the concentrations of all species, the solvent's included if it is one")
    if way == "amount" and volume is None:
        raise start.error("amounts are stated, but no volume", expected="vessel.volume, that of the solution", key=way,
                          remedy="add it under [vessel], or state concentrations")
    space = 1.0 if volume is None else volume
    amount = _named(start, way, mechanism, way) * (1.0 if way == "amount" else space)
    start.done()
    if not np.all(np.isfinite([*amount, np.sum(amount)])):
        raise start.error("amounts beyond the range of the arithmetic", expected="finite values", remedy="correct it", key=way)
    _check_neutral(start, way, mechanism, amount, space)
    return Charge(amount, temperature, float("nan"), space)


NEUTRAL = 1e-9
"""Charges of a solution must cancel to this part of their sum of sizes [-]: round-off of stated digits, no more."""


def _check_neutral(start: Entry, way: str, mechanism: Mechanism, amount: np.ndarray, volume: float) -> None:
    charges = np.array([s.charge for s in mechanism.species])
    excess, size = float(charges @ amount), float(np.abs(charges) @ amount)
    if abs(excess) > NEUTRAL * size:
        raise start.error(f"the solution is not neutral: {excess / volume / LITRE:+.6g} mol/L of charge is in excess",
                          expected="charges that cancel", key=way,
                          remedy=f"add the {'anion' if excess > 0 else 'cation'} that is missing, or correct an amount")


def _named(start: Entry, key: str, mechanism: Mechanism, kind: str = "") -> np.ndarray:
    """Numbers by species name, (N); unknown names and an empty sum are errors."""
    table: Mapping[str, float] = start.named_numbers(key, "species", mechanism.names, kind)
    values = np.zeros(len(mechanism.species))
    for name, value in table.items():
        values[mechanism.index(name)] = value
    if not np.sum(values) > 0:
        raise start.error("the charge is empty", expected="at least one species in a positive amount", key=key)
    return values


def _fuel_and_oxidiser(start: Entry, mechanism: Mechanism) -> np.ndarray:
    """Fuel and oxidiser at an equivalence ratio, for complete products CO2, H2O, N2, SO2."""
    fuel, oxidiser = (_named(start, key, mechanism) for key in ("fuel", "oxidiser"))
    ratio = start.number("equivalence_ratio", sign="positive")
    needs = _needs(start, mechanism, fuel, oxidiser)
    for key, parts, sign in (("fuel", fuel, 1.0), ("oxidiser", oxidiser, -1.0)):
        if not sign * float(parts @ needs) > 0:
            word = "needs no oxygen" if key == "fuel" else "brings no oxygen"
            raise start.error(f"this {key} {word}", expected="a fuel that burns and an oxidiser that carries oxygen",
                              remedy="correct it, or state a mole_ratio", key=key)
    return fuel * (ratio / float(fuel @ needs)) + oxidiser / -float(oxidiser @ needs)


def _needs(start: Entry, mechanism: Mechanism, fuel: np.ndarray, oxidiser: np.ndarray) -> np.ndarray:
    """Oxygen atoms needed by a molecule of each species, (N); an error where what is charged has no known products."""
    for key, parts in (("fuel", fuel), ("oxidiser", oxidiser)):
        for k in np.flatnonzero(parts):
            strange = set(mechanism.species[k].composition) - set(_OXYGEN_NEEDED)
            if strange:
                raise start.error(f"{mechanism.names[k]} holds {', '.join(sorted(strange))}, whose complete products are "
                                  "not known", expected=f"the elements {', '.join(_OXYGEN_NEEDED)} only",
                                  remedy="state a mole_ratio", key=key)
    kept = mechanism.__dict__
    if "_oxygen_needed" not in kept:
        kept["_oxygen_needed"] = np.array([oxygen_atoms_needed(s.composition) for s in mechanism.species])
    return kept["_oxygen_needed"]


def oxygen_atoms_needed(composition: Mapping[str, int]) -> float:
    """Atoms of O one molecule takes up to become CO2, H2O, N2 and SO2; negative if it brings some."""
    return sum(_OXYGEN_NEEDED.get(symbol, 0.0) * count for symbol, count in composition.items())
