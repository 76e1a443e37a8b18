"""A particle without structure: translation alone, and an energy at rest.

s/R = ln[(2π m k_B T/h²)^(3/2) k_B T/p°] + 5/2 (O. Sackur, Ann. Phys. 36 (1911) 958, doi:10.1002/andp.19113411505; H. Tetrode,
Ann. Phys. 38 (1912) 434, doi:10.1002/andp.19123430708), cp = 5R/2: one row of the common coefficients.
"""

import math
from dataclasses import dataclass

import numpy as np

from ..constants import AVOGADRO, BOLTZMANN, GAS_CONSTANT, PLANCK
from ..entry import Entry
from .polynomial import N_COEFFICIENTS, Ranges
from .potential import Potential, Substance

NAME = "structureless particle"


@dataclass(frozen=True)
class StructurelessParticle(Potential):
    """energy [J/mol] at rest (its enthalpy at 0 K), molar mass [kg/mol], standard pressure [Pa]."""

    energy: float
    molar_mass: float
    standard_pressure: float

    def ranges(self) -> Ranges:
        """One row without ends."""
        return one_row(2.5, self.energy, 2.5 + log_translation(self.molar_mass, self.standard_pressure))


def log_translation(molar_mass: float, standard_pressure: float) -> float:
    """ln[(2π m k_B/h²)^(3/2) k_B/p°], SI: what ln(q/N) of translation has besides (5/2) ln T."""
    m = molar_mass / AVOGADRO
    return 1.5 * math.log(2 * math.pi * m * BOLTZMANN / PLANCK**2) + math.log(BOLTZMANN / standard_pressure)


def one_row(cp: float, energy: float, entropy: float) -> Ranges:
    """A constant cp/R from 0 K on: h = energy [J/mol] + cp T, s/R = cp ln(T/K) + entropy."""
    row = np.zeros(N_COEFFICIENTS)
    row[[2, 7, 8]] = cp, energy / GAS_CONSTANT, entropy
    return Ranges(np.array([0.0, np.inf]), row[None, :])


def check_gas(entry: Entry, standard_pressure: float, key: str = "form") -> None:
    """An error in a solution, whose standard pressure is NaN: what moves as in an ideal gas is no dissolved species."""
    if not standard_pressure > 0:
        raise entry.error(f"'{entry.text(key)}' in a solution", key=key, expected=f"a {key} of dissolved species",
                          remedy="state another, or make the phase an ideal gas")


def read(entry: Entry, substance: Substance) -> StructurelessParticle:
    """The form from its table."""
    check_gas(entry, substance.standard_pressure)
    energy = entry.quantity("energy", "molar energy")
    return StructurelessParticle(energy, substance.molar_mass, substance.standard_pressure)
