"""What vessels of given temperature, and those in a jacket, take up from outside: further unknowns behind T.

z = (species, border, T, Y) where the temperature is given, (species, border, T, Q, Σ, T_j) in a jacket, per unit of the
state (m3 at constant volume):

    Y' = Σ_i n_i (h_i/RT - α_i/T - LESS)·T'/T     Q' = UA (T_j - T)     Σ' = Q'/T_j     T_j' as the jacket's table says

Q is the heat received [J], Σ the entropy that went with it from the jacket [J/K]. With Φ = A/RT (a gas at held volume)
or G/RT dΦ = Σ μ_i/RT dn_i - dY, so Y [mol] is what must be known besides states for the entropy that reactions
produced, -R Σ ∫μ_i/RT dn_i = -R (ΔΦ + ΔY). α are the element terms of `layout.reduction`: they cancel in that sum.
"""

import math

import numpy as np
from numba import carray

from ..compiled import callback, compiled
from ..constants import GAS_CONSTANT as R
from . import layout as at
from .callbacks import tables_of
from .equations import (
    GIVEN,
    HEAT,
    JACKET,
    JACKET_TEMPERATURE,
    LESS,
    RAMP,
    TRANSFER,
    border_of,
    bordered_jacobian,
    bordered_rates_of_change,
    heat_capacity_of,
)
from .layout import put, view

ROUND_OFF = 4e-15

_ENTHALPY = at.offset_slot(at.WORK, "enthalpy")
_CP = at.offset_slot(at.WORK, "heat_capacity")
_REDUCTION = at.offset_slot(at.FLOATS, "reduction")
_BLOCK_START = at.offset_slot(at.INTS, "block_start")


@compiled
def further(vessel):
    """Number of unknowns behind T."""
    if vessel[HEAT] == JACKET:
        return 3
    return 1 if vessel[HEAT] == GIVEN else 0


@compiled
def _by_amount(i, T, vessel, ints, floats, work):
    """∂Y'/∂n_i; h must stand for T."""
    enthalpy, reduction = view(work, ints, _ENTHALPY), view(floats, ints, _REDUCTION)
    return vessel[RAMP] / T * (enthalpy[i] - reduction[2 * i] / T - vessel[LESS])


@compiled
def _by_temperature(z, T, vessel, ints, floats, work):
    """∂Y'/∂T, from d(h/RT)/dT = (cp/R - h/RT)/T."""
    enthalpy, cp, reduction = view(work, ints, _ENTHALPY), view(work, ints, _CP), view(floats, ints, _REDUCTION)
    total = 0.0
    for i in range(cp.size):
        total += z[i] * (cp[i] - 2.0 * enthalpy[i] + 2.0 * reduction[2 * i] / T + vessel[LESS])
    return vessel[RAMP] / (T * T) * total


@compiled
def exchanging_rates_of_change(z, vessel, ints, floats, work, out):
    """Right-hand side of the bordered form with the further unknowns behind it."""
    n = np.int64(ints[at.SPECIES])
    if vessel[HEAT] == JACKET:
        vessel[JACKET_TEMPERATURE] = z[n + 4]
    bordered_rates_of_change(z[: n + 2], vessel, ints, floats, work, out[: n + 2])
    T = z[n + 1]
    if vessel[HEAT] == JACKET:
        out[n + 2] = vessel[TRANSFER] * (z[n + 4] - T)
        out[n + 3] = out[n + 2] / z[n + 4]
        out[n + 4] = vessel[RAMP]
        return
    total = 0.0
    if not math.isnan(out[n + 1]):
        for i in range(n):
            total += z[i] * _by_amount(i, T, vessel, ints, floats, work)
    out[n + 2] = total


@compiled
def exchanging_jacobian(z, vessel, ints, floats, work, base, data):
    """Values of its Jacobian on the pattern of exchange.py; base: scratch of the size of the bordered values."""
    n = np.int64(ints[at.SPECIES])
    if vessel[HEAT] == JACKET:
        vessel[JACKET_TEMPERATURE] = z[n + 4]
    bordered_jacobian(z[: n + 2], vessel, ints, floats, work, base)
    if math.isnan(base[0]):
        data[:] = np.nan
        return
    if vessel[HEAT] == JACKET:
        _jacket_columns(z, n, vessel, ints, work, base, data)
    else:
        _given_columns(z, n, vessel, ints, floats, work, base, data)


@compiled
def _jacket_columns(z, n, vessel, ints, work, base, data):
    """Behind the bordered values: Q' and Σ' by T; the columns of Q and Σ; T', Q', Σ', T_j' by T_j."""
    T, jacket, transfer = z[n + 1], z[n + 4], vessel[TRANSFER]
    put(base, data)
    p = base.size
    data[p], data[p + 1], data[p + 2], data[p + 3] = -transfer, -transfer / jacket, 0.0, 0.0
    data[p + 4] = transfer / (R * heat_capacity_of(z, vessel, ints, work))
    data[p + 5], data[p + 6], data[p + 7] = transfer, transfer * T / (jacket * jacket), 0.0


@compiled
def _given_columns(z, n, vessel, ints, floats, work, base, data):
    """Each column of species and that of T gains the row of Y; then the column of Y."""
    start = view(ints, ints, _BLOCK_START)
    p, q = 0, 0
    for s in range(n):
        length = np.int64(start[s + 1]) - np.int64(start[s]) + 2
        put(base[p : p + length], data[q : q + length])
        p += length
        q += length
        data[q] = _by_amount(s, z[n + 1], vessel, ints, floats, work)
        q += 1
    length = 2 * (n + 2)
    put(base[p : p + length], data[q : q + length])
    data[q + length] = _by_temperature(z, z[n + 1], vessel, ints, floats, work)
    data[q + length + 1] = 0.0


@compiled
def _set_border(z, given, n, vessel):
    """z with the border that belongs to its amounts; its given value is not read."""
    put(given, z)
    y = np.empty(n + 1)
    put(given[:n], y)
    y[n] = given[n + 1]
    z[n] = border_of(y, n, vessel)


@callback
def f_of_exchanging(z_pointer, out_pointer, context):
    """`exchanging_rates_of_change`, zero at the border."""
    vessel, ints, floats, work, _ = tables_of(context)
    n = np.int64(ints[at.SPECIES])
    size = n + 2 + further(vessel)
    z, out = np.empty(size), carray(out_pointer, (size,))
    _set_border(z, carray(z_pointer, (size,)), n, vessel)
    exchanging_rates_of_change(z, vessel, ints, floats, work, out)
    out[n] = 0.0
    return 1


@callback
def J_of_exchanging(z_pointer, out_pointer, context):
    """Values of the Jacobian on the pattern of exchange.py."""
    vessel, ints, floats, work, values = tables_of(context)
    n = np.int64(ints[at.SPECIES])
    size = n + 2 + further(vessel)
    added = 8 if vessel[HEAT] == JACKET else n + 2
    z = np.empty(size)
    _set_border(z, carray(z_pointer, (size,)), n, vessel)
    exchanging_jacobian(z, vessel, ints, floats, work, np.empty(values - added), carray(out_pointer, (values,)))
    return 1


@compiled
def change_by_heat(before, after, error):
    """What heat from a jacket adds to -ΔS/R, less what the jacket gave up, with its round-off and error estimate.

    before, after, error: (T, Q, Σ) each. -ΔS/R is worked out elsewhere as if no heat came: ΔU/T₀ is missing there.
    """
    heat, entropy, T0 = after[1] - before[1], after[2] - before[2], before[0]
    noise = ROUND_OFF * (abs(heat) / T0 + abs(entropy) + abs(after[1]) / T0 * 0.1 + 0.1 * abs(after[2]))
    return (entropy - heat / T0) / R, noise / R, abs(error[2] - error[1] / T0) / R


@compiled
def change_by_ramp(amount, T0, T1, gibbs0, gibbs1, vessel, ints, floats):
    """Φ(n₁, T₁) - Φ(n₁, T₀) where the temperature is given, and the round-off it carries; gibbs: g/RT, not reduced."""
    reduction = view(floats, ints, _REDUCTION)
    inverse, ratio, change, noise = 1.0 / T1 - 1.0 / T0, vessel[LESS] * math.log(T1 / T0), 0.0, 0.0
    for i in range(amount.size):
        change += amount[i] * (gibbs1[i] - gibbs0[i] - reduction[2 * i] * inverse + ratio)
        noise += amount[i] * (abs(gibbs0[i]) + abs(gibbs1[i]))
    return change, ROUND_OFF * noise
