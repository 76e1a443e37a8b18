"""What the compiled methods share: statuses, places of memory and counters, norms, the first step, the linear system."""

import math

import numpy as np

from ..compiled import call, compiled
from .sparse_lu import dense_solve, solve, unpermute

REACHED, BUFFER_FULL, TOO_SMALL, NOT_FINITE, TOO_MANY, AT_CROSSING = range(6)
"""How a call of a method's `advance` ended."""
NEAREST = 1e-13
"""Crossings are located to this part of the time; below, a step hardly moves the clock."""
TIME, STEP, SMALLEST_STEP, OWN_MEMORY = range(4)
"""Places in a method's memory; its own begin at the last."""
COUNTED = ("steps", "rejected", "f_evaluations", "J_evaluations", "factorisations", "solves", "dense_factorisations",
           "rejected_by_second_law", "Newton_failures", "backward_Euler_steps", "graded_steps")
(STEPS, REJECTED, F_CALLS, J_CALLS, FACTORISATIONS, SOLVES, DENSE, JUDGED_AGAINST, NEWTON_FAILED, LAST_RESORTS,
 GRADED_STEPS, STEP_LIMIT) = range(12)
COUNTS_SIZE = 12


@compiled
def error_norm(error, old, new, atol, rtol):
    """Root mean square of the error estimate in units of the tolerances [-]; unknowns of infinite atol do not count."""
    total, count = 0.0, 0
    for i in range(error.size):
        scale = atol[i] + rtol * max(abs(old[i]), abs(new[i]))
        if scale < np.inf:
            total += (error[i] / scale) ** 2
            count += 1
    return math.sqrt(total / count)


@compiled
def first_step(f, context, z, slope, atol, rtol, order, span):
    """A first step from the size of f and of its change (Hairer, Nørsett, Wanner, vol. I, II.4)."""
    zero = np.zeros(z.size)
    size, speed = error_norm(z, z, zero, atol, rtol), error_norm(slope, z, zero, atol, rtol)
    trial = 0.01 * size / speed if speed > 1e-5 and size > 1e-5 else 1e-6 * span
    moved, changed = z + trial * slope, np.empty(z.size)
    call(f, moved, changed, context)
    bend = error_norm(changed - slope, z, zero, atol, rtol) / trial
    largest = max(speed, bend)
    h = (0.01 / largest) ** (1.0 / (order + 1.0)) if largest > 1e-15 else max(1e-6 * span, 1e-3 * trial)
    if not h > 0.0:
        h = 1e-12 * span
    return min(100.0 * trial, h, span)


@compiled
def begin(f, context, z, atol, rtol, order, span, slope):
    """The first step for a start z, NaN where f is not finite there; sets slope (n) to f(z)."""
    call(f, z, slope, context)
    for value in slope:
        if not math.isfinite(value):
            return np.nan
    return first_step(f, context, z, slope, atol, rtol, order, span)


@compiled
def set_matrix(jacobian, own, mass, weight, values):
    """values: of weight·M - J in the pattern of J; own: place of each diagonal."""
    for e in range(values.size):
        values[e] = -jacobian[e]
    for i in range(mass.size):
        values[own[i]] += mass[i] * weight


@compiled
def solve_either(sound, lu, order, start, column, diagonal, matrix, pivots, right, permuted, out):
    """Solves with the sparse factors where they are sound, with the dense ones where not."""
    if sound:
        solve(lu, order, start, column, diagonal, right, permuted)
        unpermute(permuted, order, out)
    else:
        dense_solve(matrix, pivots, right, out)
