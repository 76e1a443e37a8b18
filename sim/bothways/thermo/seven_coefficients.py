"""NASA 7-coefficient polynomials.

cp/R = a1 + a2 T + a3 T² + a4 T³ + a5 T⁴; h/RT with a6, s/R with a7 (S. Gordon, B.J. McBride, NASA SP-273, 1971;
A. Burcat, B. Ruscic, ANL-05/20, 2005). Valid within the stated ranges, usually to better than 0.1 % of cp.
"""

import itertools
from dataclasses import dataclass

import numpy as np

from ..entry import Entry
from ..errors import shown
from .polynomial import LIMITS, N_COEFFICIENTS, Ranges
from .potential import Potential, Substance

NAME = "NASA 7-coefficient"
_COLUMNS = [2, 3, 4, 5, 6, 7, 8]


@dataclass(frozen=True)
class SevenCoefficients(Potential):
    """Boundaries T [K] and a row of a1…a7 for each range."""

    T: tuple[float, ...]
    a: tuple[tuple[float, ...], ...]

    def ranges(self) -> Ranges:
        """The form in common coefficients."""
        rows = np.zeros((len(self.a), N_COEFFICIENTS))
        rows[:, _COLUMNS] = self.a
        return Ranges(np.array(self.T), rows)


def read(entry: Entry, substance: Substance) -> SevenCoefficients:
    """The form from its table; errors: boundaries not rising, wrong counts, numbers not finite."""
    T = rising_temperatures(entry)
    return SevenCoefficients(T, coefficient_rows(entry, len(T) - 1, 7))


def rising_temperatures(entry: Entry) -> tuple[float, ...]:
    """The range boundaries `T`: at least two, positive, rising [K]."""
    T = entry.numbers("T")
    low, high = LIMITS
    if len(T) < 2 or T[0] < low or T[-1] > high or any(a >= b for a, b in itertools.pairwise(T)):
        raise entry.error(f"{shown(list(T))} does not rise, or not from {low:g} to {high:g} K", key="T",
                          expected="range boundaries in K, rising, n + 1 for n ranges", remedy="correct the boundaries")
    return T


def coefficient_rows(entry: Entry, count: int, width: int) -> tuple[tuple[float, ...], ...]:
    """The rows of `a`: one a range, each of `width` numbers."""
    rows = entry.get("a", what=f"{count} rows of {width} coefficients")
    if not isinstance(rows, (list, tuple)) or len(rows) != count:
        found = f"{len(rows)} rows" if isinstance(rows, (list, tuple)) else shown(rows)
        raise entry.error(f"{found} of coefficients", expected=f"{count}, one for each range of T",
                          remedy="correct a or T", key="a")
    checked = tuple(entry.row(row, f"a[{k + 1}]") for k, row in enumerate(rows))
    for k, row in enumerate(checked):
        if len(row) != width:
            raise entry.error(f"{len(row)} coefficients", expected=f"{width}", remedy="complete the row", key=f"a[{k + 1}]")
    return checked
