"""NASA 9-coefficient polynomials: powers of T from -2 to 4 in cp/R, and two integration constants.

cp/R = a1 T⁻² + a2 T⁻¹ + a3 + a4 T + a5 T² + a6 T³ + a7 T⁴; h/RT with b1, s/R with b2 (B.J. McBride, M.J. Zehe, S. Gordon,
NASA/TP-2002-211556, 2002, eqs. 1-3; standard pressure 1 bar). Every other polynomial form is a special case of this one.
"""

from dataclasses import dataclass

import numpy as np

from ..entry import Entry
from .polynomial import N_COEFFICIENTS, Ranges
from .potential import Potential, Substance
from .seven_coefficients import coefficient_rows, rising_temperatures

NAME = "NASA 9-coefficient"


@dataclass(frozen=True)
class NineCoefficients(Potential):
    """Boundaries T [K] and a row of a1…a7, b1, b2 for each range."""

    T: tuple[float, ...]
    a: tuple[tuple[float, ...], ...]

    def ranges(self) -> Ranges:
        """The form in common coefficients, which are its own."""
        return Ranges(np.array(self.T), np.array(self.a))


def read(entry: Entry, substance: Substance) -> NineCoefficients:
    """The form from its table; errors: boundaries not rising, wrong counts, numbers not finite."""
    T = rising_temperatures(entry)
    return NineCoefficients(T, coefficient_rows(entry, len(T) - 1, N_COEFFICIENTS))
