"""The modified Arrhenius expression k = A (T/T_ref)^n exp(-Ea/RT).

S. Arrhenius, Z. Phys. Chem. 4 (1889) 226, doi:10.1515/zpch-1889-0416; D.M. Kooij, Z. Phys. Chem. 12 (1893) 155,
for the power of T.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..constants import GAS_CONSTANT
from ..entry import Entry
from ..errors import shown
from .law import IN_EQUATION, Expression, Fault, Law, LawContext

NAME = "Arrhenius"
PARTNER = IN_EQUATION
LARGEST = 1e200
"""A rate constant above this [m3, mol, s of its order] is taken for a slip; products with it could overflow."""


@dataclass(frozen=True)
class Arrhenius(Law):
    """A [(m3/mol)^(order-1)/s] at T_ref [K], n [-], Ea [J/mol]."""

    A: float
    n: float = 0.0
    Ea: float = 0.0
    T_ref: float = 1.0

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at a temperature [K] times the concentration of the partner [mol/m3], where there is one."""
        power = (temperature / self.T_ref) ** self.n
        return self.A * power * math.exp(-self.Ea / (GAS_CONSTANT * temperature)) * partner

    def expressions(self) -> tuple[Expression, ...]:
        """The one expression of this law."""
        log_A = math.log(abs(self.A)) - self.n * math.log(self.T_ref)
        return (Expression(log_A, self.n, self.Ea / GAS_CONSTANT, math.copysign(1.0, self.A)),)

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow: at an end of the range, or at T = -Ea/(R n), the one extremum of ln k."""
        low, high = temperatures[0], temperatures[-1]
        peak = -self.Ea / (GAS_CONSTANT * self.n) if self.n else low
        for temperature in (low, min(max(low, peak), high), high):
            if not self._magnitude(temperature) < LARGEST:
                return Fault(f"k with A = {self.A:g}, n = {self.n:g}, Ea = {self.Ea:g} J/mol (SI) overflows", temperature,
                             f"a rate constant below {LARGEST:g}")
        return None

    def _magnitude(self, temperature: float) -> float:
        try:
            return abs(self.k(temperature))
        except OverflowError:
            return math.inf


def read_expression(entry: Entry, order: float, sign: str, per_time: bool = True) -> Arrhenius:
    """A, n, Ea and T_ref from a table, A in the file's units for that order, or those without the time."""
    factor = entry.units.rate_factor(order) * (1.0 if per_time else entry.units.factor("time"))
    A = entry.number("A", sign=sign) * factor
    if A == 0 or not math.isfinite(A):
        raise entry.error(f"{shown(entry.data['A'])} is {A:g} in SI units", expected="a number that SI units can express",
                          remedy="correct it or the units", key="A")
    Ea = entry.quantity("Ea", "molar energy", 0.0)
    return Arrhenius(A, entry.number("n", 0.0), Ea, entry.quantity("T_ref", "temperature", 1.0, sign="positive"))


def read(entry: Entry, context: LawContext) -> Arrhenius:
    """The law from its table; A may be negative only as one of several terms."""
    sign = "not zero" if context.of_several else "positive"
    return read_expression(entry, context.order + context.partner_in_equation, sign)
