"""The last resort of a method whose steps the monitor keeps refusing: a backward Euler step, solved to the end.

A method of order above one keeps neither positive amounts nor the fall of a potential at every step length (C. Bolley,
M. Crouzeix, RAIRO Anal. Numér. 12 (1978) 237); the backward Euler step lowers every convex potential at any length once its
equations are solved. They are, by Newton's method with the exact Jacobian at every iterate.
"""

import numpy as np

from ..compiled import call, compiled
from .sparse_lu import dense_factor, factor, fill
from .stepping import DENSE, F_CALLS, FACTORISATIONS, J_CALLS, SOLVES, error_norm, set_matrix, solve_either

MOST_ITERATIONS = 24
CONVERGED, AT_REST = 1e-6, 1e-3
"""A correction smaller than the first, in units of the tolerances, is the last; or than the second, if corrections no longer
get smaller: round-off moves them then [-]."""


@compiled
def _part(point, correction, atol):
    """How much of a correction may be made: no unknown that counts goes more than nine tenths of its way below zero."""
    part = 1.0
    for i in range(point.size):
        if point[i] > 0.0 and point[i] + correction[i] < -atol[i]:
            part = min(part, -0.9 * point[i] / correction[i])
    return part


@compiled
def backward_euler(f, J, context, rows, starts, order, start, column, diagonal, target, own, mass, z, slope, h, point,
                   correction, error, atol, rtol, counts):
    """Solves M (point - z)/h = F(point), starting from `point`; False if that does not converge.

    slope: (n) F(z). correction: (n) set to the last one, what is left of the error of solving; error: (n) to an estimate of
    the step's own, h/2·(F(point) - F(z)) behind (1 - hJ)⁻¹. The other arguments as `advance` has them.
    """
    n = z.size
    values, jacobian, right = np.empty(rows.size), np.empty(rows.size), np.empty(n)
    lu, row, permuted = np.zeros(fill(start, order, diagonal)), np.zeros(n), np.empty(n)
    matrix, pivots = np.empty((n, n)), np.empty(n, dtype=np.int64)
    before = np.inf
    for attempt in range(MOST_ITERATIONS):
        call(f, point, right, context)
        call(J, point, jacobian, context)
        set_matrix(jacobian, own, mass, 1.0 / h, values)
        sound = factor(values, order, start, column, diagonal, target, lu, row)
        counts[F_CALLS] += 1
        counts[J_CALLS] += 1
        counts[FACTORISATIONS] += 1
        counts[SOLVES] += 1
        if not sound:
            counts[DENSE] += 1
            if not dense_factor(values, rows, starts, matrix, pivots):
                return False
        for i in range(n):
            right[i] -= mass[i] * (point[i] - z[i]) / h
        solve_either(sound, lu, order, start, column, diagonal, matrix, pivots, right, permuted, correction)
        part = _part(point, correction, atol)
        for i in range(n):
            point[i] += part * correction[i]
        size = error_norm(correction, z, point, atol, rtol)
        if size <= CONVERGED or (before <= AT_REST and size > 0.5 * before):
            call(f, point, right, context)
            counts[F_CALLS] += 1
            counts[SOLVES] += 1
            for i in range(n):
                right[i] = 0.5 * (right[i] - slope[i])
            solve_either(sound, lu, order, start, column, diagonal, matrix, pivots, right, permuted, error)
            return True
        if not size < 1e10 or (attempt > MOST_ITERATIONS // 2 and size > 2.0 * before):
            return False
        before = size
    return False
