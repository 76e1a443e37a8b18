"""Net rates of single reactions and their derivatives behind bare addresses, for the method that works by reactions.

State x (N + 1): amounts in the units of the state, and T [K]; in an adiabatic vessel T is a first guess only, since it
follows from the amounts and the energy in the judge's ledger. Rates are in the units of the state per second, so that
dn/dt = ν w. The context is the judge's with the places of the entries behind it (mechanism/rate_partials.py lists them).
"""

import numpy as np
from numba import carray

from ..compiled import callback, compiled, float64_pointer, uint32_pointer
from ..constants import GAS_CONSTANT as R
from . import layout as at
from .callbacks import tables_of
from .equations import (
    ADIABATIC,
    HEAT,
    HOLDS,
    PRESSURE,
    PRESSURE_HELD,
    border_of,
    energies,
    heat_capacity_of,
    produce,
)
from .judge import JUDGE_CONTEXT_SIZE, LEDGER, LEDGER_HEAD, temperature_of
from .layout import view
from .rates import set_derivatives

REACTION, SPECIES, SOURCE, WEIGHT, N_ENTRIES = range(JUDGE_CONTEXT_SIZE, JUDGE_CONTEXT_SIZE + 5)
BY_REACTION_CONTEXT_SIZE = JUDGE_CONTEXT_SIZE + 5

_NET = at.offset_slot(at.WORK, "net")
_NET_BY_T = at.offset_slot(at.WORK, "net_by_T")
_PARTIAL = at.offset_slot(at.WORK, "partial")
_CONCENTRATION = at.offset_slot(at.WORK, "concentration")


@compiled
def _set(y, vessel, ints, floats, work, context):
    """Brings T of a plain state to the energy, and the rates to the state; returns its volume, -1 where T is out of reach."""
    n = np.int64(ints[at.SPECIES])
    if vessel[HEAT] == ADIABATIC:
        c = carray(context, (BY_REACTION_CONTEXT_SIZE,))
        head = np.copy(carray(float64_pointer(c[LEDGER]), (LEDGER_HEAD,)))  # trial states are no drift of the run
        molar = np.empty((4, n))
        y[n] = temperature_of(y[:n], y[n], vessel, ints, floats, work, head, molar[0], molar[1], molar[2], molar[3])
    if not y[n] > 0.0:
        return -1.0
    return produce(y, border_of(y, n, vessel), y[n], vessel, ints, floats, work)


@callback
def rates_by_reaction(x_pointer, out_pointer, context):
    """out: net rates (R), then T [K]; 0 where no temperature gives the energy."""
    vessel, ints, floats, work, _ = tables_of(context)
    n, r = np.int64(ints[at.SPECIES]), np.int64(ints[at.REACTIONS])
    y, out = np.copy(carray(x_pointer, (n + 1,))), carray(out_pointer, (r + 1,))
    volume = _set(y, vessel, ints, floats, work, context)
    net = view(work, ints, _NET)
    for j in range(r):
        out[j] = volume * net[j]
    out[r] = y[n]
    return 1 if volume > 0.0 else 0


@callback
def slopes_by_reaction(x_pointer, out_pointer, context):
    """out: ∂w/∂n = entries + d aᵀ + q bᵀ, as (entries | d (R) | q (R) | a (N) | b (N)); 0 as above.

    d aᵀ is what the total concentration, or the volume, adds; q bᵀ what T adds, b = ∂T/∂n at the energy that is held.
    """
    vessel, ints, floats, work, _ = tables_of(context)
    n, r = np.int64(ints[at.SPECIES]), np.int64(ints[at.REACTIONS])
    size = carray(context, (BY_REACTION_CONTEXT_SIZE,))[N_ENTRIES]
    y, out = np.copy(carray(x_pointer, (n + 1,))), carray(out_pointer, (size + 2 * r + 2 * n,))
    volume = _set(y, vessel, ints, floats, work, context)
    if not volume > 0.0:
        return 0
    set_derivatives(y[n], ints, floats, work)
    d, q, a = out[size : size + r], out[size + r : size + 2 * r], out[size + 2 * r : size + 2 * r + n]
    by_total = np.zeros(r)
    _set_entries(out[:size], by_total, ints, work, context)
    if vessel[HOLDS] == PRESSURE_HELD:
        a[:] = R * y[n] / vessel[PRESSURE]
        _expand(out[:size], by_total, volume, y[n], vessel[PRESSURE], d, q, ints, work, context)
    else:
        a[:] = 1.0
        d[:] = by_total
        q[:] = view(work, ints, _NET_BY_T)[:r]
    _set_heating(y, vessel, ints, work, out[size + 2 * r + n :])
    return 1


@compiled
def _entry_places(context):
    """Reaction and species of each entry."""
    c = carray(context, (BY_REACTION_CONTEXT_SIZE,))
    return (carray(uint32_pointer(c[REACTION]), (c[N_ENTRIES],)), carray(uint32_pointer(c[SPECIES]), (c[N_ENTRIES],)))


@compiled
def _set_entries(entries, by_total, ints, work, context):
    """∂w/∂c of every entry; what goes by the total concentration goes into by_total (R) instead."""
    c = carray(context, (BY_REACTION_CONTEXT_SIZE,))
    reaction, species = _entry_places(context)
    source = carray(uint32_pointer(c[SOURCE]), (entries.size,))
    weight = carray(float64_pointer(c[WEIGHT]), (entries.size,))
    partial, n = view(work, ints, _PARTIAL), ints[at.SPECIES]
    for e in range(entries.size):
        value = weight[e] * partial[source[e]]
        entries[e] = 0.0 if species[e] == n else value
        if species[e] == n:
            by_total[reaction[e]] += value


@compiled
def _expand(entries, by_total, volume, T, pressure, d, q, ints, work, context):
    """d and q at held pressure: more volume carries more of w, and thins c; more heat does so, and lowers C = p/RT."""
    reaction, species = _entry_places(context)
    net, by_T, c = view(work, ints, _NET), view(work, ints, _NET_BY_T), view(work, ints, _CONCENTRATION)
    for j in range(d.size):
        d[j] = net[j]
    for e in range(entries.size):
        if species[e] < c.size:
            d[reaction[e]] -= entries[e] * c[species[e]]
    for j in range(d.size):
        q[j] = volume * (by_T[j] - by_total[j] * pressure / (R * T * T) + d[j] / T)


@compiled
def _set_heating(y, vessel, ints, work, b):
    """b (N): ∂T/∂n at constant energy, zero where T is held."""
    b[:] = 0.0
    if vessel[HEAT] == ADIABATIC:
        energy, heat = energies(vessel, ints, work), heat_capacity_of(y, vessel, ints, work)
        for i in range(b.size):
            b[i] = -y[y.size - 1] * energy[i] / heat
