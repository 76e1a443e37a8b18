"""Forward orders that are not the stoichiometric ones, and Horiuti's stoichiometric number.

Such a step still obeys: net rate = forward·[1 - (Q/K)^(1/σ)] (Th. de Donder, L'affinité, 1927; J. Horiuti, T. Nakamura,
Adv. Catal. 17 (1967) 1, doi:10.1016/S0360-0564(08)60685-4, for σ, the number of times the rate-determining step runs in the
equation as written). The reverse orders this implies are α_i + ν_i/σ; a negative one would make the reverse rate infinite
where that species is exhausted, so it is refused.
"""

from collections.abc import Collection, Mapping
from dataclasses import dataclass

from ..entry import Entry
from .equation import Equation

LARGEST_ORDER = 20.0
"""An order beyond ± this [-] is taken for a slip."""
STOICHIOMETRIC_NUMBERS = 0.1, 10.0
"""Bounds of σ [-]: outside it is taken for a slip."""
ROUND_OFF = 1e-9
"""A reverse order this far [-] from zero is zero: 1/σ and orders such as 0.333 are rounded numbers."""


@dataclass(frozen=True)
class Orders:
    """forward: order of each species that has one [-], from the equation where not stated. sigma: Horiuti's σ [-]."""

    forward: Mapping[str, float]
    sigma: float = 1.0

    def common(self, net: Mapping[str, int]) -> dict[str, float]:
        """Orders that forward and reverse rate share: the forward one less |ν|/σ of a reactant, of all that take part."""
        names = dict.fromkeys([*net, *self.forward])
        return {name: _rounded(self.forward.get(name, 0.0) + min(net.get(name, 0), 0) / self.sigma) for name in names}

    def reverse(self, net: Mapping[str, int]) -> dict[str, float]:
        """Reverse orders α + ν/σ."""
        names = dict.fromkeys([*net, *self.forward])
        return {name: _rounded(self.forward.get(name, 0.0) + net.get(name, 0) / self.sigma) for name in names}

    def needed(self, net: Mapping[str, int], forward: bool) -> set[str]:
        """Species without which the rate of one direction is zero."""
        driving = {name for name, count in net.items() if (count < 0) == forward}
        return driving | {name for name, order in self.common(net).items() if order > 0}


def _rounded(order: float) -> float:
    return 0.0 if abs(order) < ROUND_OFF else order


def read_orders(entry: Entry, equation: Equation, net: Mapping[str, int], species: Collection[str],
                always: bool) -> Orders | None:
    """What a forward term states of orders and σ; None where it states neither, unless `always`."""
    stated = entry.named_numbers("orders", "species", species, sign="any", default=None)
    sigma = entry.number("stoichiometric_number", 1.0, sign="positive")
    if stated is None and "stoichiometric_number" not in entry.data and not always:
        return None
    _check(entry, stated or {}, sigma)
    orders = Orders({**dict(equation.reactants), **(stated or {})}, sigma)
    _check_reverse(entry, orders, net)
    return orders


def _check(entry: Entry, stated: Mapping[str, float], sigma: float) -> None:
    for name, order in stated.items():
        if abs(order) > LARGEST_ORDER:
            raise entry.error(f"the order {order:g} of {name}", expected=f"an order from -{LARGEST_ORDER:g} to {LARGEST_ORDER:g}",
                              remedy="correct it", key="orders")
    low, high = STOICHIOMETRIC_NUMBERS
    if not low <= sigma <= high:
        raise entry.error(f"{sigma:g} is beyond reason", expected=f"a number from {low:g} to {high:g}", remedy="correct it",
                          key="stoichiometric_number")


def _check_reverse(entry: Entry, orders: Orders, net: Mapping[str, int]) -> None:
    wrong = {name: order for name, order in orders.reverse(net).items() if order < 0}
    if wrong:
        name = next(iter(wrong))
        least = -net.get(name, 0) / orders.sigma
        listed = ", ".join(f"{name} {order:.6g}" for name, order in wrong.items())
        raise entry.error(f"the reverse orders that follow are negative: {listed}",
                          expected="α + ν/σ of at least 0 for every species", key="orders" if "orders" in entry.data else "",
                          remedy=f"state an order of {name} of at least {least:.6g}, or correct stoichiometric_number")
