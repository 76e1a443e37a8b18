"""Eyring's expression k = κ (k_B T/h) (c°)^(1-m) e^(ΔS‡/R - ΔH‡/RT), m the order.

H. Eyring, J. Chem. Phys. 3 (1935) 107, doi:10.1063/1.1749604; IUPAC Green Book, 3rd ed., 2.12. ΔS‡ belongs to a standard
state, which is stated: a concentration c°, or a pressure p°, for which c° = p°/RT (and ΔH‡ is then a true enthalpy at
constant pressure). Of first order there is no such choice.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..constants import BOLTZMANN, GAS_CONSTANT, PLANCK
from ..entry import Entry
from ..units import UNITS
from .arrhenius import Arrhenius
from .law import IN_EQUATION, Expression, Fault, Law, LawContext

NAME = "Eyring"
PARTNER = IN_EQUATION
_LARGEST_ENTROPY = 2000.0
"""|ΔS‡| above this [J/(mol K)] is taken for a slip."""


@dataclass(frozen=True)
class Eyring(Law):
    """dH [J/mol], dS [J/(mol K)], kappa [-], order m, standard concentration [mol/m3] or pressure [Pa] (None: first order)."""

    dH: float
    dS: float
    kappa: float
    order: float
    concentration: float | None = None
    pressure: float | None = None

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at a temperature [K] times the concentration of the partner [mol/m3], where there is one."""
        return self._expression.k(temperature, partner)

    @property
    def _expression(self) -> Arrhenius:
        A, n = self.kappa * BOLTZMANN / PLANCK * math.exp(self.dS / GAS_CONSTANT), 1.0
        if self.concentration is not None:
            A *= self.concentration ** (1 - self.order)
        elif self.pressure is not None:
            A *= (self.pressure / GAS_CONSTANT) ** (1 - self.order)
            n = float(self.order)
        return Arrhenius(A, n, self.dH)

    def expressions(self) -> tuple[Expression, ...]:
        """The one expression of this law: n = 1, or m where the standard state is a pressure."""
        return self._expression.expressions()

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow."""
        return self._expression.fault(temperatures)


def read(entry: Entry, context: LawContext) -> Eyring:
    """The law from its table; errors: no standard state where the order is not one."""
    order = context.order + context.partner_in_equation
    dH, dS = entry.quantity("dH", "molar energy"), entry.quantity("dS", "molar heat capacity")
    if abs(dS) > _LARGEST_ENTROPY:
        raise entry.error(f"{dS:.6g} J/(mol K)", key="dS", expected=f"a number within ±{_LARGEST_ENTROPY:g} J/(mol K)",
                          remedy="mind the file's unit of molar energy, or state the unit")
    kappa = entry.number("kappa", 1.0, sign="positive")
    concentration, pressure = _standard_state(entry, order, context.setting.standard_concentration)
    return Eyring(dH, dS, kappa, order, concentration, pressure)


def _standard_state(entry: Entry, order: float, usual: float | None) -> tuple[float | None, float | None]:
    stated = entry.text("standard_state", None)
    if stated is None:
        if order != 1 and usual is None:
            raise entry.error(f"the standard state of dS is missing; the order is {order:g}", key="standard_state",
                              expected='a concentration such as "1 mol/L", or a pressure such as "1 bar"', remedy="add it")
        return (None if order == 1 else usual), None
    kind = "pressure" if stated.split()[-1] in UNITS["pressure"] else "concentration"
    value = entry.convert(stated, kind, "standard_state", "positive")
    return (value, None) if kind == "concentration" else (None, value)
