"""Hard spheres that react when their energy along the line of centres suffices.

k = s P N_A π d² √(8 k_B T/(π μ)) e^(-E0/RT), d the mean of both diameters, μ the reduced mass, s = ½ for like molecules (of
which N²/2 pairs collide), P the steric factor (M. Trautz, Z. anorg. Chem. 96 (1916) 1, doi:10.1002/zaac.19160960102; W.C.McC.
Lewis, J. Chem. Soc., Trans. 113 (1918) 471, doi:10.1039/CT9181300471; IUPAC Green Book, 3rd ed., 2.12.1). The rate is that
of the reaction: a pair of like molecules counts once. E0 must be at least ΔE0 if that is positive: the products' energy
above the reactants' at 0 K.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..constants import AVOGADRO, GAS_CONSTANT
from ..entry import Entry
from ..errors import shown
from ..thermo.structureless import check_gas
from .arrhenius import Arrhenius
from .law import IN_EQUATION, Expression, Fault, Law, LawContext
from .participants import Participant, check_orders, energy_at_zero, lowest_data, molecules

NAME = "hard-sphere collision"
PARTNER = IN_EQUATION
_DIAMETERS = 1e-11, 1e-7
"""Diameters [m] beyond these are taken for slips."""


@dataclass(frozen=True)
class Collision(Law):
    """diameter [m] of the pair, E0 [J/mol], P [-], reduced molar mass [kg/mol], whether both molecules are alike."""

    diameter: float
    E0: float
    P: float
    reduced_mass: float
    like: bool

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k [m3/(mol s)] at a temperature [K]."""
        return self._expression.k(temperature)

    @property
    def _expression(self) -> Arrhenius:
        area = self.P * self.diameter**2
        return Arrhenius(area * per_area(self.reduced_mass, self.like), 0.5, self.E0)

    def expressions(self) -> tuple[Expression, ...]:
        """The one expression of this law: n = ½."""
        return self._expression.expressions()

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow."""
        return self._expression.fault(temperatures)


def per_area(reduced_mass: float, like: bool) -> float:
    """k/(P d² T^½ e^(-E0/RT)) [m/(mol s K^½)] of a pair with this reduced molar mass [kg/mol]."""
    return (0.5 if like else 1.0) * AVOGADRO * math.pi * math.sqrt(8.0 * GAS_CONSTANT / (math.pi * reduced_mass))


def reduced_mass(pair: Sequence[Participant]) -> float:
    """μ [kg/mol] of two species."""
    first, second = (s.molar_mass for s in pair)
    return first * second / (first + second)


def read(entry: Entry, context: LawContext) -> Collision:
    """The law from its table; errors: not two molecules, no diameter, E0 below what the products ask for."""
    check_gas(entry, context.setting.standard_pressure, key="law")
    pair = molecules(context.reactants)
    if len(pair) != 2 or context.partner_in_equation:
        raise entry.error(f"{len(pair)} molecules{' and M' * context.partner_in_equation} as reactants", key="law",
                          expected="two molecules, which collide", remedy="take another law")
    check_orders(entry, context.order, context.reactants)
    E0, P = entry.quantity("E0", "molar energy", sign="not negative"), entry.number("P", 1.0, sign="positive")
    law = Collision(_diameter(entry, pair), E0, P, reduced_mass(pair), pair[0].name == pair[1].name)
    _check_threshold(entry, E0, context)
    return law


def _diameter(entry: Entry, pair: Sequence[Participant]) -> float:
    diameter = entry.quantity("diameter", "length", None, sign="positive")
    if diameter is None:
        missing = [s.name for s in pair if s.collision_diameter is None]
        if missing:
            raise entry.error(f"the diameter is missing, and {missing[0]} states no collision_diameter", key="diameter",
                              expected="the diameter of the pair, or that of either species", remedy="add either")
        diameter = 0.5 * sum(s.collision_diameter or 0.0 for s in pair)
    if not _DIAMETERS[0] <= diameter <= _DIAMETERS[1]:
        raise entry.error(f"a diameter of {diameter:.4g} m", key="diameter", remedy="correct number or unit",
                          expected="from 1e-11 to 1e-7 m (0.1 to 1000 Å)")
    return diameter


def _check_threshold(entry: Entry, E0: float, context: LawContext) -> None:
    """A fit says nothing below its range: there half of R T may be hidden at either side."""
    reactants, products = energy_at_zero(context.reactants), energy_at_zero(context.products)
    _, start = lowest_data((*context.reactants, *context.products))
    slack = 0.5 * GAS_CONSTANT * start + 1e-12 * (abs(reactants) + abs(products))
    if E0 < products - reactants - slack:
        raise entry.error(f"{shown(entry.data['E0'])} is below what the products have above the reactants at 0 K", key="E0",
                          expected=f"at least {products - reactants:.6g} J/mol", remedy="correct E0 or the species' energies")
