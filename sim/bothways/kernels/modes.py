"""What molecular modes add to the polynomials of a species: harmonic oscillators, and sums over levels.

Oscillators are counted from their ground level, so that the polynomial's constant is the energy at 0 K. With x = θ/T and
n = 1/(e^x - 1) one of them adds ln(1 - e^-x) to g/RT, x n to h/RT, x² n (n + 1) to cp/R. A ladder of levels has the sum
q = Σ w e^-x; with the moments m_k = Σ x^k w e^-x / q it adds -ln q, m_1, and m_2 - m_1² (D.A. McQuarrie, Statistical
Mechanics, Harper & Row, New York, 1976, ch. 5 and 6). Electronic levels, hindered rotors and tunnelling are ladders.
"""

import math

import numpy as np

from ..compiled import compiled
from . import layout as at
from .elementary import exp_array
from .layout import view

_OSCILLATOR_START = at.offset_slot(at.INTS, "oscillator_start")
_LADDER_START = at.offset_slot(at.INTS, "ladder_start")
_LEVEL_START = at.offset_slot(at.INTS, "level_start")
_OSCILLATOR = at.offset_slot(at.FLOATS, "oscillator")
_LEVEL = at.offset_slot(at.FLOATS, "level")
_SOFT = 0.05
"""Below this θ/T, 1 - e^-x is taken from expm1, which keeps its digits."""


@compiled
def _factors(T, table, low, high):
    """e^(-θ/T) of the entries low…high of a table of pairs that begin with θ."""
    x, factor = np.empty(high - low), np.empty(high - low)
    for k in range(x.size):
        x[k] = -table[2 * (low + k)] / T
    exp_array(x, factor)
    return factor


@compiled
def add_modes(T, first, ints, floats, gibbs, enthalpy, heat_capacity, slope):
    """Adds the modes of the species from place `first` on to their g/RT, h/RT, cp/R and T·d(cp/R)/dT [-] at T [K]."""
    oscillator, level = view(floats, ints, _OSCILLATOR), view(floats, ints, _LEVEL)
    if oscillator.size > 0:
        _add_oscillators(T, view(ints, ints, _OSCILLATOR_START)[first:], oscillator, gibbs, enthalpy, heat_capacity, slope)
    if level.size > 0:
        _add_ladders(T, view(ints, ints, _LADDER_START)[first:], view(ints, ints, _LEVEL_START), level,
                     gibbs, enthalpy, heat_capacity, slope)


@compiled
def _add_oscillators(T, start, table, gibbs, enthalpy, heat_capacity, slope):
    """start: (n + 1) first oscillator of each species; table: (2 per oscillator) θ [K] and degeneracy."""
    low = np.int64(start[0])
    factor = _factors(T, table, low, np.int64(start[gibbs.size]))
    for i in range(gibbs.size):
        for k in range(np.int64(start[i]), np.int64(start[i + 1])):
            x, count, e = table[2 * k] / T, table[2 * k + 1], factor[k - low]
            rest = 1.0 - e if x > _SOFT else -math.expm1(-x)
            n = e / rest
            cp = x * x * n * (n + 1.0)
            gibbs[i] += count * math.log(rest)
            enthalpy[i] += count * x * n
            heat_capacity[i] += count * cp
            slope[i] += count * cp * (x * (2.0 * n + 1.0) - 2.0)


@compiled
def _add_ladders(T, start, level_start, table, gibbs, enthalpy, heat_capacity, slope):
    """start: (n + 1) first ladder of each species; level_start: its first level; table: (2 per level) θ [K], weight."""
    low = np.int64(level_start[start[0]])
    factor = _factors(T, table, low, np.int64(level_start[start[gibbs.size]]))
    for i in range(gibbs.size):
        for ladder in range(start[i], start[i + 1]):
            q, m1, m2, m3 = 0.0, 0.0, 0.0, 0.0
            for k in range(np.int64(level_start[ladder]), np.int64(level_start[ladder + 1])):
                x, w = table[2 * k] / T, table[2 * k + 1] * factor[k - low]
                q += w
                m1 += x * w
                m2 += x * x * w
                m3 += x * x * x * w
            m1, m2, m3 = m1 / q, m2 / q, m3 / q
            variance = m2 - m1 * m1
            gibbs[i] -= math.log(q)
            enthalpy[i] += m1
            heat_capacity[i] += variance
            slope[i] += m3 - m1 * (3.0 * m2 - 2.0 * m1 * m1) - 2.0 * variance
