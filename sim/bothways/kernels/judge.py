"""What every accepted step of a batch must pass: conservation restored, temperature from the energy, second law kept.

Called by the compiled integrators with (old state | new state | error estimate), bordered; it may mend the new
state. In order:

1. Negative amounts become zero, as do species that cannot come about from the charge (what round-off makes of an autocatalyst
   would grow), and the conserved combinations (elements and whatever else the stoichiometry
   conserves) are brought back to the charge's totals by n_i → n_i (1 + Σ_k λ_k a_ki): no amount changes sign, and
   what round-off took is given back in proportion.
2. In an adiabatic vessel T is the temperature at which contents and vessel hold the energy of the start, in a jacket that
   and the heat received since.
3. The potential that may not rise (A, G or -S) is compared by its change, worked out from the changes themselves:
   with φ = n₁ ln(n₁/n₀) - Δn,  ΔA/RT = Σ Δn μ₀/RT + Σ φ,  ΔG/RT the same less the φ of the total amount, and
   -ΔS/R = (ΔA or ΔG at T₀)/RT₀ + C (x - ln(1 + x))/R, x = T₁/T₀ - 1. A rise beyond round-off and beyond
   Σ |μ_i - Σ_k λ_k a_ki|·|error_i|/RT is refused; λ, the combinations' potentials, are fitted to the mixture. With a
   jacket, or a given temperature, it is the entropy produced that may not fall: see exchange.py.
"""

import math

import numpy as np
from numba import carray

from ..compiled import CROSSED, REFUSED, STAND, callback, compiled, float64_pointer, fours, uint32_pointer
from ..constants import GAS_CONSTANT as R
from ..sums import dot, total_of
from . import layout as at
from .callbacks import CONTEXT_SIZE, tables_of
from .elementary import log_array
from .equations import (
    GIVEN,
    HEAT,
    HEAT_CAPACITY,
    HOLDS,
    JACKET,
    LESS,
    PRESSURE,
    PRESSURE_HELD,
    SHARED,
    balanced,
)
from .exchange import change_by_heat, change_by_ramp, further
from .layout import put, view
from .molar import standard_state
from .surfaces import SIZE as SURFACE_SIZE
from .surfaces import arm, share_before

LEDGER, N_ROWS, SURFACES, N_SURFACES, ABSENT, N_ABSENT = range(CONTEXT_SIZE, CONTEXT_SIZE + 6)
JUDGE_CONTEXT_SIZE = CONTEXT_SIZE + 6
ENERGY, START_TEMPERATURE, LARGEST_EXCESS, MENDED, LARGEST_DRIFT, LARGEST_ENERGY_DRIFT, START_ENERGY = range(7)
LEDGER_HEAD = 8
ROUND_OFF = 4e-15
"""Of each part of a change of the potential [-]."""
DRIFT_ALLOWED = 1e-15
"""Conserved totals further off than this [-] are mended."""
LEAST_WEIGHT = 1e-9
"""Rows are mended from the smallest on. One whose own species, those that smaller rows do not hold, weigh less than this part of
it is left as it is: the round-off of its total is more than they are good for [-]."""
INSIGNIFICANT = 1e-30
"""Of the total amount: totals off by less are not mended [-]."""
LARGEST_MENDING = 1e-2
"""A mending that changes an amount by more than this part of it is refused: the step is too long."""
QUADRATIC = 1e-8
"""A correction of T by less than this part of it leaves an error of its square [-]: it is the last."""
COOLEST, HOTTEST = 20.0, 2e4
SMALLEST_AMOUNT = 1e-300
"""Below, the logarithm of an amount is taken of this [-]."""

_REDUCTION = at.offset_slot(at.FLOATS, "reduction")
_STANDARD = at.offset_slot(at.FLOATS, "standard")


def ledger_of(rows: np.ndarray, totals: np.ndarray, energy: float, temperature: float) -> np.ndarray:
    """The judge's ledger: a head, then totals (m), rows (m, N), and scratch.

    rows : (m, N) conserved combinations; totals : (m) their values in the state's units.
    energy : of the start, in the state's units [J/m3 or J]; temperature [K] of the start.
    """
    m, n = rows.shape
    head = np.zeros(LEDGER_HEAD)
    head[ENERGY], head[START_ENERGY], head[START_TEMPERATURE] = energy, energy, temperature
    return np.concatenate([head, totals, rows.ravel(), np.zeros(m * m + 2 * m + 10 * n)])


@compiled
def weighted_solve(rows, weights, right, order, least, matrix, out):
    """λ of (Σ_i rows_ki w_i rows_li) λ_l = right_k by Cholesky's method, rows in this order; λ = 0 of rows of which no more
    than a part `least` is independent of those before."""
    m, n = rows.shape
    weighted = np.empty(n)
    for k in range(m):
        row = rows[order[k]]
        for i in range(n):
            weighted[i] = row[i] * weights[i]
        for q in range(k + 1):
            matrix[k, q] = dot(weighted, rows[order[q]])
    for k in range(m):
        scale = matrix[k, k]
        for q in range(k + 1):
            total = matrix[k, q]
            for j in range(q):
                total -= matrix[k, j] * matrix[q, j]
            if q < k:
                matrix[k, q] = total / matrix[q, q] if matrix[q, q] > 0.0 else 0.0
            else:
                matrix[k, k] = math.sqrt(total) if total > least * scale else 0.0
    for k in range(m):
        total = right[order[k]]
        for j in range(k):
            total -= matrix[k, j] * out[order[j]]
        out[order[k]] = total / matrix[k, k] if matrix[k, k] > 0.0 else 0.0
    for k in range(m - 1, -1, -1):
        total = out[order[k]]
        for j in range(k + 1, m):
            total -= matrix[j, k] * out[order[j]]
        out[order[k]] = total / matrix[k, k] if matrix[k, k] > 0.0 else 0.0


@compiled
def mend(amount, rows, totals, matrix, residual, multiplier, head):
    """Step 1: amounts without negatives and with the conserved totals; False if that would change them much."""
    negative = False
    for i in range(amount.size):
        if amount[i] < 0.0:
            amount[i] = 0.0
            negative = True
    change, sizes, nothing = np.empty(amount.size), np.empty(totals.size), INSIGNIFICANT * total_of(amount)
    for attempt in range(3):
        worst = 0.0
        for k in range(totals.size):
            now, size = _total_and_size(rows[k], amount)
            sizes[k] = size
            residual[k] = totals[k] - now
            if abs(residual[k]) <= nothing:
                residual[k] = 0.0
            if size > 0.0:
                worst = max(worst, abs(residual[k]) / size)
        if attempt == 0 and not negative:
            head[LARGEST_DRIFT] = max(head[LARGEST_DRIFT], worst)
        if worst <= DRIFT_ALLOWED:
            return True
        weighted_solve(rows, amount, residual, np.argsort(sizes), LEAST_WEIGHT, matrix, multiplier)
        largest = 0.0
        _fit(rows, multiplier, change)
        for i in range(amount.size):
            largest = max(largest, abs(change[i]))
            amount[i] *= 1.0 + change[i]
        if not largest <= LARGEST_MENDING:
            return False
        head[MENDED] += 1.0
    return worst <= 1e-13


@compiled
def _total_and_size(row, amount):
    """Σ a_i n_i and Σ |a_i| n_i."""
    row4, amount4 = fours(row, 0, row.size), fours(amount, 0, row.size)
    t0, t1, s0, s1 = 0.0, 0.0, 0.0, 0.0
    for i in range(row4.shape[0]):
        a, b, c, d = (row4[i, 0] * amount4[i, 0], row4[i, 1] * amount4[i, 1], row4[i, 2] * amount4[i, 2],
                      row4[i, 3] * amount4[i, 3])
        t0 += a + b
        t1 += c + d
        s0 += abs(a) + abs(b)
        s1 += abs(c) + abs(d)
    for i in range(4 * row4.shape[0], row.size):
        t0 += row[i] * amount[i]
        s0 += abs(row[i] * amount[i])
    return t0 + t1, s0 + s1


@compiled
def _fit(rows, multiplier, out):
    """Σ_k λ_k a_ki for every species."""
    out[:] = 0.0
    for k in range(multiplier.size):
        row, factor = rows[k], multiplier[k]
        for i in range(out.size):
            out[i] += factor * row[i]


@compiled
def temperature_of(amount, T, vessel, ints, floats, work, head, gibbs, enthalpy, cp, slope):
    """Step 2: T at which the energy is the one in `head`; cp stands for it then to QUADRATIC. -1 if out of reach."""
    less = vessel[LESS]
    previous = np.inf
    for attempt in range(60):
        if not COOLEST < T < HOTTEST:
            return -1.0
        standard_state(T, ints, floats, work, gibbs, enthalpy, cp, slope)
        own = vessel[HEAT_CAPACITY] / R
        for i in range(amount.size):
            slope[i] = enthalpy[i] - less
        energy = own * (T - head[START_TEMPERATURE]) + T * dot(amount, slope)
        heat = own + dot(amount, cp) - less * total_of(amount)
        step = (head[ENERGY] / R - energy) / heat
        if attempt == 0:
            head[LARGEST_ENERGY_DRIFT] = max(head[LARGEST_ENERGY_DRIFT], abs(step) / T)
        if abs(step) <= QUADRATIC * T:
            return T + step
        if abs(step) >= previous and abs(step) < 1e-13 * T:
            return T
        previous = abs(step)
        T += max(min(step, 0.5 * T), -0.3 * T)
    return -1.0


@compiled
def change_of_potential(old, new, T0, T1, potential, deviation, cp0, cp1, vessel):
    """Step 3: change of A/RT, G/RT or -S/R from old to new, and the round-off it carries.

    potential: μ₀/RT; deviation: of it from the combinations' potentials, whose part of Σ Δn μ₀ is zero by
    conservation and is left out before it can drown the rest. Of species absent before, both lack ln of the amount.
    """
    change, noise, before, after, heat = 0.0, 0.0, 0.0, 0.0, vessel[HEAT_CAPACITY] / R
    less = vessel[LESS]
    for i in range(cp0.size):
        n0, n1 = old[i], new[i]
        before += n0
        after += n1
        heat += n1 * (0.5 * (cp0[i] + cp1[i]) - less)
        if n0 > 0.0:
            change += (n1 - n0) * deviation[i] + bend(n0, n1)
            noise += abs(n1 - n0) * (1.0 + abs(potential[i])) + n0 * abs(deviation[i])
        elif n1 > 0.0:
            change += n1 * (deviation[i] + math.log(n1) - 1.0)
            noise += n1 * (abs(potential[i]) + abs(math.log(n1)))
    if vessel[SHARED] == 1.0:
        change -= bend(before, after)
    if balanced(vessel):
        x = (T1 - T0) / T0
        change += heat * (x - math.log1p(x) if abs(x) > 1e-4 else x * x * (0.5 - x / 3.0))
    return change, ROUND_OFF * noise


@compiled
def bend(n0, n1):
    """n₁ ln(n₁/n₀) - (n₁ - n₀) for n₀ > 0, without cancellation for small changes."""
    if not n1 > 0.0:
        return n0
    x = (n1 - n0) / n0
    if abs(x) < 1e-3:
        return n0 * x * x * (0.5 - x * (1.0 / 6.0 - x * (1.0 / 12.0 - x / 20.0)))
    return n1 * math.log1p(x) - (n1 - n0)


@callback
def judge(exchange_pointer, verdict_pointer, context):
    """What becomes of a step, its new state mended in place.

    verdict[0]: rise beyond what is allowed; verdict[1]: share of the step that a surface cuts off.
    """
    vessel, ints, floats, work, _ = tables_of(context)
    c = carray(context, (JUDGE_CONTEXT_SIZE,))
    n, m = np.int64(ints[at.SPECIES]), c[N_ROWS]
    nz = n + 2 + further(vessel)
    exchange, verdict = carray(exchange_pointer, (3 * nz,)), carray(verdict_pointer, (4,))
    ledger = carray(float64_pointer(c[LEDGER]), (LEDGER_HEAD + m + m * n + m * m + 2 * m + 10 * n,))
    head, totals = ledger[:LEDGER_HEAD], ledger[LEDGER_HEAD : LEDGER_HEAD + m]
    o = LEDGER_HEAD + m
    rows = ledger[o : o + m * n].reshape((m, n))
    o += m * n
    matrix = ledger[o : o + m * m].reshape((m, m))
    o += m * m
    residual, multiplier = ledger[o : o + m], ledger[o + m : o + 2 * m]
    o += 2 * m
    scratch = ledger[o : o + 10 * n].reshape((10, n))
    old, new, error = exchange[:n], exchange[nz : nz + n], exchange[2 * nz : 2 * nz + n]
    T0, T1 = exchange[n + 1], exchange[nz + n + 1]
    verdict[0] = 0.0
    absent = carray(uint32_pointer(c[ABSENT]), (c[N_ABSENT],))
    for k in range(absent.size):
        new[absent[k]] = 0.0
    if not mend(new, rows, totals, matrix, residual, multiplier, head):
        return REFUSED
    standard_state(T0, ints, floats, work, scratch[0], scratch[1], scratch[2], scratch[3])
    if vessel[HEAT] == JACKET:
        head[ENERGY] = head[START_ENERGY] + exchange[nz + n + 2]
    if balanced(vessel):
        T1 = temperature_of(new, T1, vessel, ints, floats, work, head, scratch[4], scratch[5], scratch[6], scratch[7])
        if T1 < 0.0:
            return REFUSED
        exchange[nz + n + 1] = T1
    else:
        put(scratch[2], scratch[6])
    potential, deviation = scratch[8], scratch[9]
    _reduced_potentials(old, T0, vessel, ints, floats, scratch[0], deviation, potential)
    _deviations(old, rows, potential, matrix, residual, multiplier, deviation)
    change, noise = change_of_potential(old, new, T0, T1, potential, deviation, scratch[2], scratch[6], vessel)
    further_change, further_noise, excused = 0.0, 0.0, 0.0
    if vessel[HEAT] == JACKET:
        further_change, further_noise, excused = change_by_heat(
            exchange[n + 1 : n + 4], exchange[nz + n + 1 : nz + n + 4], exchange[2 * nz + n + 1 : 2 * nz + n + 4])
    elif vessel[HEAT] == GIVEN and T1 != T0:
        standard_state(T1, ints, floats, work, scratch[4], scratch[5], scratch[6], scratch[7])
        further_change, further_noise = change_by_ramp(new, T0, T1, scratch[0], scratch[4], vessel, ints, floats)
        further_change += exchange[nz + n + 2] - exchange[n + 2]
        excused = abs(exchange[2 * nz + n + 2])
    change += further_change
    allowed = noise + further_noise
    if change > allowed:
        allowed += excused
        for i in range(n):
            allowed += abs(deviation[i]) * abs(error[i])
    if change > allowed:
        verdict[0] = change - allowed
        head[LARGEST_EXCESS] = max(head[LARGEST_EXCESS], change - allowed)
        return REFUSED
    if c[N_SURFACES] == 0:
        return STAND
    table = carray(float64_pointer(c[SURFACES]), (c[N_SURFACES], SURFACE_SIZE))
    verdict[1] = share_before(table, old, T0, new, T1)
    if verdict[1] <= 1.0:
        return CROSSED
    arm(table, new, T1)
    return STAND


@compiled
def _reduced_potentials(amount, T, vessel, ints, floats, gibbs, held, out):
    """μ/RT less element terms, which no reaction changes; without ln of the amount where that is zero. held: scratch."""
    reduction, standard = view(floats, ints, _REDUCTION), view(floats, ints, _STANDARD)
    total = total_of(amount)
    shift = standard[1] * math.log(T) - math.log(standard[0])
    if vessel[HOLDS] == PRESSURE_HELD:
        shift = math.log(vessel[PRESSURE] / (R * standard[0] * total))
    elif vessel[SHARED] == 1.0:
        shift = -math.log(total)
    for i in range(amount.size):
        held[i] = max(amount[i], SMALLEST_AMOUNT)
    log_array(held, out)
    for i in range(amount.size):
        bare = gibbs[i] - reduction[2 * i] / T - reduction[2 * i + 1] + shift
        out[i] = bare + out[i] if amount[i] > 0.0 else bare


@compiled
def _deviations(old, rows, potential, matrix, right, multiplier, deviation):
    """μ_i/RT less the potentials Σ_k λ_k a_ki of the conserved combinations, λ fitted with the amounts as weights."""
    for i in range(old.size):
        deviation[i] = old[i] * potential[i]
    for k in range(right.size):
        right[k] = dot(rows[k], deviation)
    weighted_solve(rows, old, right, np.arange(right.size), 1e-12, matrix, multiplier)
    _fit(rows, multiplier, deviation)
    for i in range(old.size):
        deviation[i] = potential[i] - deviation[i]
