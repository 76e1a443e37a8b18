"""A rate constant known at one temperature, with its activation energy: k (T/T₁)^n exp(-Ea/R (1/T - 1/T₁)).

The modified Arrhenius expression (arrhenius.py) through a measured point, as textbooks and laboratory reports state it.
"""

import math

from ..constants import GAS_CONSTANT
from ..entry import Entry
from .arrhenius import Arrhenius
from .law import IN_EQUATION, LawContext

NAME = "known at a temperature"
PARTNER = IN_EQUATION
LARGEST_EXPONENT = 400.0
"""Ea/RT₁ beyond ± this [-] is taken for a slip; exp of it could overflow."""


def read(entry: Entry, context: LawContext) -> Arrhenius:
    """The law from its table: k in the file's units for the order, `at` [K], Ea [J/mol], n."""
    sign = "not zero" if context.of_several else "positive"
    k = entry.number("k", sign=sign) * entry.units.rate_factor(context.order + context.partner_in_equation)
    at = entry.quantity("at", "temperature", sign="positive")
    Ea, n = entry.quantity("Ea", "molar energy", 0.0), entry.number("n", 0.0)
    exponent = Ea / (GAS_CONSTANT * at)
    if abs(exponent) > LARGEST_EXPONENT or k == 0 or not math.isfinite(k):
        raise entry.error(f"k = {k:g} (SI) with Ea/RT = {exponent:.4g} at {at:g} K", remedy="correct k, Ea, at or the units",
                          expected=f"numbers that SI can express, Ea/RT within ±{LARGEST_EXPONENT:g}")
    return Arrhenius(k * math.exp(exponent), n, Ea, at)
