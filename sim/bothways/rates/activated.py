"""The product channel of a chemically activated reaction: k = k_0 F/(1 + P_r), P_r = k_0 [M]/k_inf.

The excited adduct either goes on to products or is stopped by a partner, so this channel falls with pressure where the
adduct's own fall-off rises (A.M. Dean, J. Phys. Chem. 89 (1985) 4600, doi:10.1021/j100267a038). At low pressure k is k_0,
which therefore has the order of the reaction; at high pressure k is k_inf/[M], so k_inf is one order lower. P_r has no
dimension then. F = 1, or with F_cent as in Troe's law (and its width rules), or with F as in SRI.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar

from ..entry import Entry
from .fall_off import FallOffLaw, read_broadening, read_limits
from .law import OWN_PARTNER, Curve, Expression, Fault, Law, LawContext
from .sri import read_sri

NAME = "activated"
PARTNER = OWN_PARTNER


@dataclass(frozen=True)
class Activated(Law):
    """limits: k_inf (one order below the reaction's), k_0 (the reaction's order) and the broadening of the curve."""

    needs_partner: ClassVar[bool] = False

    limits: FallOffLaw

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at T [K] and partner concentration [mol/m3]."""
        k_0 = self.limits.k_0.k(temperature)
        reduced = k_0 * partner / self.limits.k_inf.k(temperature)
        return k_0 / (1 + reduced) * self.limits.broadening_factor(temperature, reduced)

    def expressions(self) -> tuple[Expression, ...]:
        """High- and low-pressure limit."""
        return self.limits.expressions()

    def part(self) -> Curve:
        """The curve as that of an activated channel."""
        return self.limits.curve(activated=True)

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """What is wrong with limits or broadening."""
        return self.limits.fault(temperatures)


def read(entry: Entry, context: LawContext) -> Activated:
    """The law from its table; error: both broadenings stated."""
    limits = read_limits(entry, context.order - 1)
    if "F" in entry.data and ("F_cent" in entry.data or "width" in entry.data):
        raise entry.error("F and F_cent are both stated", expected="one broadening: F (SRI) or F_cent (Troe), or none",
                          remedy="leave out either")
    if "F" in entry.data:
        return Activated(FallOffLaw(*limits, read_sri(entry), "SRI"))
    if "F_cent" in entry.data or "width" in entry.data:
        return Activated(FallOffLaw(*limits, *read_broadening(entry)))
    entry.known.update(("F", "F_cent", "width"))
    return Activated(FallOffLaw(*limits))
