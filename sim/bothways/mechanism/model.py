"""What a mechanism is: frozen, SI, made from a plain document by `reader.build`."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Any

import numpy as np

from ..errors import InputError, nearest
from ..rates import Arrhenius, Law
from ..thermo import Potential, Ranges
from ..thermo.polynomial import Shift, closed
from .equation import Equation
from .orders import Orders
from .stated import StatedEquilibrium

if TYPE_CHECKING:
    from .stated_equilibria import System


@dataclass(frozen=True)
class Species:
    """One species: molar_mass [kg/mol], standard_pressure [Pa], collision_diameter [m], well_depth [K]."""

    name: str
    composition: Mapping[str, int]
    charge: int
    molar_mass: float
    potential: Potential
    standard_pressure: float
    source: str = ""
    collision_diameter: float | None = None
    well_depth: float | None = None

    @cached_property
    def fit_range(self) -> tuple[float, float]:
        """Lowest and highest temperature of the potential's data [K]."""
        boundaries = self.potential.ranges().boundaries
        return float(boundaries[0]), float(boundaries[-1])


@dataclass(frozen=True)
class Partner:
    """The partner of a reaction: efficiency of each named species, `default` of all others [-]."""

    default: float
    efficiency: Mapping[str, float]


@dataclass(frozen=True)
class Term:
    """One forward rate law of a reaction, with the partner that takes part in it, if any.

    orders : of a lumped step, None where the law of mass action holds.
    """

    law: Law
    partner: Partner | None = None
    orders: Orders | None = None


def net_of(equation: Equation) -> dict[str, int]:
    """Stoichiometric numbers of the species that change."""
    nu: dict[str, int] = {}
    for sign, side in ((-1, equation.reactants), (1, equation.products)):
        for name, count in side:
            nu[name] = nu.get(name, 0) + sign * count
    return {name: count for name, count in nu.items() if count}


@dataclass(frozen=True)
class Reaction:
    """One equation with its forward terms; published_* record what a source claims of the reverse."""

    equation: Equation
    terms: tuple[Term, ...]
    source: str = ""
    published_one_way: bool = False
    published_reverse: Arrhenius | None = None
    equilibrium: StatedEquilibrium | None = None

    @cached_property
    def net(self) -> dict[str, int]:
        """Stoichiometric numbers of the species that change."""
        return net_of(self.equation)

    @property
    def sigma(self) -> float:
        """Horiuti's stoichiometric number [-]: 1 of mass action; NaN where terms of several kinds stand beside each other."""
        orders = [term.orders for term in self.terms]
        if all(o == orders[0] for o in orders):
            return orders[0].sigma if orders[0] else 1.0
        return float("nan")

    def forward_constant(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """Sum of the terms' k at T [K], each at that partner concentration [mol/m3] and pressure [Pa]; m3, mol, s."""
        return sum(term.law.k(temperature, partner if term.partner else 1.0, pressure) for term in self.terms)


@dataclass(frozen=True)
class Mechanism:
    """A mechanism; `document` is what it was made from, key by key, and `file` where that stood.

    standard_pressure : [Pa] of a gas, NaN of a solution. standard_state : of a solution, "1 mol/L" or "mole fraction".
    notes : what was changed for stated equilibria to close their cycles. undetermined : (m, N) combinations of species whose
        potential nothing stated fixes; no reaction changes their amount. equilibria : what they were resolved by, if any.
    """

    name: str
    phase: str
    standard_pressure: float
    joins: str
    sources: tuple[str, ...]
    elements: Mapping[str, float]
    species: tuple[Species, ...]
    reactions: tuple[Reaction, ...]
    document: Mapping[str, Any] = field(repr=False)
    file: object = field(default=None, repr=False, compare=False)
    standard_state: str = ""
    notes: tuple[str, ...] = ()
    undetermined: tuple[tuple[int, ...], ...] = ()
    equilibria: "System | None" = field(default=None, repr=False, compare=False)

    @cached_property
    def names(self) -> tuple[str, ...]:
        """Names of the species, in order."""
        return tuple(s.name for s in self.species)

    @cached_property
    def _places(self) -> dict[str, int]:
        return {name: k for k, name in enumerate(self.names)}

    def index(self, name: str) -> int:
        """The place of a species; InputError naming the nearest when there is none."""
        try:
            return self._places[name]
        except KeyError:
            raise InputError(f"no species '{name}' in mechanism '{self.name}' ({nearest(name, self.names)})") from None

    @cached_property
    def molar_mass(self) -> np.ndarray:
        """Molar masses [kg/mol], (N)."""
        return np.array([s.molar_mass for s in self.species])

    @cached_property
    def used_elements(self) -> tuple[str, ...]:
        """The elements that occur, in order of first appearance."""
        return tuple(dict.fromkeys(e for s in self.species for e in s.composition))

    @cached_property
    def element_matrix(self) -> np.ndarray:
        """Atoms of each element in each species, (elements, N); a last row holds charges if there are any."""
        rows = [[s.composition.get(e, 0) for s in self.species] for e in self.used_elements]
        if any(s.charge for s in self.species):
            rows.append([s.charge for s in self.species])
        return np.array(rows, dtype=float)

    @cached_property
    def stoichiometry(self) -> np.ndarray:
        """Stoichiometric numbers, (N, reactions)."""
        nu = np.zeros((len(self.species), len(self.reactions)))
        for j, reaction in enumerate(self.reactions):
            for name, count in reaction.net.items():
                nu[self._places[name], j] = count
        return nu

    @cached_property
    def _closed_ranges(self) -> tuple[tuple[Ranges, tuple[Shift, ...]], ...]:
        own = [s.potential.ranges() for s in self.species]
        return tuple(closed(r) if self.joins == "closed" else (r, ()) for r in own)

    def ranges(self, k: int) -> Ranges:
        """The coefficients of species k as this mechanism uses them: joins closed unless asked for as published."""
        return self._closed_ranges[k][0]

    @cached_property
    def join_shifts(self) -> tuple[tuple[str, Shift], ...]:
        """Every shift above 1e-4 in h/RT or s/R that closing the joins made."""
        pairs = zip(self.names, self._closed_ranges, strict=True)
        return tuple((name, shift) for name, (_, shifts) in pairs for shift in shifts
                     if max(abs(shift.h), abs(shift.s)) > 1e-4)

    def to_dict(self) -> dict[str, Any]:
        """A copy of the plain document this mechanism was made from, with the keys of a mechanism file."""
        return copy_document(self.document)


def copy_document(value: Any) -> Any:
    """A deep copy of tables, lists and values."""
    if isinstance(value, Mapping):
        return {key: copy_document(v) for key, v in value.items()}
    if isinstance(value, (list, tuple)):
        return [copy_document(v) for v in value]
    return value
