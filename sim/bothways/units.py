"""Quantities with units: a closed, small table, SI inside.

Conversions are exact definitions (BIPM, The International System of Units, 9th ed., 2019; NIST Special
Publication 811, 2008, for atm, cal_th and Torr).
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from numbers import Real

from .constants import ATMOSPHERE, AVOGADRO, ELEMENTARY_CHARGE, GAS_CONSTANT, THERMOCHEMICAL_CALORIE
from .errors import InputError, hint, shown

_CAL = THERMOCHEMICAL_CALORIE

UNITS: dict[str, dict[str, float]] = {
    "temperature": {"K": 1.0, "mK": 1e-3, "°C": 1.0, "degC": 1.0},
    "pressure": {"Pa": 1.0, "hPa": 100.0, "kPa": 1e3, "MPa": 1e6, "bar": 1e5, "mbar": 100.0,
                 "atm": ATMOSPHERE, "Torr": ATMOSPHERE / 760.0},
    "time": {"s": 1.0, "ms": 1e-3, "us": 1e-6, "\u00b5s": 1e-6, "\u03bcs": 1e-6, "ns": 1e-9, "min": 60.0, "h": 3600.0,
             "d": 86400.0},
    "length": {"m": 1.0, "dm": 0.1, "cm": 1e-2, "mm": 1e-3, "um": 1e-6, "\u00b5m": 1e-6, "\u03bcm": 1e-6, "nm": 1e-9,
               "pm": 1e-12, "\u00c5": 1e-10, "\u212b": 1e-10},
    "volume": {"m3": 1.0, "m³": 1.0, "L": 1e-3, "l": 1e-3, "mL": 1e-6, "ml": 1e-6, "dm3": 1e-3, "cm3": 1e-6,
               "cm³": 1e-6},
    "amount": {"mol": 1.0, "mmol": 1e-3, "kmol": 1e3, "molecule": 1.0 / AVOGADRO},
    "mass": {"kg": 1.0, "g": 1e-3, "mg": 1e-6, "t": 1e3},
    "molar mass": {"kg/mol": 1.0, "g/mol": 1e-3, "kg/kmol": 1e-3},
    "molar energy": {"J/mol": 1.0, "kJ/mol": 1e3, "cal/mol": _CAL, "kcal/mol": 1e3 * _CAL, "K": GAS_CONSTANT,
                     "eV": ELEMENTARY_CHARGE * AVOGADRO},
    "molar heat capacity": {"J/(mol K)": 1.0, "kJ/(mol K)": 1e3, "cal/(mol K)": _CAL, "kcal/(mol K)": 1e3 * _CAL},
    "concentration": {"mol/m3": 1.0, "mol/L": 1e3, "mmol/L": 1.0, "kmol/m3": 1e3, "mol/cm3": 1e6, "mol/m³": 1.0},
    "heat capacity": {"J/K": 1.0, "kJ/K": 1e3},
    "heat transfer": {"W/K": 1.0, "kW/K": 1e3},
}
"""Unit spellings of each kind of quantity and their factors to SI; °C carries an offset besides."""

_CELSIUS = {"°C": 273.15, "degC": 273.15}
SI_UNIT = {kind: next(iter(table)) for kind, table in UNITS.items()}
_KIND_OF_UNIT = {unit: kind for kind, table in reversed(UNITS.items()) for unit in table}


def parse_quantity(text: str, kind: str) -> float:
    """The SI value of a quantity such as "3.4 Å" of the given kind.

    Raises InputError (with neither file nor entry) for a malformed number or a unit unknown or of another kind.
    """
    number, *rest = text.split(maxsplit=1) or [""]
    unit = "".join(rest).rstrip()
    try:
        value = float(number)
    except ValueError:
        raise InputError(f"{shown(text)} is not a number with its unit", expected=_example(kind)) from None
    if unit not in UNITS[kind]:
        raise InputError(_unit_problem(text, unit, kind), expected=_example(kind))
    return value * UNITS[kind][unit] + _CELSIUS.get(unit, 0.0)


def _unit_problem(text: str, unit: str, kind: str) -> str:
    if not unit:
        return f"{shown(text)} has no unit"
    if unit in _KIND_OF_UNIT:
        return f"{shown(text)}: {unit} is a unit of {_KIND_OF_UNIT[unit]}, not of {kind}"
    return f"{shown(text)}: unknown unit {shown(unit)}{hint(unit, UNITS[kind])}"


def _example(kind: str) -> str:
    return f"a {kind} such as \"1.5 {SI_UNIT[kind]}\" (units: {', '.join(UNITS[kind])})"


@dataclass(frozen=True)
class UnitSystem:
    """Units of the bare numbers in a mechanism file: factors to SI, and the names they were stated by."""

    length: str = "m"
    amount: str = "mol"
    time: str = "s"
    molar_energy: str = "J/mol"
    pressure: str = "Pa"

    def factor(self, kind: str) -> float:
        """SI value of one bare unit of `kind` [-]; kinds that no file unit governs are SI."""
        if kind == "molar heat capacity":
            return self.factor("molar energy")
        if kind == "volume":
            return self.factor("length") ** 3
        name = getattr(self, kind.replace(" ", "_"), None)
        return UNITS[kind][name] if name else 1.0

    def rate_factor(self, order: float) -> float:
        """SI value [(m3/mol)^(order-1)/s] of one bare unit of a rate constant of that order."""
        concentration = self.factor("amount") / self.factor("length") ** 3
        try:
            return concentration ** (1 - order) / self.factor("time")
        except OverflowError:
            return math.inf


_FILE_KINDS = ("length", "amount", "time", "molar energy", "pressure")


def unit_system(names: Sequence[object]) -> UnitSystem:
    """The unit system that a mechanism's `units` list states, SI where a kind is left out."""
    chosen: dict[str, str] = {}
    for name in names:
        kind = next((k for k in _FILE_KINDS if isinstance(name, str) and name in UNITS[k]), None)
        if kind is None:
            known = [unit for k in _FILE_KINDS for unit in UNITS[k]]
            raise InputError(f"unknown unit {shown(name)}{hint(name, known)}",
                             expected="units of length, amount, time, molar energy and pressure")
        if kind in chosen:
            raise InputError(f"two units of {kind}: {chosen[kind]} and {name}", expected="one of each kind")
        chosen[kind] = str(name)
    return UnitSystem(**{kind.replace(" ", "_"): name for kind, name in chosen.items()})


def finite(value: object) -> bool:
    """Whether `value` is a finite number (booleans are not numbers)."""
    if not isinstance(value, (float, int, Real)) or isinstance(value, bool):
        return False
    try:
        return math.isfinite(value)
    except OverflowError:  # an integer beyond the range of float
        return False
