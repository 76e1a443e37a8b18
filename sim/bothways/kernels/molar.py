"""Molar functions of the species (and of transition states behind them): polynomials and what their modes add."""

import math

import numpy as np

from ..compiled import compiled
from . import layout as at
from .layout import view
from .modes import add_modes

_RANGE_START = at.offset_slot(at.INTS, "range_start")
_RANGE_TOP = at.offset_slot(at.FLOATS, "range_top")
_RANGE_ROW = at.offset_slot(at.FLOATS, "range_row")
_SEEN = at.offset_slot(at.WORK, "seen")
_ACTIVE = at.offset_slot(at.WORK, "active")


@compiled
def select(T, range_start, range_top, rows, active):
    """The coefficients in force at T [K], into active (9 N), power by power; returns the range of T they hold in.

    rows: (9 per range) a1…a7 of the powers -2…4, b1, b2 (NASA/TP-2002-211556, eqs. 1-3).
    """
    n, low, high = range_start.size - 1, 0.0, np.inf
    for i in range(n):
        k = range_start[i]
        while T >= range_top[k]:
            k += 1
        if k > range_start[i]:
            low = max(low, range_top[k - 1])
        high = min(high, range_top[k])
        for q in range(9):
            active[q * n + i] = rows[9 * k + q]
    return low, high


@compiled
def _weighted(a, w0, w1, w2, w3, w4, w5, w6, w7, w8, out):
    """Σ_q w_q a_q for every species; a: (9, N)."""
    for i in range(out.size):
        out[i] = ((w0 * a[0, i] + w1 * a[1, i]) + (w2 * a[2, i] + w3 * a[3, i]) + (w4 * a[4, i] + w5 * a[5, i])
                  + (w6 * a[6, i] + w7 * a[7, i]) + w8 * a[8, i])


@compiled
def evaluate(T, active, gibbs, enthalpy, heat_capacity, slope):
    """g/RT, h/RT, cp/R and T·d(cp/R)/dT [-] of every species at T [K] from the coefficients in force."""
    a = active.reshape((9, gibbs.size))
    log_T, r, T2 = math.log(T), 1.0 / T, T * T
    T3, T4, r2 = T2 * T, T2 * T2, r * r
    _weighted(a, -r2, log_T * r, 1.0, T / 2.0, T2 / 3.0, T3 / 4.0, T4 / 5.0, r, 0.0, enthalpy)
    _weighted(a, -r2 / 2.0, -r, log_T, T, T2 / 2.0, T3 / 3.0, T4 / 4.0, 0.0, 1.0, gibbs)
    for i in range(gibbs.size):
        gibbs[i] = enthalpy[i] - gibbs[i]
    _weighted(a, r2, r, 1.0, T, T2, T3, T4, 0.0, 0.0, heat_capacity)
    _weighted(a, -2.0 * r2, -r, 0.0, T, 2.0 * T2, 3.0 * T3, 4.0 * T4, 0.0, 0.0, slope)


@compiled
def polynomials(T, range_start, range_top, rows, gibbs, enthalpy, heat_capacity, slope):
    """`evaluate` at any T [K], without coefficients kept from before."""
    active = np.empty(9 * gibbs.size)
    select(T, range_start, range_top, rows, active)
    evaluate(T, active, gibbs, enthalpy, heat_capacity, slope)


@compiled
def molar_functions(T, first, ints, floats, gibbs, enthalpy, heat_capacity, slope):
    """g/RT, h/RT, cp/R and T·d(cp/R)/dT [-] at T [K] of as many species as `gibbs` has places, from place `first` on."""
    start = view(ints, ints, _RANGE_START)[first : first + gibbs.size + 1]
    polynomials(T, start, view(floats, ints, _RANGE_TOP), view(floats, ints, _RANGE_ROW),
                gibbs, enthalpy, heat_capacity, slope)
    add_modes(T, first, ints, floats, gibbs, enthalpy, heat_capacity, slope)


@compiled
def standard_state(T, ints, floats, work, gibbs, enthalpy, heat_capacity, slope):
    """`molar_functions` of all species at T [K]; the coefficients in force are kept in `work` while they hold."""
    seen, active = view(work, ints, _SEEN), view(work, ints, _ACTIVE)
    if not seen[at.FITS_FROM] <= T < seen[at.FITS_TO]:
        seen[at.FITS_FROM], seen[at.FITS_TO] = select(
            T, view(ints, ints, _RANGE_START)[: gibbs.size + 1], view(floats, ints, _RANGE_TOP),
            view(floats, ints, _RANGE_ROW), active)
    evaluate(T, active, gibbs, enthalpy, heat_capacity, slope)
    add_modes(T, 0, ints, floats, gibbs, enthalpy, heat_capacity, slope)


@compiled
def molar_functions_at(temperatures, ints, floats, gibbs, enthalpy, heat_capacity, slope):
    """`molar_functions` of all species at many temperatures (nt); outputs (nt, N)."""
    for k in range(temperatures.size):
        molar_functions(temperatures[k], 0, ints, floats, gibbs[k], enthalpy[k], heat_capacity[k], slope[k])
