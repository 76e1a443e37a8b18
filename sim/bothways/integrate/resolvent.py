"""(I - h J)⁻¹ on a sparse bordered pattern, with the sparse factors of the integrators: for what is done between steps."""

from collections.abc import Callable

import numpy as np

from . import stepping
from .pattern import plan_of
from .sparse_lu import dense_factor, factor


class Resolvent:
    """For one pattern (rows, column starts) with its mass diagonal and so many full rows and columns at the end."""

    def __init__(self, pattern: tuple[np.ndarray, np.ndarray], mass: np.ndarray, tail: int) -> None:
        self.rows, self.starts = (part.astype(np.uint32) for part in pattern)
        self.plan, self.mass = plan_of(self.rows, self.starts, tail), mass
        columns = np.repeat(np.arange(mass.size), np.diff(pattern[1]))
        self.own = np.flatnonzero(self.rows == columns).astype(np.uint32)

    def of(self, jacobian: np.ndarray, step: float) -> Callable[[np.ndarray], np.ndarray]:
        """v (n) -> (M - step J)⁻¹ v for the values of J by the pattern; at places of no mass v counts as zero."""
        p, n, weight = self.plan, self.mass.size, 1.0 / step
        values, lu = np.empty(jacobian.size), np.zeros(p.fill)
        matrix, pivots, permuted = np.empty((n, n)), np.empty(n, dtype=np.int64), np.empty(n)
        stepping.set_matrix(jacobian, self.own, self.mass, weight, values)
        sound = factor(values, p.order, p.start, p.column, p.diagonal, p.target, lu, np.zeros(n))
        if not sound and not dense_factor(values, self.rows, self.starts, matrix, pivots):
            return np.zeros_like  # not a digit is left: all counts as fast

        def apply(v: np.ndarray) -> np.ndarray:
            out = np.empty(n)
            stepping.solve_either(sound, lu, p.order, p.start, p.column, p.diagonal, matrix, pivots, weight * self.mass * v,
                                  permuted, out)
            return out

        return apply
