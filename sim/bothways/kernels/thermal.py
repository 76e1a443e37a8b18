"""What depends on temperature alone: potentials, scales E, limits of the rate constants, and their slopes.

Kept in `work` while the temperature stays, since isothermal runs and Newton iterations ask again and again.
"""

import math

from ..compiled import compiled
from ..constants import GAS_CONSTANT as R
from . import layout as at
from .elementary import exp_array
from .fall_off import set_centres
from .layout import view
from .pressure import set_columns

_RANGE_START = at.offset_slot(at.INTS, "range_start")
_REACTANT = at.offset_slot(at.INTS, "reactant")
_PRODUCT = at.offset_slot(at.INTS, "product")
_LONG_REACTION = at.offset_slot(at.INTS, "long_reaction")
_LONG_SPECIES = at.offset_slot(at.INTS, "long_species")
_LONG_SIDE = at.offset_slot(at.INTS, "long_side")
_RANGE_TOP = at.offset_slot(at.FLOATS, "range_top")
_RANGE_ROW = at.offset_slot(at.FLOATS, "range_row")
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
_K_LIMIT = at.offset_slot(at.WORK, "k_limit")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_REACTANT_SCALE = at.offset_slot(at.WORK, "reactant_scale")
_REVERSE_SLOPE = at.offset_slot(at.WORK, "reverse_slope")


@compiled
def polynomials(T, range_start, range_top, rows, gibbs, enthalpy, heat_capacity, slope):
    """g/RT, h/RT, cp/R and T·d(cp/R)/dT [-] of every species at T [K].

    rows: (9 per range) a1…a7 of the powers -2…4, b1, b2 (NASA/TP-2002-211556, eqs. 1-3).
    """
    log_T = math.log(T)
    inverse = 1.0 / T
    for i in range(gibbs.size):
        k = range_start[i]
        while T >= range_top[k]:
            k += 1
        o = 9 * k
        t1, t2 = rows[o] * inverse * inverse, rows[o + 1] * inverse
        t3, t4 = rows[o + 2], rows[o + 3] * T
        t5, t6, t7 = rows[o + 4] * T * T, rows[o + 5] * T * T * T, rows[o + 6] * T * T * T * T
        h = -t1 + t2 * log_T + t3 + t4 / 2.0 + t5 / 3.0 + t6 / 4.0 + t7 / 5.0 + rows[o + 7] * inverse
        s = -t1 / 2.0 - t2 + t3 * log_T + t4 + t5 / 2.0 + t6 / 3.0 + t7 / 4.0 + rows[o + 8]
        enthalpy[i] = h
        gibbs[i] = h - s
        heat_capacity[i] = t1 + t2 + t3 + t4 + t5 + t6 + t7
        slope[i] = -2.0 * t1 - t2 + t4 + 2.0 * t5 + 3.0 * t6 + 4.0 * t7


@compiled
def polynomials_at(temperatures, range_start, range_top, rows, gibbs, enthalpy, heat_capacity, slope):
    """`polynomials` at many temperatures (nt); outputs (nt, N)."""
    for k in range(temperatures.size):
        polynomials(temperatures[k], range_start, range_top, rows, gibbs[k], enthalpy[k], heat_capacity[k], slope[k])


@compiled
def _scales(T, ints, floats, work):
    """E_i = (p°/RT)·exp(-g_i/RT) [mol/m3] with the element terms taken off g, which change no K; and 1/E_i."""
    n = ints[at.SPECIES]
    gibbs, reduction = view(work, ints, _GIBBS), view(floats, ints, _REDUCTION)
    log_scale, scale = view(work, ints, _LOG_SCALE), view(work, ints, _SCALE)
    inverse_scale = view(work, ints, _INVERSE_SCALE)
    log_standard = math.log(view(floats, ints, _STANDARD)[0] / (R * T))
    for i in range(n):
        gibbs[i] -= reduction[2 * i] / T + reduction[2 * i + 1]
        log_scale[i] = log_standard - gibbs[i]
    log_scale[n] = 0.0
    exp_array(log_scale, scale)
    for i in range(n + 1):
        inverse_scale[i] = 1.0 / scale[i]


@compiled
def _limits(T, ints, floats, work):
    """Exponentials of all Arrhenius expressions."""
    log_A, power, theta = view(floats, ints, _LOG_A), view(floats, ints, _POWER), view(floats, ints, _THETA)
    log_k = view(work, ints, _LOG_K)
    log_T = math.log(T)
    inverse = 1.0 / T
    for e in range(log_k.size):
        log_k[e] = log_A[e] + power[e] * log_T - theta[e] * inverse
    exp_array(log_k, view(work, ints, _K_LIMIT))


@compiled
def _reactant_scales(ints, work):
    """Product of E over the reactants of each reaction."""
    reactant, scale, out = view(ints, ints, _REACTANT), view(work, ints, _SCALE), view(work, ints, _REACTANT_SCALE)
    for j in range(out.size):
        out[j] = scale[reactant[3 * j]] * scale[reactant[3 * j + 1]] * scale[reactant[3 * j + 2]]
    side, species = view(ints, ints, _LONG_SIDE), view(ints, ints, _LONG_SPECIES)
    reaction = view(ints, ints, _LONG_REACTION)
    for m in range(side.size):
        if side[m] == 0:
            out[reaction[m]] *= scale[species[m]]


@compiled
def set_temperature(T, ints, floats, work):
    """Brings the thermal parts of `work` to T [K]; nothing is done where they stand for it already."""
    seen = view(work, ints, _SEEN)
    if seen[0] == T:
        return
    polynomials(T, view(ints, ints, _RANGE_START), view(floats, ints, _RANGE_TOP), view(floats, ints, _RANGE_ROW),
                view(work, ints, _GIBBS), view(work, ints, _ENTHALPY), view(work, ints, _HEAT_CAPACITY),
                view(work, ints, _HEAT_CAPACITY_SLOPE))
    _scales(T, ints, floats, work)
    _limits(T, ints, floats, work)
    _reactant_scales(ints, work)
    set_centres(T, ints, floats, work)
    set_columns(T, ints, floats, work)
    seen[0] = T


@compiled
def set_slopes(T, ints, floats, work):
    """Brings the temperature slopes of scales and limits to T [K]; the thermal parts must stand for T."""
    seen = view(work, ints, _SEEN)
    if seen[1] == T:
        return
    n = ints[at.SPECIES]
    enthalpy, slope = view(work, ints, _ENTHALPY), view(work, ints, _SCALE_SLOPE)
    reduction = view(floats, ints, _REDUCTION)
    for i in range(n):
        slope[i] = (enthalpy[i] - reduction[2 * i] / T - 1.0) / T
    slope[n] = 0.0
    power, theta, k_slope = view(floats, ints, _POWER), view(floats, ints, _THETA), view(work, ints, _K_SLOPE)
    for e in range(k_slope.size):
        k_slope[e] = (power[e] + theta[e] / T) / T
    _reverse_slopes(ints, work, slope)
    seen[1] = T


@compiled
def _reverse_slopes(ints, work, slope):
    """d ln(ΠE_reac/ΠE_prod)/dT of every reaction."""
    reactant, product = view(ints, ints, _REACTANT), view(ints, ints, _PRODUCT)
    out = view(work, ints, _REVERSE_SLOPE)
    for j in range(out.size):
        k = 3 * j
        out[j] = (slope[reactant[k]] + slope[reactant[k + 1]] + slope[reactant[k + 2]]
                  - slope[product[k]] - slope[product[k + 1]] - slope[product[k + 2]])
    side, species = view(ints, ints, _LONG_SIDE), view(ints, ints, _LONG_SPECIES)
    reaction = view(ints, ints, _LONG_REACTION)
    for m in range(side.size):
        out[reaction[m]] += slope[species[m]] if side[m] == 0 else -slope[species[m]]
