"""Which species the course of some targets hangs on: directed relation graphs, over many states at once.

r_AB says how much the rate of production of A would err without B; the importance of B is the best path's from any target.

DRG: r_AB = Σ_j |ν_Aj ω_j δ_Bj| / Σ_j |ν_Aj ω_j|, a path is worth its weakest edge: a species stays if it is reached over
edges of at least the threshold (T. Lu, C.K. Law, Proc. Combust. Inst. 30 (2005) 1333, doi:10.1016/j.proci.2004.08.145).

DRGEP: r_AB = |Σ_j ν_Aj ω_j δ_Bj| / max(P_A, C_A), P and C production and consumption of A; a path is worth the product
of its edges (P. Pepiot-Desjardins, H. Pitsch, Combust. Flame 154 (2008) 67, doi:10.1016/j.combustflame.2007.10.020),
found by Dijkstra's search (K.E. Niemeyer, C.J. Sung, Combust. Flame 158 (2011) 1439,
doi:10.1016/j.combustflame.2010.12.010). Targets all weigh 1: no scaling by element fluxes.

ω_j is the net rate; δ_Bj is 1 if B stands in the equation of j. Partners M, and collision efficiencies, make no edge.
"""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.sparse import csr_array

from ..errors import InputError, hint
from ..mechanism import Mechanism

METHODS = ("DRG", "DRGEP")
STATES_AT_ONCE = 32
"""States whose coefficients are in memory together."""


@dataclass(frozen=True, eq=False)
class Graph:
    """The relations between the species of a mechanism by one of METHODS."""

    mechanism: Mechanism
    method: str

    def __post_init__(self) -> None:
        if self.method not in METHODS:
            raise InputError(f"unknown method '{self.method}'{hint(self.method, METHODS)}", expected=" or ".join(METHODS))

    @cached_property
    def _takes_part(self) -> np.ndarray:
        """δ (N, reactions)."""
        m = self.mechanism
        part = np.zeros((len(m.species), len(m.reactions)), dtype=bool)
        for j, reaction in enumerate(m.reactions):
            for name, _ in reaction.equation.reactants + reaction.equation.products:
                part[m.index(name), j] = True
        return part

    @cached_property
    def _edges(self) -> tuple[np.ndarray, np.ndarray, csr_array]:
        """Places A and B of every edge, and what sums ν_Aj ω_j (DRG: sizes) over the reactions of both, (edges, reactions)."""
        nu, part = self.mechanism.stoichiometry, self._takes_part
        rows = [(a, b, j) for j in range(nu.shape[1]) for a in np.flatnonzero(nu[:, j]) for b in np.flatnonzero(part[:, j])
                if a != b]
        a, b, j = np.array(rows, dtype=int).reshape(-1, 3).T
        numbers, place = np.unique(a * len(nu) + b, return_inverse=True)
        values = np.abs(nu[a, j]) if self.method == "DRG" else nu[a, j]
        matrix = csr_array((values, (place, j)), shape=(len(numbers), nu.shape[1]))
        return numbers // len(nu), numbers % len(nu), matrix

    def coefficients(self, net: np.ndarray) -> np.ndarray:
        """r_AB of many states, (states, A, B) [-], from net rates (states, reactions)."""
        a, b, matrix = self._edges
        rates = np.abs(net) if self.method == "DRG" else net
        found = np.zeros((len(net), len(self.mechanism.species), len(self.mechanism.species)))
        shares = np.abs(matrix @ rates.T).T
        scale = self._scale(net)[:, a]
        found[:, a, b] = np.divide(shares, scale, out=np.zeros_like(shares), where=scale > 0)
        return np.minimum(found, 1.0)  # round-off

    def _scale(self, net: np.ndarray) -> np.ndarray:
        """What r_AB is relative to, (states, A)."""
        nu = self.mechanism.stoichiometry
        size = np.abs(net) @ np.abs(nu).T
        return size if self.method == "DRG" else 0.5 * (size + np.abs(net @ nu.T))  # max(P, C) = (P + C + |P - C|)/2

    def importance(self, net: np.ndarray, targets: list[int]) -> np.ndarray:
        """Importance of every species to the targets, the largest of all states, (N) 0…1; net rates (states, reactions)."""
        combine = np.minimum if self.method == "DRG" else np.multiply
        best = np.zeros(len(self.mechanism.species))
        for first in range(0, len(net), STATES_AT_ONCE):
            r = self.coefficients(net[first : first + STATES_AT_ONCE])
            best = np.maximum(best, best_paths(r, targets, combine).max(axis=0))
        return best


def best_paths(r: np.ndarray, targets: list[int], combine: Callable) -> np.ndarray:
    """The worth of the best path from any target to every node, (states, N), by Dijkstra's search in all states at once.

    r : (states, A, B) worth of edges, 0…1. combine : np.multiply or np.minimum, how the worths along a path combine.
    E.W. Dijkstra, Numer. Math. 1 (1959) 269, doi:10.1007/BF01386390; such worths never grow along a path, so that the
    best node not yet settled is final.
    """
    states, size = r.shape[0], r.shape[1]
    worth, open_ = np.zeros((states, size)), np.ones((states, size), dtype=bool)
    worth[:, targets] = 1.0
    every = np.arange(states)
    for _ in range(size):
        node = np.argmax(np.where(open_, worth, -1.0), axis=1)
        top = worth[every, node]
        if not np.any(top > 0):
            break
        open_[every, node] = False
        np.maximum(worth, combine(top[:, None], r[every, node]), out=worth, where=open_)
    return worth
