"""Which species a charge can turn into at all, by exact integer arithmetic."""

import numpy as np

from ..components import Components


def possible_species(rows: np.ndarray, charge: np.ndarray) -> tuple[np.ndarray, Components]:
    """Mask (n) of the species that some composition with the charge's conserved totals holds, and their components.

    rows (m, n): conserved, integer. charge (n): amounts, whose zeros and whose order alone matter.

    A species in the span of those known to be possible is possible: take a little of each, and give the rest back.
    Beyond the span, amounts q >= 0 must cancel in every open row; a ray of that cone adds species, and where there
    is none the rest is impossible.
    """
    allowed = ~_holds_what_is_absent(rows, charge > 0)
    inner, order = rows[:, allowed], np.argsort(-charge[allowed], kind="stable")
    known = charge[allowed] > 0
    while True:
        components = Components(inner, order)
        open_rows = np.flatnonzero(~known[components.basis])
        if open_rows.size == 0:
            return allowed, components
        ray = _cancelling_species(components.copy(), open_rows)
        if ray is None:
            impossible = np.any(components.numbers[open_rows] != 0, axis=0)
            allowed[np.flatnonzero(allowed)[impossible]] = False
            return allowed, components.without(impossible)
        known[ray] = True
        order = np.concatenate([order[known[order]], order[~known[order]]])


def _holds_what_is_absent(rows: np.ndarray, charged: np.ndarray) -> np.ndarray:
    """Mask (n) of the species that hold something whose total is nil, such as an element that is not charged."""
    of_one_sign = np.all(rows >= 0, axis=1) | np.all(rows <= 0, axis=1)
    nil = of_one_sign & ~np.any(rows[:, charged] != 0, axis=1)
    return np.any(rows[nil] != 0, axis=0)


def _cancelling_species(components: Components, open_rows: np.ndarray) -> list[int] | None:
    """Species of some q >= 0, not nil, that cancels in the open rows; None if there is no such q.

    The simplex method maximises the sum of q from q = 0, by Bland's rule, in integers: it ends at a ray or at 0.
    Overwrites `components`.
    """
    while True:
        numbers = components.numbers[open_rows]
        gain = np.where(np.any(numbers != 0, axis=0), components.divisor - np.sum(numbers, axis=0), 0)
        entering = np.flatnonzero(gain > 0)
        if entering.size == 0:
            return None
        j = int(entering[0])
        leaving = open_rows[numbers[:, j] > 0]
        if leaving.size == 0:
            return [j, *components.basis[open_rows[numbers[:, j] < 0]].tolist()]
        components.exchange(int(leaving[np.argmin(components.basis[leaving])]), j)
