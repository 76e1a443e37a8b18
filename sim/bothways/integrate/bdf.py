"""Backward differentiation of orders 1 to 5 with variable step and order, compiled: few evaluations, J and LU reused.

The formula and its history are those of differences.py. Step and order follow the error estimates at the order in
use and its neighbours (G.D. Byrne, A.C. Hindmarsh, ACM Trans. Math. Softw. 1 (1975) 71, doi:10.1145/355626.355636;
P.N. Brown, G.D. Byrne, A.C. Hindmarsh, SIAM J. Sci. Stat. Comput. 10 (1989) 1038, doi:10.1137/0910062); the implicit
equations are solved by modified Newton iteration whose corrections are scaled where the step has changed since the
last factorisation (ibid.). Unknowns may be differential (mass 1) or tied by a linear row of the Jacobian (mass 0).

Measured on ignitions of hydrogen and methane, work for an achieved error of 1e-3 to 1e-6: the numerical differentiation
formulas (L.F. Shampine, M.W. Reichelt, SIAM J. Sci. Comput. 18 (1997) 1, doi:10.1137/S1064827594276424), which differ by
the leading coefficient alone, were within 2 % of the classical ones, so these stayed. Each control constant below was
varied there one at a time; the optimum is flat.
"""

import math

import numpy as np

from ..compiled import CROSSED, REFUSED, STAND, call, compiled
from .differences import MOST_ORDER, ROWS, begin_history, error_constant, extend_history, predict
from .sparse_lu import dense_factor, factor
from .stepping import (
    AT_CROSSING,
    BUFFER_FULL,
    DENSE,
    F_CALLS,
    FACTORISATIONS,
    J_CALLS,
    JUDGED_AGAINST,
    NEAREST,
    NEWTON_FAILED,
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
    set_matrix,
    solve_either,
)

ORDER, DEPTH, HELD, RISING, FIXED, WEIGHT, FACTORED, J_AGE, RATE, FAILED, CEILING = range(OWN_MEMORY, OWN_MEMORY + 11)
"""Order; differences known; steps since step or order changed; whether both still rise from the start; whether both are
fixed (for tests); α/h of the factors, and which these are; steps since J; rate of convergence;
failures of this step; longest step for now."""
MEMORY_SIZE = OWN_MEMORY + 11
NONE, SPARSE, PIVOTED = 0.0, 1.0, 2.0
PREDICTED, SLOPE, POINT, CORRECTION, RIGHT, DELTA, INVERSE, PERMUTED = range(8)
VECTORS = 8

RTOL_PART, ATOL_PART, TIGHTEST = 0.1, 1e-3, 1e-13
"""Tolerances are met at the end rather than at each step: the errors of a multistep method's steps add up with one sign, and
radicals that branch are multiplied by many orders of magnitude, so that what they are when hardly there sets the time of an
ignition (measured on hydrogen: atol taken as asked costs 1.3 times the work for the same achieved error)."""

_NEWTON_TOLERANCE = 0.03  # of the error test
_MOST_ITERATIONS = 4
_DRIFT = 0.25  # relative change of α/h since the factorisation that asks for a new one
_OLD = 25.0  # steps that a Jacobian serves
_BIAS, _BIAS_UP = 6.0, 8.0  # errors are taken as so much larger when the next step is chosen
_WORTH, _SHORTEN, _GROW, _GROW_AT_START, _CEILING_RISES = 1.3, 0.85, 10.0, 2.0, 1.2


@compiled
def restart(z, slope, memory, history, spacing):
    """Starts anew from z with its slope f(z) and the step in memory: order 1, no factors."""
    begin_history(z, slope, memory[STEP], history, spacing)
    memory[ORDER], memory[DEPTH], memory[HELD], memory[RISING] = 1.0, 1.0, 0.0, 1.0
    memory[FACTORED], memory[J_AGE], memory[FAILED] = NONE, np.inf, 0.0


@compiled
def _norm(x, inverse, count):
    """Root mean square of x in units of the tolerances [-]."""
    total = 0.0
    for i in range(x.size):
        total += (x[i] * inverse[i]) ** 2
    return math.sqrt(total / count)


@compiled
def _set_inverse(z, atol, rtol, inverse):
    """The inverse tolerances at the start of a step, 0 of unknowns that do not count; returns how many do."""
    count = 0
    for i in range(z.size):
        inverse[i] = 0.0
        if atol[i] < np.inf:
            inverse[i] = 1.0 / (atol[i] + rtol * abs(z[i]))
            count += 1
    return count


@compiled
def _iterate(f, context, mass, order, start, column, diagonal, lu, matrix, pivots, weight, allowed, count, vectors, memory,
             counts):
    """Modified Newton iteration from the predicted state; whether it converged, state and correction then in `vectors`."""
    predicted, slope, point, correction = vectors[PREDICTED], vectors[SLOPE], vectors[POINT], vectors[CORRECTION]
    right, delta = vectors[RIGHT], vectors[DELTA]
    n, before, rate = point.size, 0.0, memory[RATE]
    scale = 2.0 / (1.0 + weight / memory[WEIGHT])
    for i in range(n):
        point[i], correction[i] = predicted[i], 0.0
    for attempt in range(_MOST_ITERATIONS):
        call(f, point, right, context)
        for i in range(n):
            right[i] -= mass[i] * (slope[i] + weight * correction[i])
        solve_either(memory[FACTORED] == SPARSE, lu, order, start, column, diagonal, matrix, pivots, right,
                     vectors[PERMUTED], delta)
        counts[F_CALLS] += 1
        counts[SOLVES] += 1
        for i in range(n):
            delta[i] *= scale
            correction[i] += delta[i]
            point[i] = predicted[i] + correction[i]
        size = _norm(delta, vectors[INVERSE], count)
        if not math.isfinite(size):
            return False
        if attempt > 0:
            rate = max(0.3 * rate, size / before)
            if size > 0.95 * before:
                return False
        if size * min(1.0, rate) <= allowed:
            memory[RATE] = min(1.0, rate)
            return True
        before = size
    return False


@compiled
def _factorise(rows, starts, order, start, column, diagonal, target, own, mass, weight, jacobian, values, row, lu, matrix,
               pivots, memory, counts):
    """Factors of weight·M - J, pivoted where the sparse ones lost digits."""
    set_matrix(jacobian, own, mass, weight, values)
    memory[WEIGHT], memory[RATE], memory[FACTORED] = weight, 1.0, SPARSE
    counts[FACTORISATIONS] += 1
    if not factor(values, order, start, column, diagonal, target, lu, row):
        counts[DENSE] += 1
        memory[FACTORED] = PIVOTED if dense_factor(values, rows, starts, matrix, pivots) else NONE


@compiled
def _implicit(f, J, context, rows, starts, order, start, column, diagonal, target, own, mass, weight, allowed, count,
              jacobian, values, row, lu, matrix, pivots, vectors, memory, counts):
    """Solves the step's equations with the factors there are if they are good enough, else with new ones; whether it did."""
    new_J = memory[J_AGE] >= _OLD
    new_factors = new_J or memory[FACTORED] == NONE or abs(memory[WEIGHT] / weight - 1.0) > _DRIFT
    while True:
        if new_J:
            call(J, vectors[PREDICTED], jacobian, context)
            counts[J_CALLS] += 1
            memory[J_AGE] = 0.0
        if new_factors:
            _factorise(rows, starts, order, start, column, diagonal, target, own, mass, weight, jacobian, values, row, lu,
                       matrix, pivots, memory, counts)
        if memory[FACTORED] != NONE and _iterate(f, context, mass, order, start, column, diagonal, lu, matrix, pivots, weight,
                                                 allowed, count, vectors, memory, counts):
            return True
        if new_J:
            return False
        new_J, new_factors = True, True


@compiled
def _shorten(h, memory, counts):
    """A step refused whose error says nothing of a better length.

    For a while none of that length is tried: near equilibrium round-off in f times h, not the error, sets the limit.
    """
    counts[REJECTED] += 1
    memory[FAILED] += 1.0
    memory[CEILING] = 0.5 * h
    memory[STEP], memory[HELD], memory[RISING] = 0.25 * h, 0.0, 0.0


@compiled
def _start_anew(f, context, z, slope, memory, counts, history, spacing):
    """Order 1 from where it stands, after repeated failures."""
    call(f, z, slope, context)
    counts[F_CALLS] += 1
    restart(z, slope, memory, history, spacing)


@compiled
def _after_error(error, lower, h, memory):
    """Order and step after an error test that failed; whether to start anew."""
    memory[FAILED] += 1.0
    k, failed = memory[ORDER], memory[FAILED]
    shorter = (_BIAS * error) ** (-1.0 / (k + 1.0))
    at_lower = (_BIAS * lower) ** (-1.0 / k)
    if k > 1.0 and at_lower > shorter:
        memory[ORDER], shorter = k - 1.0, at_lower
    memory[STEP] = h * (min(0.9, max(0.2, shorter)) if failed < 3.0 else 0.25)
    memory[HELD], memory[RISING] = 0.0, 0.0
    return failed >= 3.0


@compiled
def _choose(error, lower, higher, h, memory):
    """Order and step after an accepted step; errors as estimated at this order and its neighbours."""
    k = memory[ORDER]
    best, chosen = (_BIAS * error + 1e-10) ** (-1.0 / (k + 1.0)), k
    memory[STEP] = h
    if memory[RISING] > 0.0 and best > 1.0:
        memory[ORDER] = min(k + 1.0, MOST_ORDER)
        memory[STEP] = min(h * min(_GROW_AT_START, best), memory[CEILING])
        return
    memory[RISING] = 0.0
    settled = memory[HELD] > k
    if not settled and best > _SHORTEN:
        return
    if k > 1.0:
        at_lower = (_BIAS * lower + 1e-10) ** (-1.0 / k)
        if at_lower > best:
            best, chosen = at_lower, k - 1.0
    if settled and k < MOST_ORDER:
        at_higher = (_BIAS_UP * higher + 1e-10) ** (-1.0 / (k + 2.0))
        if at_higher > best:
            best, chosen = at_higher, k + 1.0
    if _SHORTEN < best < _WORTH:
        memory[HELD] = k  # asks again after the next step
        return
    memory[STEP] = min(h * max(0.5, min(best, _GROW)), memory[CEILING])
    memory[ORDER], memory[HELD] = chosen, 0.0


@compiled
def _length(t, intended, stop):
    """The step's length, and whether it lands on `stop`: what is left is shared rather than a crumb left over."""
    if t + 1.0001 * intended >= stop:
        return stop - t, True
    if t + 2.0 * intended > stop:
        return 0.5 * (stop - t), False
    return intended, False


@compiled
def advance(f, J, judge, context, rows, starts, order, start, column, diagonal, target, own, mass, leading, z, memory, atol,
            rtol, stop, times, states, counts, history, spacing, jacobian, lu):
    """Steps from memory[TIME] towards `stop` until it is reached or the buffer (times, states) is full.

    f, J, judge: addresses (judge may be 0). own: place of each diagonal in the Jacobian's values. leading: α by order.
    history (ROWS, n), spacing (ROWS), jacobian, lu: kept between calls. Returns the status and the number of steps written.
    """
    n = z.size
    values, row, vectors = np.empty(rows.size), np.zeros(n), np.zeros((VECTORS, n))
    matrix, pivots = np.empty((n, n)), np.empty(n, dtype=np.int64)
    extended, ahead = np.zeros((ROWS, n)), np.zeros(ROWS)
    exchange, verdict = np.zeros(3 * n), np.zeros(4)
    predicted, point, correction, inverse = vectors[PREDICTED], vectors[POINT], vectors[CORRECTION], vectors[INVERSE]
    right, delta = vectors[RIGHT], vectors[DELTA]
    written, count = 0, _set_inverse(z, atol, rtol, inverse)
    if memory[FACTORED] == PIVOTED:  # its factors were not kept
        memory[FACTORED] = NONE
    while written < times.size:
        t, k = memory[TIME], int(memory[ORDER])
        if counts[STEPS] + counts[REJECTED] >= counts[STEP_LIMIT]:
            return TOO_MANY, written
        h, last = _length(t, memory[STEP], stop)
        if h <= memory[SMALLEST_STEP] * max(abs(t), 1e-300) and not last:
            return TOO_SMALL, written
        predict(h, k, int(memory[DEPTH]), history, spacing, ahead, extended, predicted, vectors[SLOPE])
        constant = error_constant(k, h, ahead, leading)
        if not _implicit(f, J, context, rows, starts, order, start, column, diagonal, target, own, mass, leading[k] / h,
                         _NEWTON_TOLERANCE / constant, count, jacobian, values, row, lu, matrix, pivots, vectors, memory,
                         counts):
            counts[NEWTON_FAILED] += 1
            memory[J_AGE] = np.inf
            _shorten(h, memory, counts)
            continue
        error, lower, higher = constant * _norm(correction, inverse, count), np.inf, np.inf
        if k > 1:
            for i in range(n):
                right[i] = correction[i] + extended[k, i]
            lower = error_constant(k - 1, h, ahead, leading) * _norm(right, inverse, count)
        if error > 1.0 and memory[FIXED] == 0.0:
            counts[REJECTED] += 1
            if _after_error(error, lower, h, memory):
                _start_anew(f, context, z, right, memory, counts, history, spacing)
            continue
        for i in range(n):
            exchange[i], exchange[n + i] = z[i], point[i]
            exchange[2 * n + i] = constant * abs(correction[i]) + abs(delta[i])
        answer = call(judge, exchange, verdict, context) if judge != 0 else STAND
        if answer == CROSSED and (1.0 - verdict[1]) * h > NEAREST * t:
            counts[REJECTED] += 1
            memory[STEP], memory[HELD], memory[RISING] = max(verdict[1] * h, NEAREST * t), 0.0, 0.0
            continue
        if answer == REFUSED:
            counts[JUDGED_AGAINST] += 1
            _shorten(h, memory, counts)
            if memory[FAILED] >= 2.0:
                _start_anew(f, context, z, right, memory, counts, history, spacing)
            continue
        for i in range(n):
            z[i] = exchange[n + i]
            correction[i] = z[i] - predicted[i]
        memory[DEPTH] = extend_history(z, correction, k, int(memory[DEPTH]), history, spacing, ahead, extended)
        if memory[DEPTH] > k + 1:
            higher = error_constant(k + 1, h, ahead, leading) * _norm(history[k + 2], inverse, count)
        memory[TIME] = stop if last else t + h
        memory[J_AGE] += 1.0
        memory[HELD] += 1.0
        memory[FAILED] = 0.0
        memory[CEILING] *= _CEILING_RISES
        if h >= 0.9999 * memory[STEP] and memory[FIXED] == 0.0:
            _choose(error, lower, higher, h, memory)
        times[written] = memory[TIME]
        states[written] = z
        counts[STEPS] += 1
        written += 1
        if answer == CROSSED:
            return AT_CROSSING, written
        count = _set_inverse(z, atol, rtol, inverse)
        if last:
            return REACHED, written
    return BUFFER_FULL, written
