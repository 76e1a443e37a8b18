"""Newton's method for the potentials of the components, in logarithms throughout.

With component k at ln n_k = η_k, every other species follows: ln n_j = θ_j + Σ_k a_kj η_k + (1 - Σ_k a_kj) ζ, where θ_j
is the logarithm of its formation's equilibrium constant and ζ = ln(pV/RT). What remains is one balance for each
component, Σ_j a_kj n_j = b_k, and Σ n = exp(ζ) where the pressure is held. Each balance is parted into its
positive and its negative terms and solved as ln(positive) - ln(negative) = 0.

Components are kept the most abundant independent species (S.R. Brinkley, J. Chem. Phys. 15 (1947) 107,
doi:10.1063/1.1746420). Then n_j <= n_k wherever a_kj is not zero, and each row of the Jacobian, scaled by its own
component, has entries bounded by the a_kj alone, however small that component's amount: traces of 1e-300 are as
well determined as the major species.
"""

from dataclasses import dataclass

import numpy as np
from scipy.linalg.lapack import dgesv

from ..components import Components

_EXCHANGE_ABOVE = 1.0  # in ln n
_FARTHEST = 1e6  # in ln n: beyond it the iteration runs away
_LAST_STEP = 1e-8  # in ln n: its square, the error left by it, is round-off


@dataclass
class Point:
    """Where the iteration stands: the components, η (r) and ζ."""

    components: Components
    log_component: np.ndarray
    log_total: float = 0.0

    def copy(self) -> "Point":
        """An independent copy."""
        return Point(self.components.copy(), self.log_component.copy(), self.log_total)


@dataclass(frozen=True)
class Task:
    """A composition to be found: g (n) [-] with ln n_i = -g_i + potentials (+ ζ where the mixture swells), charge (n).

    swells : ζ = ln Σn is an unknown (the pressure is held, or activities are mole fractions); else g contains -ζ and
        log_total is not used.
    """

    g: np.ndarray
    charge: np.ndarray
    swells: bool


def solve(point: Point, task: Task, most: int) -> tuple[bool, int]:
    """Moves `point` to the solution of `task` in at most `most` iterations; whether it came there, and the count."""
    log_totals, n_rows = None, point.log_component.size
    for count in range(1, most + 1):
        log_n, exchanged = _take_most_abundant(point, task)
        if exchanged or log_totals is None:
            log_totals = log_sides(point.components.totals(task.charge))
        misfit, weight, fraction = balances(point, task, log_n, log_totals)
        try:
            step = solved(jacobian(point, task, weight, fraction), misfit)
        except np.linalg.LinAlgError:
            return False, count
        largest = float(np.abs(step).max())
        if not largest < _FARTHEST:  # NaN included
            return False, count
        point.log_component = point.log_component - step[:n_rows]
        if task.swells:
            point.log_total -= float(step[-1])
        if largest < _LAST_STEP:
            return True, count
    return False, most


def solved(matrix: np.ndarray, right: np.ndarray) -> np.ndarray:
    """The solution of a small linear system; without the checks that would take longer than it does."""
    _, _, solution, fault = dgesv(matrix, right)
    if fault:
        raise np.linalg.LinAlgError("singular")
    return solution


def log_amounts(point: Point, task: Task) -> np.ndarray:
    """ln n of every species, (n)."""
    components = point.components
    own = task.g[components.basis] @ components.formation - task.g
    result = own + point.log_component @ components.formation
    if task.swells:
        result += components.expansion * point.log_total
    result[components.basis] = point.log_component
    return result


def _take_most_abundant(point: Point, task: Task) -> tuple[np.ndarray, bool]:
    """Exchanges components until none is rarer by e than a species formed from it; ln n, and whether any was."""
    changed = False
    while True:
        log_n = log_amounts(point, task)
        lead = point.components.logarithms[1] + log_n - point.log_component[:, None]
        k, j = divmod(int(lead.argmax()), log_n.size)
        if not lead[k, j] > _EXCHANGE_ABOVE:
            return log_n, changed
        point.components.exchange(k, j)
        point.log_component[k] = log_n[j]
        changed = True


def log_sides(totals: np.ndarray) -> np.ndarray:
    """ln of the totals as terms of the balances, (2 r): on the positive side where negative, and the reverse."""
    sides = np.concatenate([-totals, totals])
    logarithms = np.full(sides.size, -np.inf)
    np.log(sides, out=logarithms, where=sides > 0)
    return logarithms


def balances(point: Point, task: Task, log_n: np.ndarray,
             log_totals: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Misfits ln(positive) - ln(negative) of the balances, (r) or with ln Σn - ζ (r + 1); their slopes against ln n
    of the species, (r, n); mole fractions (n). log_totals : from `log_sides`."""
    n_rows = point.log_component.size
    terms = np.empty((2 * n_rows, log_n.size + 1))
    terms[:, :-1] = point.components.logarithms[0] + log_n
    terms[:, -1] = log_totals
    terms -= np.concatenate([point.log_component, point.log_component])[:, None]
    log_sum, share = _log_sums(terms)
    misfit = log_sum[:n_rows] - log_sum[n_rows:]
    weight = share[:n_rows, :-1] - share[n_rows:, :-1]
    if not task.swells:
        return misfit, weight, np.empty(0)
    log_total, fraction = _log_sums(log_n[None, :])
    return np.append(misfit, log_total - point.log_total), weight, fraction[0]


def _log_sums(terms: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """ln Σ exp of each row, and each term's share in its sum, safe against overflow and underflow."""
    top = terms.max(axis=1)
    exponentials = np.exp(terms - top[:, None])
    sums = exponentials.sum(axis=1)
    return top + np.log(sums), exponentials / sums[:, None]


def jacobian(point: Point, task: Task, weight: np.ndarray, fraction: np.ndarray) -> np.ndarray:
    """Derivatives of the misfits with respect to η and, where the mixture swells, ζ."""
    components = point.components
    inner = weight @ components.formation.T
    if not task.swells:
        return inner
    n_rows = len(inner)
    whole = np.empty((n_rows + 1, n_rows + 1))
    whole[:-1, :-1] = inner
    expansion = components.expansion
    whole[:-1, -1] = weight @ expansion
    whole[-1, :-1] = components.formation @ fraction
    whole[-1, -1] = expansion @ fraction - 1.0
    return whole
