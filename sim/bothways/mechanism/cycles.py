"""Cycles of reactions: what stated equilibrium constants must close round, which do not, and the least repair.

A cycle is a combination of reactions that changes nothing: Σ_j c_j ν_j = 0. Round it Σ c_j ln K_j must be nil (R. Wegscheider,
Monatsh. Chem. 22 (1901) 849, doi:10.1007/BF01517498), and so must Σ c_j ΔH_j and Σ c_j ΔC_pj. Numbers c are exact integers.

Values that a set of potentials can give are x = νᵀy. Within bounds |x_j - value_j| ≤ allowed_j there is such a set if and only if
no cycle is off by more than Σ |c_j| allowed_j (Farkas' lemma); the worst one is found by linear programming, whose
vertices are cycles of which no part is a cycle.
"""

import math
from dataclasses import dataclass

import numpy as np

from ..components import Components

_NIL = 1e-9


@dataclass(frozen=True)
class Cycle:
    """How often each reaction is gone through, (R) integers, backwards where negative; and what is off round it.

    misfit : Σ c_j value_j. allowed : Σ |c_j| allowed_j.
    """

    numbers: np.ndarray
    misfit: float = 0.0
    allowed: float = 0.0

    @property
    def reactions(self) -> list[int]:
        """The places of the reactions it goes through."""
        return [int(j) for j in np.flatnonzero(self.numbers)]


def null_space(matrix: np.ndarray) -> np.ndarray:
    """A basis of all integer c with matrix·c = 0, (m, n), each primitive; matrix: (rows, n) integers.

    No vector's places are those of another and more: each is one column formed from independent ones.
    """
    n = matrix.shape[1]
    components = Components(np.asarray(matrix, dtype=np.int64).reshape(-1, n), np.arange(n))
    free = [j for j in range(n) if j not in components.basis]
    vectors = np.zeros((len(free), n), dtype=object)
    for row, j in zip(vectors, free, strict=True):
        row[components.basis] = -components.numbers[:, j]
        row[j] = components.divisor
    return np.array([_primitive(row) for row in vectors], dtype=np.int64).reshape(len(free), n)


def _primitive(row: np.ndarray) -> np.ndarray:
    return row // math.gcd(*(int(v) for v in row))


def independent_cycles(nu: np.ndarray) -> np.ndarray:
    """A basis of the cycles, (cycles, R) integers; nu: (N, R) stoichiometric numbers."""
    return null_space(np.asarray(nu))


def worst_cycle(nu: np.ndarray, values: np.ndarray, allowed: np.ndarray) -> Cycle | None:
    """The cycle that is off by most of what is allowed it, turned so that it is off upwards; None if all close.

    nu : (N, R) stoichiometric numbers, integers. values, allowed : (R), the latter positive.
    """
    if not _may_be_off(nu, values, allowed):
        return None
    from scipy.optimize import linprog

    n = values.size
    size = float(np.max(np.abs(values))) or 1.0
    shares = allowed / np.max(allowed)
    found = linprog(np.concatenate([-values, values]) / size, A_ub=np.concatenate([shares, shares])[None, :], b_ub=[1.0],
                    A_eq=np.hstack([nu, -nu]), b_eq=np.zeros(len(nu)), bounds=(0, None), method="highs-ds")
    support = np.flatnonzero(np.abs(found.x[:n] - found.x[n:]) > _NIL * np.max(found.x)) if found.x is not None else np.arange(n)
    return _worst_of(cycles_within(nu, support), values, allowed)


def _may_be_off(nu: np.ndarray, values: np.ndarray, allowed: np.ndarray) -> bool:
    """Whether the nearest values of a set of potentials leave any of the bounds: if not, all cycles close."""
    return bool(np.any(np.abs(least_squares_repair(nu, values, allowed) - values) > allowed))


def cycles_within(nu: np.ndarray, reactions: np.ndarray) -> np.ndarray:
    """A basis of the cycles that go through these reactions alone, (cycles, R): one cycle if no part of it is one."""
    vectors = null_space(nu[:, reactions])
    whole = np.zeros((len(vectors), nu.shape[1]), dtype=np.int64)
    whole[:, reactions] = vectors
    return whole


def _worst_of(cycles: np.ndarray, values: np.ndarray, allowed: np.ndarray) -> Cycle | None:
    misfits, bounds = cycles @ values, np.abs(cycles) @ allowed
    if not np.any(np.abs(misfits) > bounds):
        return None
    k = int(np.argmax(np.abs(misfits) / bounds))
    return Cycle(cycles[k] * (1 if misfits[k] > 0 else -1), abs(float(misfits[k])), float(bounds[k]))


def violated_cycles(nu: np.ndarray, values: np.ndarray, allowed: np.ndarray, most: int = 100) -> list[Cycle]:
    """Cycles that do not close, the worst first, until those of the reactions left over close: see `suspects`."""
    left = np.arange(values.size)
    found: list[Cycle] = []
    while len(found) < most:
        cycle = worst_cycle(nu[:, left], values[left], allowed[left])
        if cycle is None:
            break
        numbers = np.zeros(values.size, dtype=np.int64)
        numbers[left] = cycle.numbers
        found.append(Cycle(numbers, cycle.misfit, cycle.allowed))
        culprit = suspects(nu[:, left], values[left], allowed[left], cycle)
        left = np.delete(left, culprit[0] if culprit else cycle.reactions[0])
    return found


def suspects(nu: np.ndarray, values: np.ndarray, allowed: np.ndarray, cycle: Cycle) -> list[int]:
    """The reactions of a cycle any one of which, left to the others, lets all cycles close; empty if one is not enough."""
    return [j for j in cycle.reactions
            if worst_cycle(np.delete(nu, j, 1), np.delete(values, j), np.delete(allowed, j)) is None]


def least_squares_repair(nu: np.ndarray, values: np.ndarray, spread: np.ndarray) -> np.ndarray:
    """The values (R) that close every cycle at the least Σ ((x_j - value_j)/spread_j)²; nu: (N, R)."""
    return nu.T @ least_squares(nu.T, values, spread)


def least_squares(design: np.ndarray, values: np.ndarray, spread: np.ndarray) -> np.ndarray:
    """The smallest y of the least Σ ((design·y - value)_j/spread_j)²; design: (R, n)."""
    if not design.size:
        return np.zeros(design.shape[1])
    return np.linalg.lstsq(design / spread[:, None], values / spread, rcond=None)[0]
