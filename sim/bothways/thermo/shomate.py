"""Shomate's equation as the NIST Chemistry WebBook (SRD 69) states it; t = T/1000, J/(mol K) and kJ/mol.

cp = A + B t + C t² + D t³ + E/t²; S° = A ln t + B t + C t²/2 + D t³/3 - E/(2 t²) + G (C.H. Shomate, J. Phys. Chem. 58
(1954) 368, doi:10.1021/j150514a018, for the method). There H°(T) - H°(298.15 K) = A t + B t²/2 + C t³/3 + D t⁴/4 - E/t
+ F - H with H the enthalpy of formation at 298.15 K, so on the scale of formation from the elements
H°(T) = A t + … - E/t + F: H itself is not used. Standard pressure 1 bar.
"""

from dataclasses import dataclass

import numpy as np

from ..constants import GAS_CONSTANT
from ..entry import Entry
from .polynomial import N_COEFFICIENTS, Ranges
from .potential import Potential, Substance
from .seven_coefficients import coefficient_rows, rising_temperatures

NAME = "Shomate"
_WIDTH = 8


@dataclass(frozen=True)
class Shomate(Potential):
    """Boundaries T [K] and a row of A…H for each range [J/(mol K); F and H kJ/mol]."""

    T: tuple[float, ...]
    a: tuple[tuple[float, ...], ...]

    def ranges(self) -> Ranges:
        """The form in common coefficients: powers -2, 0, 1, 2 and 3 of T."""
        return Ranges(np.array(self.T), np.vstack([_common(row) for row in self.a]))


def _common(row: tuple[float, ...]) -> np.ndarray:
    A, B, C, D, E, F, G, _ = row
    common = np.zeros(N_COEFFICIENTS)
    common[[0, 2, 3, 4, 5]] = E * 1e6, A, B * 1e-3, C * 1e-6, D * 1e-9
    common[7:] = F * 1e3, G - A * np.log(1000.0)
    return common / GAS_CONSTANT


def read(entry: Entry, substance: Substance) -> Shomate:
    """The form from its table; errors: boundaries not rising, wrong counts, numbers not finite."""
    T = rising_temperatures(entry)
    return Shomate(T, coefficient_rows(entry, len(T) - 1, _WIDTH))
