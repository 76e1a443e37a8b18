"""log10 k as a double Chebyshev series in 1/T and log p.

log10 k = Σ_t Σ_p c_tp φ_t(T̃) φ_p(p̃), φ_n(x) = cos((n - 1) arccos x), T̃ = (2/T - 1/T_min - 1/T_max)/(1/T_max - 1/T_min),
p̃ = (2 log p - log p_min - log p_max)/(log p_max - log p_min) (P.K. Venkatesh, A.Y. Chang, A.M. Dean, M.H. Cohen,
R.W. Carr, AIChE J. 43 (1997) 1331, doi:10.1002/aic.690430522). k in the file's units for the reaction's order. Such a fit
says nothing outside its window; with clamp = true the value at the edge holds there.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..entry import Entry
from ..errors import shown
from .law import PRESSURE, Expression, Fault, Law, LawContext, Series

NAME = "Chebyshev"
PARTNER = PRESSURE
LARGEST_LOG = 200.0
"""|log10 k| that the coefficients might add up to and above which they are taken for a slip."""
_SLACK = 1e-9  # of the window: a start at its very edge, in other units, is inside


@dataclass(frozen=True)
class Chebyshev(Law):
    """T: (lowest, highest) [K]; p: (lowest, highest) [Pa]; c: rows in T, columns in p, of log10 k in m3, mol, s."""

    T: tuple[float, float]
    p: tuple[float, float]
    c: tuple[tuple[float, ...], ...]
    clamp: bool = False

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at T [K] and pressure [Pa], both brought to the window's edge where they lie outside."""
        x = _reduced(1 / temperature, 1 / self.T[0], 1 / self.T[1])
        y = _reduced(math.log(pressure), math.log(self.p[0]), math.log(self.p[1]))
        return 10.0 ** sum(c * math.cos(t * math.acos(x)) * math.cos(q * math.acos(y))
                           for t, row in enumerate(self.c) for q, c in enumerate(row))

    def expressions(self) -> tuple[Expression, ...]:
        """A neutral one, which holds the term's place: the series says it all."""
        return (Expression(0.0, 0.0, 0.0, 1.0),)

    def part(self) -> Series:
        """The window in 1/T and ln p, and the coefficients of ln k."""
        window = (1 / self.T[0], 1 / self.T[1], math.log(self.p[0]), math.log(self.p[1]))
        return Series(window, tuple(tuple(math.log(10.0) * c for c in row) for row in self.c))

    def outside(self, temperature: float, pressure: float) -> str:
        """That a state lies outside the window, unless the edge shall hold there."""
        if self.clamp:
            return ""
        for what, value, unit, (low, high) in (("T", temperature, "K", self.T), ("p", pressure, "Pa", self.p)):
            if not low * (1 - _SLACK) <= value <= high * (1 + _SLACK):
                return f"{what} is {value:.6g} {unit}, outside the Chebyshev window from {low:.6g} to {high:.6g} {unit}"
        return ""

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Coefficients so large that k might overflow."""
        largest = sum(abs(c) for row in self.c for c in row)
        if largest < LARGEST_LOG:
            return None
        return Fault(f"the coefficients add up to {largest:.4g}", self.T[0], f"log10 k within ±{LARGEST_LOG:g}")


def _reduced(value: float, low: float, high: float) -> float:
    return min(max((2 * value - low - high) / (high - low), -1.0), 1.0)


def read(entry: Entry, context: LawContext) -> Chebyshev:
    """The law from its table."""
    T, p = _window(entry, "T", "temperature"), _window(entry, "p", "pressure")
    rows = [list(entry.row(row, f"c[{k}]")) for k, row in enumerate(entry.items("c", example="[[8.1, 0.2], [1.9, 0.1]]"), 1)]
    if not rows or not rows[0] or any(len(row) != len(rows[0]) for row in rows):
        raise entry.error(f"rows of {', '.join(str(len(row)) for row in rows) or 'no'} coefficients", key="c",
                          expected="one row for each power in T, all of the same length, at least 1",
                          remedy="complete the rows")
    factor = entry.units.rate_factor(context.order)
    if not 0 < factor < math.inf:
        raise entry.error(f"a rate constant of order {context.order} in these units is {factor:g} in SI", key="c",
                          expected="units that SI can express", remedy="correct the units")
    rows[0][0] += math.log10(factor)
    return Chebyshev(T, p, tuple(map(tuple, rows)), entry.flag("clamp"))


def _window(entry: Entry, key: str, kind: str) -> tuple[float, float]:
    """The two ends of a window, SI, positive and rising."""
    stated = entry.items(key, example="[300, 2500]")
    ends = [entry.convert(value, kind, key, "positive") for value in stated]
    if len(ends) != 2 or not ends[0] < ends[1]:
        raise entry.error(f"{shown(list(stated))} is no window", expected=f"lowest and highest {kind}, rising", key=key,
                          remedy="correct it")
    return ends[0], ends[1]
