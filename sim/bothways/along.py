"""Rates and affinities of every reaction along a run, and what each contributes to one species."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from . import balance
from .constants import GAS_CONSTANT as R
from .contents import Contents
from .errors import InputError, nearest
from .mechanism import Mechanism, build
from .mechanism.files import parse_toml
from .trajectory import Trajectory
from .vessel import Equations


def rates_along(mechanism: Mechanism, amount: np.ndarray, temperature: np.ndarray, volume: np.ndarray) -> dict[str, np.ndarray]:
    """Forward and reverse rates [mol/(m3 s)] and affinities A = -Σ ν_i μ_i [J/mol] of many states, (nt, reactions) each.

    amount (nt, N) [mol], temperature (nt) [K], volume (nt) [m3]. Where a reactant is absent the affinity is -inf,
    where a product is, +inf, and where both are, NaN.
    """
    equations = Equations(mechanism, "volume", "isothermal")
    states = np.column_stack([amount / volume[:, None], temperature])
    pairs = [equations.reaction_rates(y) for y in states]
    forward, reverse = (np.array([pair[k] for pair in pairs]) for k in (0, 1))
    return {"rate_forward": forward, "rate_reverse": reverse,
            "affinity": affinities(mechanism, amount, temperature, volume)}


def affinities(mechanism: Mechanism, amount: np.ndarray, temperature: np.ndarray, volume: np.ndarray) -> np.ndarray:
    """A = -Σ ν_i μ_i [J/mol] of every reaction in many states, (nt, reactions)."""
    contents, nu = Contents(mechanism), mechanism.stoichiometry
    states = zip(amount, temperature, volume, strict=True)
    return np.array([R * T * balance.affinities(nu, contents.chemical_potentials(n, T, V)) for n, T, V in states])


def mechanism_of(trajectory: Trajectory) -> Mechanism:
    """The mechanism a run was made with, from the text its file carries."""
    return build(parse_toml(trajectory.mechanism_text, "the mechanism in the trajectory"))


@dataclass(frozen=True)
class Contributions:
    """Net production of one species by each reaction along a run.

    time : (nt) [s]. reactions : equations, the largest contributor first. rate : (nt, k) [mol/(m3 s)], positive where
    the reaction makes the species.
    """

    species: str
    time: np.ndarray
    reactions: tuple[str, ...]
    rate: np.ndarray

    def records(self) -> list[dict[str, float | str]]:
        """Plain records, one a reaction: equation, largest rate either way, time of the largest."""
        peak = np.argmax(np.abs(self.rate), axis=0)
        return [{"reaction": r, "largest_rate": float(self.rate[i, k]), "time": float(self.time[i])}
                for k, (r, i) in enumerate(zip(self.reactions, peak, strict=True))]


def contributions(trajectory: Trajectory, species: str) -> Contributions:
    """What each reaction contributes to a species along a run; rates in the file are used, else worked out again.

    Raises InputError naming the nearest species when there is none of that name.
    """
    if species not in trajectory.species:
        raise InputError(f"no species '{species}' in this run ({nearest(species, trajectory.species)})")
    mechanism = mechanism_of(trajectory)
    rates: Mapping[str, np.ndarray] = trajectory.extra
    if "rate_forward" not in rates:
        rates = rates_along(mechanism, trajectory.amount, trajectory.temperature, trajectory.volume)
    nu = mechanism.stoichiometry[mechanism.index(species)]
    net = (rates["rate_forward"] - rates["rate_reverse"]) * nu
    involved = np.flatnonzero(nu)
    order = involved[np.argsort(-np.max(np.abs(net[:, involved]), axis=0, initial=0.0))]
    return Contributions(species, trajectory.time, tuple(trajectory.reactions[j] for j in order), net[:, order])
