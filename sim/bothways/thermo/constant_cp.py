"""A constant heat capacity: h = H + cp (T - T₀), s = S + cp ln(T/T₀), or with G, S = (H - G)/T₀.

Textbook relations of an ideal substance with cp independent of T; good over narrow ranges only. No range limits.
"""

from dataclasses import dataclass

import numpy as np

from ..constants import GAS_CONSTANT
from ..entry import Entry
from .polynomial import Ranges, constant_row
from .potential import Potential, Substance
from .unstated import Unstated

NAME = "constant heat capacity"


@dataclass(frozen=True)
class ConstantHeatCapacity(Potential):
    """at [K]; H [J/mol], S [J/(mol K)] there; cp [J/(mol K)]."""

    at: float
    H: float
    S: float
    cp: float

    def ranges(self) -> Ranges:
        """The form in common coefficients, one range without ends."""
        RT = GAS_CONSTANT * self.at
        row = constant_row(self.at, self.cp / GAS_CONSTANT, self.H / RT, self.S / GAS_CONSTANT)
        return Ranges(np.array([0.0, np.inf]), row[None, :])


def read(entry: Entry, substance: Substance) -> ConstantHeatCapacity | Unstated:
    """The form from its table, cp alone where equilibria of reactions say the rest.

    Errors: S and G both or neither stated, `at` not positive.
    """
    if set(entry.data) == {"form", "cp"}:
        return Unstated(entry.quantity("cp", "molar heat capacity"))
    at = entry.quantity("at", "temperature", sign="positive")
    H = entry.quantity("H", "molar energy")
    cp = entry.quantity("cp", "molar heat capacity")
    if ("S" in entry.data) == ("G" in entry.data):
        raise entry.error("S and G are " + ("both stated" if "S" in entry.data else "both missing"),
                          expected="one of S (standard entropy) and G (standard Gibbs energy of formation)")
    if "G" in entry.data:
        return ConstantHeatCapacity(at, H, (H - entry.quantity("G", "molar energy")) / at, cp)
    return ConstantHeatCapacity(at, H, entry.quantity("S", "molar heat capacity"), cp)
