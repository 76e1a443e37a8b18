"""Rosenbrock methods, compiled: linearly implicit, stiffly accurate, the exact Jacobian at every step.

The methods' tables stand in rosenbrock_tables.py. Unknowns may be differential (mass 1) or tied by a linear row of
the Jacobian (mass 0: a border that keeps the linear system sparse; E. Hairer, G. Wanner, Solving Ordinary
Differential Equations II, 2nd ed., 1996, IV.7 for the transformed step formulas and IV.8 for
the controller with memory, after K. Gustafsson, ACM Trans. Math. Softw. 20 (1994) 496, doi:10.1145/198429.198437).
"""

import math

import numpy as np

from ..compiled import CROSSED, REFUSED, STAND, call, compiled
from .last_resort import backward_euler
from .sparse_lu import dense_factor, factor, fill
from .stepping import (
    AT_CROSSING,
    BUFFER_FULL,
    DENSE,
    F_CALLS,
    FACTORISATIONS,
    J_CALLS,
    JUDGED_AGAINST,
    LAST_RESORTS,
    NEAREST,
    OWN_MEMORY,
    REACHED,
    REJECTED,
    SMALLEST_STEP,
    SOLVES,
    STEP,
    STEP_LIMIT,
    STEPS,
    TIME,
    TOO_MANY,
    TOO_SMALL,
    error_norm,
    set_matrix,
    solve_either,
)

LAST_STEP, LAST_ERROR, FASTEST = OWN_MEMORY, OWN_MEMORY + 1, OWN_MEMORY + 2
MEMORY_SIZE = OWN_MEMORY + 3
SHIFT_PART = 0.02
"""A step that speeds up may shift what follows by this part of rtol, of the time reached. Parts of 0.005 to 0.3 and none
were compared by the steps to an achieved error, see benchmarks/controllers.py; without it the same error takes more than
half as many steps again."""
PATIENCE = 3
"""Refusals by the monitor in a row, each at a quarter of the length, before a backward Euler step is tried instead."""
_SAFETY, _SHRINK, _GROW = 0.85, 0.2, 6.0


@compiled
def shortened(norm, order):
    """What part of its length a step is tried again with: by the elementary rule, since the trend has just been wrong."""
    return min(max(_SAFETY * norm ** (-1.0 / order), _SHRINK), 0.9) if norm < 1e10 else 0.1


@compiled
def next_factor(norm, memory, rejected_before, order):
    """How much longer the next step may be: the elementary rule, held back by the trend of the last error."""
    norm = max(norm, 1e-10)
    growth = _SAFETY * norm ** (-1.0 / order)
    if memory[LAST_STEP] > 0.0:
        trend = _SAFETY * memory[STEP] / memory[LAST_STEP] * (memory[LAST_ERROR] / norm**2) ** (1.0 / order)
        growth = min(growth, trend)
    growth = min(max(growth, _SHRINK), _GROW)
    return min(growth, 1.0) if rejected_before else growth


@compiled
def time_shift(error, old, new, slope, h, atol, rtol):
    """By how much an error shifts all that follows in time, while the course speeds up; 0 where it slows down.

    Of y' = f(y) any course moved in time is another course, so that an error along the change d of a step, the part
    e·d/d·d of its length h, is never forgotten, and grows as f does: before an ignition it moves the ignition.
    Errors in other directions die out. Taken is Σ|e d|/d·d, since the signed sum passes through zero at some lengths.
    Products in units of the tolerances; slope: (n) f(old). Where the change is mostly of unknowns that change by less
    than rtol of themselves, nothing grows: round-off may be all there is.
    """
    along, squared, before, grown = 0.0, 0.0, 0.0, 0.0
    for i in range(error.size):
        size = max(abs(old[i]), abs(new[i]))
        scale = 1.0 / (atol[i] + rtol * size)
        change, start = new[i] - old[i], slope[i] * scale
        d = change * scale
        along += abs(error[i] * scale * d)
        squared += d * d
        before += start * start
        grown += d * d if abs(change) > rtol * size else 0.0
    return along / squared * h if squared > h * h * before and grown > 0.5 * squared else 0.0


@compiled
def fastest(jacobian, own, mass):
    """The largest rate on the diagonal of the Jacobian [1/time], of unknowns that have a derivative."""
    largest = 0.0
    for i in range(mass.size):
        largest = max(largest, mass[i] * abs(jacobian[own[i]]))
    return largest


@compiled
def advance(f, J, judge, context, rows, starts, order, start, column, diagonal, target, own, mass, table, gamma,
            estimator_order, z, memory, atol, rtol, stop, times, states, counts):
    """Steps from memory[TIME] towards `stop` until it is reached or the buffer (times, states) is full.

    f, J, judge: addresses (judge may be 0). table: (4, s, s) a, c, and rows m and e. own: place of each diagonal in
    the Jacobian's values. Returns the status and the number of steps written.
    """
    n, s = z.size, table.shape[1]
    values, jacobian = np.empty(rows.size), np.empty(rows.size)
    lu, row, permuted = np.zeros(fill(start, order, diagonal)), np.zeros(n), np.empty(n)
    matrix, pivots = np.empty((0, 0)), np.empty(0, dtype=np.int64)
    u, right, point = np.zeros((s, n)), np.empty(n), np.empty(n)
    start_slope, slope = np.empty(n), np.empty(n)
    exchange, verdict = np.zeros(3 * n), np.zeros(4)
    written, fresh, rejected, refused, first, last_at_first = 0, False, False, 0, 0.0, False
    while written < times.size:
        t, h = memory[TIME], memory[STEP]
        if counts[STEPS] + counts[REJECTED] >= counts[STEP_LIMIT]:
            return TOO_MANY, written
        last = t + 1.0001 * h >= stop
        intended = h
        if last:
            h = stop - t
        if h <= memory[SMALLEST_STEP] * max(abs(t), 1e-300) and not last:
            return TOO_SMALL, written
        if not fresh:
            call(J, z, jacobian, context)
            call(f, z, start_slope, context)
            memory[FASTEST] = fastest(jacobian, own, mass)
            counts[J_CALLS] += 1
            counts[F_CALLS] += 1
            fresh = True
        set_matrix(jacobian, own, mass, 1.0 / (h * gamma), values)
        sound = factor(values, order, start, column, diagonal, target, lu, row)
        counts[FACTORISATIONS] += 1
        if not sound:
            if matrix.size == 0:
                matrix, pivots = np.empty((n, n)), np.empty(n, dtype=np.int64)
            counts[DENSE] += 1
            if not dense_factor(values, rows, starts, matrix, pivots):
                memory[STEP] = 0.5 * h
                counts[REJECTED] += 1
                continue
        finite = True
        for i in range(s):
            if i > 0:
                point[:] = z
                for j in range(i):
                    if table[0, i, j] != 0.0:
                        for k in range(n):
                            point[k] += table[0, i, j] * u[j, k]
                call(f, point, slope, context)
                counts[F_CALLS] += 1
            right[:] = start_slope if i == 0 else slope
            for j in range(i):
                for k in range(n):
                    right[k] += table[1, i, j] / h * u[j, k] * mass[k]
            solve_either(sound, lu, order, start, column, diagonal, matrix, pivots, right, permuted, u[i])
            counts[SOLVES] += 1
        old, new, error = exchange[:n], exchange[n : 2 * n], exchange[2 * n :]
        for k in range(n):
            old[k] = z[k]
            move, wrong = 0.0, 0.0
            for j in range(s):
                move += table[2, 0, j] * u[j, k]
                wrong += table[3, 0, j] * u[j, k]
            new[k] = z[k] + move
            error[k] = wrong
            finite = finite and math.isfinite(new[k])
        norm = np.inf
        if finite:
            shift = time_shift(error, old, new, start_slope, h, atol, rtol)
            norm = max(error_norm(error, old, new, atol, rtol), shift / (SHIFT_PART * rtol * (t + h)))
        if not norm <= 1.0:
            shorter = shortened(norm, estimator_order)
            if memory[LAST_STEP] == 0.0:  # the first step may be a guess that is far too long
                shorter = max(min(shorter, norm ** (-1.0 / estimator_order)), 1e-3)
            memory[STEP] = h * shorter
            counts[REJECTED] += 1
            rejected = True
            continue
        answer = call(judge, exchange, verdict, context) if judge != 0 else STAND
        if answer == CROSSED and (1.0 - verdict[1]) * h > NEAREST * t:
            counts[REJECTED] += 1
            memory[STEP] = max(verdict[1] * h, NEAREST * t)
            continue
        if answer == REFUSED and refused == 0:
            first, last_at_first = h, last
        if answer == REFUSED and refused >= PATIENCE:
            for length in (first, h):  # the length at which the refusals began, where its error allows that
                point[:] = z
                if answer == REFUSED and backward_euler(
                        f, J, context, rows, starts, order, start, column, diagonal, target, own, mass, z, start_slope, length,
                        point, error, slope, atol, rtol, counts) and error_norm(slope, old, point, atol, rtol) <= 1.0:
                    new[:] = point
                    answer = call(judge, exchange, verdict, context)
                    if answer == CROSSED and (1.0 - verdict[1]) * length > NEAREST * t:
                        answer = REFUSED
                    if answer != REFUSED:
                        counts[LAST_RESORTS] += 1
                        norm = error_norm(slope, old, point, atol, rtol) ** (0.5 * estimator_order)  # of order 1
                        h, last, rejected = length, last_at_first if length == first else last, False
                        memory[LAST_STEP] = 0.0
        if answer == REFUSED:
            refused += 1
            counts[JUDGED_AGAINST] += 1
            counts[REJECTED] += 1
            memory[STEP] = 0.25 * h
            rejected = True
            continue
        memory[STEP] = h
        growth = next_factor(norm, memory, rejected, estimator_order)
        memory[LAST_STEP], memory[LAST_ERROR] = h, max(norm, 1e-2)
        memory[TIME] = stop if last else t + h
        memory[STEP] = max(h * growth, intended) if last else h * growth
        z[:] = new
        times[written] = memory[TIME]
        states[written] = z
        counts[STEPS] += 1
        written += 1
        fresh, rejected, refused = False, False, 0
        if answer == CROSSED:
            return AT_CROSSING, written
        if last:
            return REACHED, written
    return BUFFER_FULL, written
