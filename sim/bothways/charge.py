"""The charge of a batch: amounts from ratios, amounts, concentrations or an equivalence ratio, with T, p and V."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from .constants import GAS_CONSTANT as R
from .entry import Entry
from .errors import nearest
from .mechanism import Mechanism

WAYS = ("mole_ratio", "mass_ratio", "amount", "concentration", "fuel")


@dataclass(frozen=True)
class Charge:
    """amount (N) [mol] at temperature [K], pressure [Pa], volume [m3]."""

    amount: np.ndarray
    temperature: float
    pressure: float
    volume: float

    @property
    def concentration(self) -> np.ndarray:
        """(N) [mol/m3]."""
        return self.amount / self.volume


def read_charge(start: Entry, mechanism: Mechanism, holds: str, volume: float | None) -> Charge:
    """The charge of the table [start] in a vessel of `volume` [m3] (1 m3 where none is stated)."""
    temperature = start.quantity("temperature", "temperature", sign="positive")
    stated = [way for way in WAYS if way in start.data]
    if len(stated) != 1:
        found = " and ".join(stated) + " are stated" if stated else "no charge is stated"
        raise start.error(found, expected="one of mole_ratio, mass_ratio, amount, concentration, or fuel with oxidiser")
    if stated[0] in ("amount", "concentration"):
        charge = _absolute(start, stated[0], mechanism, holds, volume, temperature)
    else:
        charge = _relative(start, stated[0], mechanism, volume, temperature)
    start.done()
    return charge


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
                              remedy="leave out vessel.volume or start.pressure: each follows from the others")
        return Charge(amount, temperature, pressure, float(np.sum(amount)) * R * temperature / pressure)
    if pressure is not None:
        raise start.error("concentrations, temperature and pressure are all stated",
                          remedy="leave out start.pressure: it follows from the others")
    space = 1.0 if volume is None else volume
    return Charge(amount, temperature, float(np.sum(amount)) * R * temperature / space, space)


def _named(start: Entry, key: str, mechanism: Mechanism, kind: str = "") -> np.ndarray:
    """Numbers by species name, (N); unknown names and an empty sum are errors."""
    table: Mapping[str, float] = start.named_numbers(key, kind)
    values = np.zeros(len(mechanism.species))
    for name, value in table.items():
        if name not in mechanism.names:
            raise start.error(f"no species '{name}' in mechanism '{mechanism.name}' "
                              f"({nearest(name, mechanism.names)})", key=key)
        values[mechanism.index(name)] = value
    if not np.sum(values) > 0:
        raise start.error("the charge is empty", expected="at least one species in a positive amount", key=key)
    return values


def _fuel_and_oxidiser(start: Entry, mechanism: Mechanism) -> np.ndarray:
    """Fuel and oxidiser at an equivalence ratio, for complete products CO2, H2O, N2, SO2."""
    fuel, oxidiser = (_named(start, key, mechanism) for key in ("fuel", "oxidiser"))
    ratio = start.number("equivalence_ratio", sign="positive")
    needs = np.array([oxygen_atoms_needed(s.composition) for s in mechanism.species])
    for key, parts, sign in (("fuel", fuel, 1.0), ("oxidiser", oxidiser, -1.0)):
        if not sign * float(parts @ needs) > 0:
            word = "needs no oxygen" if key == "fuel" else "brings no oxygen"
            raise start.error(f"this {key} {word}", expected="a fuel that burns and an oxidiser that carries oxygen",
                              key=key)
    return fuel * (ratio / float(fuel @ needs)) + oxidiser / -float(oxidiser @ needs)


def oxygen_atoms_needed(composition: Mapping[str, int]) -> float:
    """Atoms of O one molecule takes up to become CO2, H2O, N2 and SO2; negative if it brings some."""
    need = {"C": 2.0, "H": 0.5, "D": 0.5, "S": 2.0, "O": -1.0}
    return sum(need.get(symbol, 0.0) * count for symbol, count in composition.items())
