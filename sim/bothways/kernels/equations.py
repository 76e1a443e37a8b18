"""The equations of closed vessels: right-hand side and exact Jacobian, plain and bordered.

State of constant volume: concentrations c_1…c_N [mol/m3] and T [K]; of constant pressure: amounts n_1…n_N [mol]
and T. The bordered form carries one more unknown before T, the total concentration [mol/m3] or the volume [m3],
with an algebraic row that ties it to the others: this keeps the Jacobian sparse where partners and expansion
would fill it. `vessel` is (9): HOLDS, HEAT, pressure [Pa], heat capacity of the vessel itself [J/K, at constant
volume J/(m3 K)], LESS: what is taken off h/RT and cp/R to give the energy that is conserved (1 for a gas at constant
volume, else 0), SHARED: 1 where ln a holds the total amount (a gas at constant pressure, mole fractions), else 0; given
slope of the temperature [K/s], UA of a jacket [W/K, at constant volume W/(m3 K)] and its temperature [K].
"""

import numpy as np

from ..apart import apart
from ..compiled import compiled, span
from ..constants import GAS_CONSTANT as R
from ..sums import dot, total_of
from . import layout as at
from .layout import put, view
from .lumped import conductances
from .rates import one_way_rates, set_derivatives, set_production
from .thermal import set_temperature

VESSEL_SIZE = 9
HOLDS, HEAT, PRESSURE, HEAT_CAPACITY, LESS, SHARED, RAMP, TRANSFER, JACKET_TEMPERATURE = range(VESSEL_SIZE)
VOLUME_HELD, PRESSURE_HELD = 0.0, 1.0
ISOTHERMAL, ADIABATIC, GIVEN, JACKET = 0.0, 1.0, 2.0, 3.0
LOWEST_TEMPERATURE, HIGHEST_TEMPERATURE = 1.0, 1e5  # [K] outside, a trial state is answered with NaN

_BLOCK_START = at.offset_slot(at.INTS, "block_start")
_BLOCK_ROW = at.offset_slot(at.INTS, "block_row")
_ENTHALPY = at.offset_slot(at.WORK, "enthalpy")
_CP = at.offset_slot(at.WORK, "heat_capacity")
_CP_SLOPE = at.offset_slot(at.WORK, "heat_capacity_slope")
_OMEGA = at.offset_slot(at.WORK, "omega")
_OMEGA_BY_T = at.offset_slot(at.WORK, "omega_by_T")
_BLOCK = at.offset_slot(at.WORK, "block")
_SEEN = at.offset_slot(at.WORK, "seen")
_CONCENTRATION = at.offset_slot(at.WORK, "concentration")
_ENERGY = at.offset_slot(at.WORK, "energy")
_COLUMN = at.offset_slot(at.WORK, "border_column")


@apart
def produce(y, border, T, vessel, ints, floats, work):
    """Sets rates and omega for the species part y of a state; returns the volume in units of the state.

    At constant volume the state is per volume (1); border is the total concentration or the volume. Nothing is done
    where the rates stand for this state already: J is asked for where f was.
    """
    c, seen = view(work, ints, _CONCENTRATION), view(work, ints, _SEEN)
    volume, total = 1.0, border
    if vessel[HOLDS] == PRESSURE_HELD:
        volume, total = border, vessel[PRESSURE] / (R * T)
    set_temperature(T, ints, floats, work)
    changed = 0 if seen[at.SEEN_TOTAL] == total else 1
    for i in range(c.size):
        value = y[i] / volume
        changed += 0 if value == c[i] else 1
        c[i] = value
    if changed > 0:
        set_production(c, total, ints, floats, work)
        seen[at.SEEN_TOTAL] = total
    return volume


@compiled
def _usable(T):
    return LOWEST_TEMPERATURE < T < HIGHEST_TEMPERATURE


@compiled
def border_of(y, n, vessel):
    """The border unknown that belongs to a plain state: total concentration, or volume."""
    total = total_of(y[:n])
    if vessel[HOLDS] == PRESSURE_HELD:
        return total * R * y[n] / vessel[PRESSURE]
    return total


@compiled
def balanced(vessel):
    """Whether T follows from the balance of energy (adiabatic, jacket) and not from outside (isothermal, given)."""
    return vessel[HEAT] == ADIABATIC or vessel[HEAT] == JACKET


@compiled
def heat_capacity_of(y, vessel, ints, work):
    """Heat capacity at constant volume or pressure of contents and vessel, per unit of the state, over R."""
    cp = view(work, ints, _CP)
    own = vessel[HEAT_CAPACITY] / R + dot(y[: cp.size], cp)
    return own - vessel[LESS] * total_of(y[: cp.size]) if vessel[LESS] > 0.0 else own


@compiled
def _heating(y, T, volume, vessel, ints, work):
    """dT/dt [K/s] from the production rates and what the jacket gives, or as it is given (0 of an isothermal vessel)."""
    if not balanced(vessel):
        return vessel[RAMP]
    released = -dot(energies(vessel, ints, work), view(work, ints, _OMEGA))
    received = vessel[TRANSFER] / R * (vessel[JACKET_TEMPERATURE] - T)
    return (released * volume * T + received) / heat_capacity_of(y, vessel, ints, work)


@compiled
def energies(vessel, ints, work):
    """u/RT of a gas at constant volume, else h/RT, (N)."""
    enthalpy, energy = view(work, ints, _ENTHALPY), view(work, ints, _ENERGY)
    less = vessel[LESS]
    for i in range(energy.size):
        energy[i] = enthalpy[i] - less
    return energy


@compiled
def rates_of_change(y, vessel, ints, floats, work, out):
    """dy/dt of the plain form; y, out: (N + 1). NaN for a temperature without meaning."""
    n = ints[at.SPECIES]
    T = y[n]
    if not _usable(T):
        out[:] = np.nan
        return
    volume = produce(y, border_of(y, n, vessel), T, vessel, ints, floats, work)
    omega = view(work, ints, _OMEGA)
    for i in range(n):
        out[i] = volume * omega[i]
    out[n] = _heating(y, T, volume, vessel, ints, work)


@compiled
def bordered_rates_of_change(z, vessel, ints, floats, work, out):
    """Right-hand side of the bordered form; z, out: (N + 2), out[N] the residual of the algebraic row."""
    n = ints[at.SPECIES]
    T, border = z[n + 1], z[n]
    if not _usable(T):
        out[:] = np.nan
        return
    volume = produce(z, border, T, vessel, ints, floats, work)
    omega = view(work, ints, _OMEGA)
    for i in range(n):
        out[i] = volume * omega[i]
    out[n] = total_of(z[:n]) - (border if vessel[HOLDS] == VOLUME_HELD else vessel[PRESSURE] * border / (R * T))
    out[n + 1] = _heating(z, T, volume, vessel, ints, work)


@apart
def columns(y, border, T, vessel, ints, floats, work):
    """Completes the Jacobian's species rows: `block` holds ∂f/∂y, `column` ∂f/∂border, `omega_by_T` ∂f/∂T."""
    n, size = ints[at.SPECIES], ints[at.BLOCK]
    volume = produce(y, border, T, vessel, ints, floats, work)
    set_derivatives(T, ints, floats, work)
    block, omega, by_T = view(work, ints, _BLOCK), view(work, ints, _OMEGA), view(work, ints, _OMEGA_BY_T)
    column = view(work, ints, _COLUMN)
    if vessel[HOLDS] == VOLUME_HELD:
        for i in range(n):
            column[i] = block[size + i]
        return volume
    start, row, c = view(ints, ints, _BLOCK_START), view(ints, ints, _BLOCK_ROW), view(work, ints, _CONCENTRATION)
    total = vessel[PRESSURE] / (R * T)
    for i in range(n):
        column[i] = omega[i]
        by_T[i] = volume * (by_T[i] - block[size + i] * total / T)
    for s in range(n):
        for e in range(start[s], start[s + 1]):
            column[row[e]] -= block[e] * c[s]
    return volume


@compiled
def bordered_jacobian(z, vessel, ints, floats, work, data):
    """Values of the bordered Jacobian, columns one after another as `bordered_pattern` of vessel.py lists them.

    Column of species s: its rows of the block, then the algebraic row, then the row of T; the last two columns
    (border, T) are full. NaN for a temperature without meaning.
    """
    n = ints[at.SPECIES]
    T, border = z[n + 1], z[n]
    if not _usable(T):
        data[:] = np.nan
        return
    volume = columns(z, border, T, vessel, ints, floats, work)
    start, block = view(ints, ints, _BLOCK_START), view(work, ints, _BLOCK)
    p = 0
    for s in range(n):
        for e in range(start[s], start[s + 1]):
            data[p] = block[e]
            p += 1
        data[p] = 1.0
        p += 2
    column, by_T = view(work, ints, _COLUMN), view(work, ints, _OMEGA_BY_T)
    held_pressure = vessel[HOLDS] == PRESSURE_HELD
    slope = vessel[PRESSURE] / (R * T)
    put(column, data[p : p + n])
    data[p + n] = -slope if held_pressure else -1.0
    put(by_T, data[p + n + 2 : p + 2 * n + 2])
    data[p + 2 * n + 2] = slope * border / T if held_pressure else 0.0
    _temperature_row(z, T, volume, vessel, ints, work, data)


@compiled
def _temperature_row(y, T, volume, vessel, ints, work, data):
    """Puts ∂(dT/dt)/∂z into its places of `data`; the species rows stand there already.

    With C the heat capacity and f = dT/dt = (UA (T_j - T) - Σ u_i f_i)/C: ∂f = -(Σ u_i ∂f_i + Σ ∂u_i f_i + f ∂C +
    UA ∂T)/C, u the internal energies of a gas at constant volume, else the enthalpies.
    """
    n = ints[at.SPECIES]
    start, row, energy = view(ints, ints, _BLOCK_START), view(ints, ints, _BLOCK_ROW), energies(vessel, ints, work)
    cp, cp_slope, omega = view(work, ints, _CP), view(work, ints, _CP_SLOPE), view(work, ints, _OMEGA)
    less = vessel[LESS]
    by_balance = 1.0 if balanced(vessel) else 0.0
    heat = heat_capacity_of(y, vessel, ints, work)
    f = _heating(y, T, volume, vessel, ints, work)
    p = 0
    for s in range(n):
        size = start[s + 1] - start[s]
        values, rows = span(data, p, p + size), span(row, start[s], start[s + 1])
        total = 0.0
        for e in range(values.size):
            total += energy[rows[e]] * values[e]
        p += size
        data[p + 1] = -by_balance * (T * total + f * (cp[s] - less)) / heat
        p += 2
    by_border, by_T = dot(energy, data[p : p + n]), dot(energy, data[p + n + 2 : p + 2 * n + 2])
    own, change = volume * (dot(cp, omega) - less * total_of(omega)), dot(y[:n], cp_slope)
    data[p + n + 1] = -by_balance * T * by_border / heat
    data[p + 2 * n + 3] = -by_balance * (T * by_T + own + f * change / T + vessel[TRANSFER] / R) / heat


@compiled
def jacobian(y, vessel, ints, floats, work, data, out):
    """Exact dense Jacobian of the plain form, out: (N + 1, N + 1), by eliminating the border.

    data: scratch of the size of the bordered values. The border b of a plain state follows from the algebraic
    row, so ∂f/∂y gains ∂f/∂b times ∂b/∂y.
    """
    n = ints[at.SPECIES]
    T = y[n]
    if not _usable(T):
        out[:] = np.nan
        return
    z = np.empty(n + 2)
    put(y[:n], z)
    z[n] = border_of(y, n, vessel)
    z[n + 1] = T
    bordered_jacobian(z, vessel, ints, floats, work, data)
    start, row = view(ints, ints, _BLOCK_START), view(ints, ints, _BLOCK_ROW)
    border = data[data.size - 2 * (n + 2) : data.size - (n + 2)]
    last = data[data.size - (n + 2) :]
    by_T = -last[n] / border[n]
    out[n, n] = last[n + 1] + border[n + 1] * by_T
    p = 0
    for i in range(n):
        out[i, n] = last[i] + border[i] * by_T
    for s in range(n):
        by_y = -1.0 / border[n]
        for i in range(n):
            out[i, s] = border[i] * by_y
        for e in range(start[s], start[s + 1]):
            out[row[e], s] += data[p]
            p += 1
        out[n, s] = data[p + 1] + border[n + 1] * by_y
        p += 2


@compiled
def reaction_conductances(y, vessel, ints, floats, work, out, reverse):
    """What the net rate of every reaction answers to its A/RT [mol/(m3 s)] in a plain state at equilibrium; out (R).

    reverse: (R) scratch.
    """
    n = ints[at.SPECIES]
    produce(y, border_of(y, n, vessel), y[n], vessel, ints, floats, work)
    one_way_rates(ints, work, out, reverse)
    conductances(out, reverse, ints, floats, work)


@compiled
def reaction_rates(y, vessel, ints, floats, work, forward, reverse):
    """Forward and reverse rates [mol/(m3 s)] of every reaction in a plain state; outputs (R)."""
    n = ints[at.SPECIES]
    produce(y, border_of(y, n, vessel), y[n], vessel, ints, floats, work)
    one_way_rates(ints, work, forward, reverse)
