"""A Rosenbrock method by reactions, for networks whose rates span more decades than double precision has digits.

An entry of the Jacobian of the species sums fast and slow rates, so that slow ones drown, and so does what they do to f.
Here the same steps (tables and formulas of rosenbrock.py; linearly implicit methods do not depend on coordinates) are
solved for in others (grading.py says which): an equation for the extent of each basis reaction, the unknowns the changes
u of the basis species,

    (L/(hγ) - Zᵀ K E) u_i = Zᵀ w(n + E Σ a_ij u_j) + L Σ c_ij/h u_j,   K = ∂w/∂n.

The row of a basis reaction holds nothing faster than that, the column of a basis species only changes of species that there
is more of. Rows and columns so scaled, a pivoted dense factorisation is accurate in every one of them. Temperature is no
unknown: it follows from the amounts. Net rates that vanish to round-off at equilibrium, one by one (kernels/rates.py),
leave no noise of the fast reactions in the rows of the slow ones.
"""

import math
from typing import NamedTuple

import numpy as np

from ..compiled import CROSSED, REFUSED, STAND, call, compiled
from ..sums import dot
from .grading import grade_reactions, grade_species, in_order
from .interface import ByReaction
from .rosenbrock import LAST_ERROR, LAST_STEP, SHIFT_PART, next_factor, shortened, time_shift
from .sparse_lu import dense_factor, dense_solve
from .stepping import (
    AT_CROSSING,
    BUFFER_FULL,
    F_CALLS,
    FACTORISATIONS,
    GRADED_STEPS,
    J_CALLS,
    JUDGED_AGAINST,
    NEAREST,
    NOT_FINITE,
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
)

SMALLEST_PART = 1e-12
"""Amounts are taken for the order of species and the scales of columns no smaller than this part of atol [-]."""


class Space(NamedTuple):
    """What the method keeps between calls. N species, R reactions, r the rank of ν, s stages, e entries of K.

    nu (N, R), reaction, species (e): see ByReaction. combined (N, R), basis (N): Zᵀ and its reactions; spread (r, N + r),
    places (r): E and L, and their species. known: (1) whether these stand for a state. speed (R) [amount/time], scale (N).
    slopes: as ByReaction.slopes gives them; rates (R + 1) likewise. by_species (r, N): Zᵀ ∂w/∂n of the entries;
    jacobian (r, r): Zᵀ K E. values, rows, starts, matrix, pivots: as dense_factor takes them. row_scale, right (r).
    u (s, r): the stages; mixed, other (r): combinations of them. point (N + 1).
    """

    nu: np.ndarray
    reaction: np.ndarray
    species: np.ndarray
    combined: np.ndarray
    basis: np.ndarray
    spread: np.ndarray
    places: np.ndarray
    known: np.ndarray
    speed: np.ndarray
    scale: np.ndarray
    slopes: np.ndarray
    rates: np.ndarray
    by_species: np.ndarray
    jacobian: np.ndarray
    values: np.ndarray
    rows: np.ndarray
    starts: np.ndarray
    matrix: np.ndarray
    pivots: np.ndarray
    row_scale: np.ndarray
    right: np.ndarray
    u: np.ndarray
    mixed: np.ndarray
    other: np.ndarray
    point: np.ndarray


def space_for(by: ByReaction, stages: int) -> Space:
    """Memory for a system by reactions, whose rank is not zero."""
    (n, r), size = by.nu.shape, by.reaction.size
    rank = int(np.linalg.matrix_rank(by.nu))
    nu = np.ascontiguousarray(by.nu, dtype=float)
    return Space(
        nu, by.reaction, by.species, np.empty((n, r)), np.empty(n, dtype=np.int64), np.empty((rank, n + rank)),
        np.empty(rank, dtype=np.int64), np.zeros(1), np.empty(r), np.empty(n), np.empty(size + 2 * r + 2 * n), np.empty(r + 1),
        np.empty((rank, n)), np.empty((rank, rank)), np.empty(rank * rank),
        np.tile(np.arange(rank, dtype=np.uint32), rank), np.arange(0, rank * rank + 1, rank, dtype=np.uint32),
        np.empty((rank, rank)), np.empty(rank, dtype=np.int64), np.empty(rank), np.empty(rank),
        np.zeros((stages, rank)), np.empty(rank), np.empty(rank), np.empty(n + 1))


@compiled
def _parts(space):
    """d (R), q (R), a (N) and b (N) of ∂w/∂n = entries + d aᵀ + q bᵀ."""
    (n, r), e = space.nu.shape, space.species.size
    s = space.slopes
    return s[e : e + r], s[e + r : e + 2 * r], s[e + 2 * r : e + 2 * r + n], s[e + 2 * r + n :]


@compiled
def _set_speeds(space):
    """What each net rate would change by if every amount doubled, no term offsetting another."""
    d, q, a, b = _parts(space)
    n, total, heating = space.scale.size, 0.0, 0.0
    for i in range(n):
        total += a[i] * space.scale[i]
        heating += abs(b[i]) * space.scale[i]
    for j in range(d.size):
        space.speed[j] = abs(d[j]) * total + abs(q[j]) * heating
    for e in range(space.species.size):
        if space.species[e] < n:
            space.speed[space.reaction[e]] += abs(space.slopes[e]) * space.scale[space.species[e]]


@compiled
def _grade(space):
    """Brings both bases to the speeds and scales, where they are out of order."""
    rank = space.places.size
    known = space.known[0] == 1.0
    if not known or not in_order(space.combined, space.basis, rank, space.speed, 1):
        grade_reactions(space.nu, space.speed, space.combined, space.basis)
        known = False
    if not known or not in_order(space.spread, space.places, rank, space.scale, -1):
        grade_species(space.nu, space.basis, space.scale, space.spread, space.places)
    space.known[0] = 1.0


@compiled
def _set_jacobian(space):
    """Zᵀ K E from the slopes."""
    d, q, a, b = _parts(space)
    n, rank, by_species = space.scale.size, space.places.size, space.by_species
    by_species[:, :] = 0.0
    for e in range(space.species.size):
        i, value = space.species[e], space.slopes[e]
        if i < n and value != 0.0:
            for k in range(rank):
                by_species[k, i] += space.combined[k, space.reaction[e]] * value
    by_volume, by_heat = np.empty(rank), np.empty(rank)
    for p in range(rank):
        by_volume[p], by_heat[p] = dot(a, space.spread[p, :n]), dot(b, space.spread[p, :n])
    for k in range(rank):
        d_k, q_k = dot(space.combined[k], d), dot(space.combined[k], q)
        for p in range(rank):
            space.jacobian[k, p] = dot(by_species[k], space.spread[p, :n]) + d_k * by_volume[p] + q_k * by_heat[p]


@compiled
def linearise(rates, slopes, context, z, atol, space, w):
    """Bases, Jacobian and net rates w (R) for a state; False where it has no temperature."""
    n = space.scale.size
    space.point[:n], space.point[n] = z[:n], z[z.size - 1]
    if call(slopes, space.point, space.slopes, context) == 0 or call(rates, space.point, space.rates, context) == 0:
        return False
    w[:] = space.rates[: w.size]
    for i in range(n):
        space.scale[i] = max(z[i], SMALLEST_PART * atol[i])
    _set_speeds(space)
    _grade(space)
    _set_jacobian(space)
    return True


@compiled
def factorise(space, weight):
    """Factors of weight·L - Zᵀ K E with rows and columns scaled; False if singular."""
    n, rank = space.scale.size, space.places.size
    for k in range(rank):
        largest = 0.0
        for p in range(rank):
            value = (weight * space.spread[p, n + k] - space.jacobian[k, p]) * space.scale[space.places[p]]
            space.values[p * rank + k] = value
            largest = max(largest, abs(value))
        space.row_scale[k] = 1.0 / largest
        for p in range(rank):
            space.values[p * rank + k] *= space.row_scale[k]
    return dense_factor(space.values, space.rows, space.starts, space.matrix, space.pivots)


@compiled
def _mix(weights, count, space, out):
    """Σ weights_j u_j over the first stages, into out (r)."""
    out[:] = 0.0
    for j in range(count):
        if weights[j] != 0.0:
            for p in range(out.size):
                out[p] += weights[j] * space.u[j, p]


@compiled
def _spread(change, first, space, out):
    """Adds to `out` what changes of the basis species (r) make: of all species (first 0), or extents (first N)."""
    for p in range(change.size):
        if change[p] != 0.0:
            for k in range(out.size):
                out[k] += space.spread[p, first + k] * change[p]


@compiled
def _solve_stage(i, h, table, w, space):
    """Stage i from the net rates at its point."""
    n, rank = space.scale.size, space.places.size
    _mix(table[1, i], i, space, space.mixed)
    space.other[:] = 0.0
    _spread(space.mixed, n, space, space.other)
    for k in range(rank):
        space.right[k] = (dot(space.combined[k], w) + space.other[k] / h) * space.row_scale[k]
    dense_solve(space.matrix, space.pivots, space.right, space.u[i])
    for p in range(rank):
        space.u[i, p] *= space.scale[space.places[p]]


@compiled
def _solve_stages(rates, context, table, h, z, start_w, w, space, counts):
    """Every stage; False where a stage has no temperature. space.point[N] is left at that of the last stage."""
    n, s = space.scale.size, table.shape[1]
    space.point[n] = z[z.size - 1]
    w[:] = start_w
    for i in range(s):
        if i > 0:
            _mix(table[0, i], i, space, space.mixed)
            space.point[:n] = z[:n]
            _spread(space.mixed, 0, space, space.point[:n])
            counts[F_CALLS] += 1
            if call(rates, space.point, space.rates, context) == 0:
                return False
            w[:] = space.rates[: w.size]
            space.point[n] = space.rates[w.size]
        _solve_stage(i, h, table, w, space)
        counts[SOLVES] += 1
    return True


@compiled
def _combine(table, z, atol, space, new, error):
    """The new state and its error estimate from the stages, T's from those of the amounts; False if not finite.

    A negative amount within atol becomes its mirror image, as near to the truth as zero is: at zero what species take from one
    another in pairs is gone from the Jacobian, and step after step would overshoot again.
    """
    n, s, last = space.scale.size, table.shape[1], z.size - 1
    new[:] = z
    error[:] = 0.0
    _mix(table[2, 0], s, space, space.mixed)
    _spread(space.mixed, 0, space, new[:n])
    _mix(table[3, 0], s, space, space.mixed)
    _spread(space.mixed, 0, space, error[:n])
    error[last] = dot(_parts(space)[3], error[:n])
    new[last] = space.point[n]
    for k in range(n):
        if not math.isfinite(new[k]):
            return False
        if new[k] < 0.0 and -new[k] <= atol[k]:
            new[k] = -new[k]
    return True


@compiled
def _set_slope(w, space, slope):
    """f (nz) from the net rates (R), zero for unknowns that are neither amounts nor T."""
    slope[:] = 0.0
    for i in range(space.scale.size):
        slope[i] = dot(space.nu[i], w)
    slope[slope.size - 1] = dot(_parts(space)[3], slope[: space.scale.size])


@compiled
def advance(rates, slopes, judge, context, space, table, gamma, estimator_order, z, memory, atol, rtol, stop, times, states,
            counts):
    """Steps from memory[TIME] towards `stop` until it is reached or the buffer (times, states) is full.

    As rosenbrock.advance, whose memory it takes over; z: its unknowns too, of which only amounts and T are used. Returns
    the status and the number of steps written.
    """
    nz = z.size
    start_w, w, slope = np.empty(space.speed.size), np.empty(space.speed.size), np.empty(nz)
    exchange, verdict = np.zeros(3 * nz), np.zeros(4)
    old, new, error = exchange[:nz], exchange[nz : 2 * nz], exchange[2 * nz :]
    written, fresh, rejected = 0, False, False
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
            counts[J_CALLS] += 1
            counts[F_CALLS] += 1
            if not linearise(rates, slopes, context, z, atol, space, start_w):
                return NOT_FINITE, written
            _set_slope(start_w, space, slope)
            fresh = True
        counts[FACTORISATIONS] += 1
        old[:] = z
        sound = (factorise(space, 1.0 / (h * gamma)) and _solve_stages(rates, context, table, h, z, start_w, w, space, counts)
                 and _combine(table, z, atol, space, new, error))
        norm = np.inf
        if sound:
            shift = time_shift(error, old, new, slope, h, atol, rtol)
            norm = max(error_norm(error, old, new, atol, rtol), shift / (SHIFT_PART * rtol * (t + h)))
        if not norm <= 1.0:
            memory[STEP] = h * shortened(norm, estimator_order)
            counts[REJECTED] += 1
            rejected = True
            continue
        answer = call(judge, exchange, verdict, context) if judge != 0 else STAND
        if answer == CROSSED and (1.0 - verdict[1]) * h > NEAREST * t:
            counts[REJECTED] += 1
            memory[STEP] = max(verdict[1] * h, NEAREST * t)
            continue
        if answer == REFUSED:
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
        counts[GRADED_STEPS] += 1
        written += 1
        fresh, rejected = False, False
        if answer == CROSSED:
            return AT_CROSSING, written
        if last:
            return REACHED, written
    return BUFFER_FULL, written
