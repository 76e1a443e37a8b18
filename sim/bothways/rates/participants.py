"""What a rate law may ask of the species on both sides of its reaction."""

from collections.abc import Mapping, Sequence
from typing import Protocol

from ..constants import GAS_CONSTANT
from ..entry import Entry
from ..thermo import Functions, Potential
from ..thermo.polynomial import closed, extended


class Participant(Protocol):
    """A species: molar_mass [kg/mol], standard_pressure [Pa], collision_diameter [m] if stated."""

    @property
    def name(self) -> str: ...
    @property
    def composition(self) -> Mapping[str, int]: ...
    @property
    def charge(self) -> int: ...
    @property
    def molar_mass(self) -> float: ...
    @property
    def potential(self) -> Potential: ...
    @property
    def standard_pressure(self) -> float: ...
    @property
    def collision_diameter(self) -> float | None: ...


Side = Sequence[tuple[Participant, int]]
"""One side of an equation: species and how many of it."""


def functions_of(potential: Potential, joins: str) -> Functions:
    """The plain functions of a species as a mechanism with these `joins` uses them."""
    own = potential.ranges()
    return Functions(closed(own)[0] if joins == "closed" else own, potential.modes())


def energy_at_zero(side: Side) -> float:
    """Σ h(0 K) of one side [J/mol]; a fit that does not reach down there continues with constant cp."""
    return GAS_CONSTANT * sum(count * float(extended(s.potential.ranges()).rows[0][7]) for s, count in side)


def lowest_data(side: Side) -> tuple[str, float]:
    """The species whose data begin at the highest temperature [K], and that temperature; 0 where all reach 0 K."""
    start, name = max((float(s.potential.ranges().boundaries[0]), s.name) for s, _ in side)
    return name, start


def molecules(side: Side) -> list[Participant]:
    """The species of one side, each as often as it stands there."""
    return [s for s, count in side for _ in range(count)]


def check_orders(entry: Entry, order: float, side: Side) -> None:
    """An error where orders of its own stand beside a law that says which molecules meet."""
    if order != len(molecules(side)):
        raise entry.error(f"orders of its own, {order:g} in all, beside this law", key="orders",
                          expected="those of mass action: the law says which molecules meet", remedy="take another law")
