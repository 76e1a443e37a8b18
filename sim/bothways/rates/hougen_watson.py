"""Rates over a surface that adsorbs: k Πc^α (1 - (Q/K)^(1/σ))/(1 + Σ K_i c_i^p)^power.

O.A. Hougen, K.M. Watson, Ind. Eng. Chem. 35 (1943) 529, doi:10.1021/ie50401a005, after I. Langmuir and C.N. Hinshelwood.
The orders α, those of the equation unless stated, and σ stand beside the law as beside any other (mechanism/orders.py); c
are concentrations. K_i = A exp(-Ea/RT), A in the file's (volume/amount)^p; adsorption gives off heat, so Ea is negative,
the molar enthalpy of adsorption. The sum is at least 1 since every K_i is positive.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from ..entry import Entry
from .arrhenius import Arrhenius, read_expression
from .law import IN_EQUATION, AdsorptionGroup, Expression, Fault, Law, LawContext

NAME = "Hougen-Watson"
PARTNER = IN_EQUATION
LUMPED = True
LARGEST_POWER = 10.0
"""A power of a concentration or of the group above this [-] is taken for a slip."""


@dataclass(frozen=True)
class Adsorbed:
    """One species of the group: K [(m3/mol)^power], and the power of its concentration [-]."""

    species: str
    K: Arrhenius
    power: float = 1.0


@dataclass(frozen=True)
class HougenWatson(Law):
    """rate: k of the numerator; adsorption: the group's species, and its power [-]."""

    rate: Arrhenius
    adsorption: tuple[Adsorbed, ...]
    power: float = 1.0

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k of the numerator at T [K] times the concentration of the partner [mol/m3], where there is one."""
        return self.rate.k(temperature, partner)

    def expressions(self) -> tuple[Expression, ...]:
        """k, then the adsorption constants."""
        return self.rate.expressions() + tuple(e for a in self.adsorption for e in a.K.expressions())

    def part(self) -> AdsorptionGroup:
        """Species and powers of the group."""
        return AdsorptionGroup(tuple(a.species for a in self.adsorption), tuple(a.power for a in self.adsorption), self.power)

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow of k or of an adsorption constant."""
        faults = (e.fault(temperatures) for e in (self.rate, *(a.K for a in self.adsorption)))
        return next((fault for fault in faults if fault), None)


def read(entry: Entry, context: LawContext) -> HougenWatson:
    """The law from its table."""
    table = entry.table("k")
    rate = read_expression(table, context.order + context.partner_in_equation, "positive")
    table.done()
    example = '[{ species = "A", K = { A = 2.0, Ea = -30e3 } }, …]'
    stated = entry.items("adsorption", example=example)
    if not stated:
        raise entry.error("no adsorbed species", expected=f"a list such as {example}", key="adsorption",
                          remedy="without adsorption use another law, and 'orders' beside it")
    tables = [entry.sub(data, f"{entry.place}.adsorption[{k}]") for k, data in enumerate(stated, 1)]
    return HougenWatson(rate, tuple(_adsorbed(t, context) for t in tables), _power(entry))


def _adsorbed(entry: Entry, context: LawContext) -> Adsorbed:
    name, power = entry.text("species"), _power(entry)
    if name not in context.species:
        raise entry.unknown("species", name, context.species, key="species")
    table = entry.table("K")
    K = read_expression(table, 1.0 + power, "positive", per_time=False)
    for each in (table, entry):
        each.done()
    return Adsorbed(name, K, power)


def _power(entry: Entry) -> float:
    power = entry.number("power", 1.0, sign="positive")
    if power > LARGEST_POWER:
        raise entry.error(f"{power:g} is a power beyond reason", expected=f"a number up to {LARGEST_POWER:g}", key="power")
    return power
