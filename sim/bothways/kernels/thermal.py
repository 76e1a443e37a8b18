"""What depends on temperature alone: potentials, scales E, limits of the rate constants, and their slopes.

Kept in `work` while the temperature stays, since isothermal runs and Newton iterations ask again and again.
"""

import math

import numpy as np

from ..compiled import compiled, span
from . import layout as at
from .complexes import set_complex_slopes, set_complexes
from .elementary import exp_array, in_groups
from .fall_off import set_centre_exponents, set_centre_slopes, set_centres
from .layout import view
from .molar import standard_state
from .pressure import set_columns

_REACTANT0 = at.offset_slot(at.INTS, "reactant0")
_REACTANT1 = at.offset_slot(at.INTS, "reactant1")
_PRODUCT0 = at.offset_slot(at.INTS, "product0")
_PRODUCT1 = at.offset_slot(at.INTS, "product1")
_LONG_REACTION = at.offset_slot(at.INTS, "long_reaction")
_LONG_SPECIES = at.offset_slot(at.INTS, "long_species")
_LONG_SIDE = at.offset_slot(at.INTS, "long_side")
_REDUCTION = at.offset_slot(at.FLOATS, "reduction")
_LOG_A = at.offset_slot(at.FLOATS, "log_A")
_POWER = at.offset_slot(at.FLOATS, "power")
_THETA = at.offset_slot(at.FLOATS, "theta")
_STANDARD = at.offset_slot(at.FLOATS, "standard")
_SEEN = at.offset_slot(at.WORK, "seen")
_GIBBS = at.offset_slot(at.WORK, "gibbs")
_ENTHALPY = at.offset_slot(at.WORK, "enthalpy")
_HEAT_CAPACITY = at.offset_slot(at.WORK, "heat_capacity")
_HEAT_CAPACITY_SLOPE = at.offset_slot(at.WORK, "heat_capacity_slope")
_LOG_SCALE = at.offset_slot(at.WORK, "log_scale")
_SCALE = at.offset_slot(at.WORK, "scale")
_INVERSE_SCALE = at.offset_slot(at.WORK, "inverse_scale")
_SCALE_SLOPE = at.offset_slot(at.WORK, "scale_slope")
_LOG_K = at.offset_slot(at.WORK, "log_k")
_CENTRE_EXPONENT = at.offset_slot(at.WORK, "centre_exponent")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_REVERSE_SLOPE = at.offset_slot(at.WORK, "reverse_slope")


@compiled
def _scales(T, log_T, ints, floats, work):
    """ln of E_i = c°·exp(-g_i/RT) [mol/m3], c° = p°/RT in a gas, with the element terms taken off g, which change no K."""
    n = ints[at.SPECIES]
    gibbs, reduction = view(work, ints, _GIBBS), view(floats, ints, _REDUCTION)
    log_scale = view(work, ints, _LOG_SCALE)
    standard = view(floats, ints, _STANDARD)
    log_standard = math.log(standard[0]) - standard[1] * log_T
    for i in range(n):
        gibbs[i] -= reduction[2 * i] / T + reduction[2 * i + 1]
        log_scale[i] = log_standard - gibbs[i]
    log_scale[n] = 0.0


@compiled
def _limits(T, log_T, ints, floats, work):
    """ln of all Arrhenius expressions."""
    log_A, power, theta = view(floats, ints, _LOG_A), view(floats, ints, _POWER), view(floats, ints, _THETA)
    log_k = view(work, ints, _LOG_K)
    inverse = 1.0 / T
    for e in range(log_k.size):
        log_k[e] = log_A[e] + power[e] * log_T - theta[e] * inverse
    set_complexes(T, ints, floats, work)


@compiled
def _exponentials(ints, work):
    """All exponentials that hang on temperature alone, in one go; and 1/E_i."""
    exponents = in_groups(work, np.int64(ints[_LOG_SCALE]), np.int64(ints[_CENTRE_EXPONENT + 1]))
    first = np.int64(ints[_SCALE])
    exp_array(exponents, span(work, first, first + exponents.size))
    scale, inverse_scale = view(work, ints, _SCALE), view(work, ints, _INVERSE_SCALE)
    for i in range(scale.size):
        inverse_scale[i] = 1.0 / scale[i]


@compiled
def set_temperature(T, ints, floats, work):
    """Brings the thermal parts of `work` to T [K]; nothing is done where they stand for it already."""
    seen = view(work, ints, _SEEN)
    if seen[at.SEEN_T] == T:
        return
    standard_state(T, ints, floats, work, view(work, ints, _GIBBS), view(work, ints, _ENTHALPY),
                   view(work, ints, _HEAT_CAPACITY), view(work, ints, _HEAT_CAPACITY_SLOPE))
    log_T = math.log(T)
    _scales(T, log_T, ints, floats, work)
    _limits(T, log_T, ints, floats, work)
    set_centre_exponents(T, ints, floats, work)
    _exponentials(ints, work)
    set_centres(T, ints, floats, work)
    set_columns(T, ints, floats, work)
    seen[at.SEEN_T] = T
    seen[at.SEEN_TOTAL] = np.nan  # the rates stand for another temperature


@compiled
def set_slopes(T, ints, floats, work):
    """Brings the temperature slopes of scales and limits to T [K]; the thermal parts must stand for T."""
    seen = view(work, ints, _SEEN)
    if seen[at.SEEN_SLOPES] == T:
        return
    n = ints[at.SPECIES]
    enthalpy, slope = view(work, ints, _ENTHALPY), view(work, ints, _SCALE_SLOPE)
    reduction, power_of_standard = view(floats, ints, _REDUCTION), view(floats, ints, _STANDARD)[1]
    for i in range(n):
        slope[i] = (enthalpy[i] - reduction[2 * i] / T - power_of_standard) / T
    slope[n] = 0.0
    power, theta, k_slope = view(floats, ints, _POWER), view(floats, ints, _THETA), view(work, ints, _K_SLOPE)
    for e in range(k_slope.size):
        k_slope[e] = (power[e] + theta[e] / T) / T
    set_complex_slopes(T, ints, floats, work)
    set_centre_slopes(T, ints, floats, work)
    _reverse_slopes(ints, work, slope)
    seen[at.SEEN_SLOPES] = T


@compiled
def _reverse_slopes(ints, work, slope):
    """d ln(ΠE_reac/ΠE_prod)/dT of every reaction."""
    r0, r1 = view(ints, ints, _REACTANT0), view(ints, ints, _REACTANT1)
    p0, p1 = view(ints, ints, _PRODUCT0), view(ints, ints, _PRODUCT1)
    out = view(work, ints, _REVERSE_SLOPE)
    for j in range(out.size):
        out[j] = (slope[r0[j]] + slope[r1[j]]) - (slope[p0[j]] + slope[p1[j]])
    side, species = view(ints, ints, _LONG_SIDE), view(ints, ints, _LONG_SPECIES)
    reaction = view(ints, ints, _LONG_REACTION)
    for m in range(side.size):
        out[reaction[m]] += slope[species[m]] if side[m] == 0 else -slope[species[m]]
