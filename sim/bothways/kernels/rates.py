"""The balanced rates and their derivatives: the one rule that ties both directions.

With a_i = c_i/E_i a mass-action step has the net rate k·ΠE_reac·(Πa_reac - Πa_prod), which vanishes to round-off
at equilibrium; no reverse rate constant is formed (balance.py states the rule in plain Python).
"""

import math

from ..compiled import compiled
from . import layout as at
from .fall_off import SMALLEST_PARTNER, fall_off_constants, fall_off_slopes
from .layout import view
from .pressure import pressure_constants, pressure_slopes
from .thermal import set_slopes

_REACTANT = at.offset_slot(at.INTS, "reactant")
_PRODUCT = at.offset_slot(at.INTS, "product")
_LONG_REACTION = at.offset_slot(at.INTS, "long_reaction")
_LONG_SPECIES = at.offset_slot(at.INTS, "long_species")
_LONG_SIDE = at.offset_slot(at.INTS, "long_side")
_TERM_REACTION = at.offset_slot(at.INTS, "term_reaction")
_BODY_TERM = at.offset_slot(at.INTS, "body_term")
_BODY_GROUP = at.offset_slot(at.INTS, "body_group")
_GROUP_START = at.offset_slot(at.INTS, "group_start")
_GROUP_SPECIES = at.offset_slot(at.INTS, "group_species")
_NU_START = at.offset_slot(at.INTS, "nu_start")
_NU_REACTION = at.offset_slot(at.INTS, "nu_reaction")
_SUM_START = at.offset_slot(at.INTS, "sum_start")
_SUM_SOURCE = at.offset_slot(at.INTS, "sum_source")
_TERM_SIGN = at.offset_slot(at.FLOATS, "term_sign")
_GROUP_DEFAULT = at.offset_slot(at.FLOATS, "group_default")
_GROUP_EXCESS = at.offset_slot(at.FLOATS, "group_excess")
_NU = at.offset_slot(at.FLOATS, "nu")
_SUM_WEIGHT = at.offset_slot(at.FLOATS, "sum_weight")
_INVERSE_SCALE = at.offset_slot(at.WORK, "inverse_scale")
_LOG_PARTNER = at.offset_slot(at.WORK, "log_partner")
_K_LIMIT = at.offset_slot(at.WORK, "k_limit")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_REACTANT_SCALE = at.offset_slot(at.WORK, "reactant_scale")
_REVERSE_SLOPE = at.offset_slot(at.WORK, "reverse_slope")
_ACTIVITY = at.offset_slot(at.WORK, "activity")
_PARTNER = at.offset_slot(at.WORK, "partner")
_K = at.offset_slot(at.WORK, "k")
_K_BY_T = at.offset_slot(at.WORK, "k_by_T")
_K_BY_M = at.offset_slot(at.WORK, "k_by_M")
_K_TOTAL = at.offset_slot(at.WORK, "k_total")
_K_TOTAL_BY_T = at.offset_slot(at.WORK, "k_total_by_T")
_FORWARD = at.offset_slot(at.WORK, "forward")
_REVERSE = at.offset_slot(at.WORK, "reverse")
_BARE = at.offset_slot(at.WORK, "bare")
_NET_BY_T = at.offset_slot(at.WORK, "net_by_T")
_NET = at.offset_slot(at.WORK, "net")
_OMEGA = at.offset_slot(at.WORK, "omega")
_OMEGA_BY_T = at.offset_slot(at.WORK, "omega_by_T")
_PARTIAL = at.offset_slot(at.WORK, "partial")
_BLOCK = at.offset_slot(at.WORK, "block")


CANCELLED = 0.01
"""A partner's concentration below this part of the total has lost digits to the difference, and is summed anew [-]."""


@compiled
def _sum_of_partners(c, named, excess, default):
    """Σ efficiency · c without a difference; named: (k) rising places of the species with an efficiency of their own."""
    total, e = 0.0, 0
    for i in range(c.size):
        if e < named.size and named[e] == i:
            total += (default + excess[e]) * c[i]
            e += 1
        else:
            total += default * c[i]
    return total


@compiled
def _partners(c, total, ints, floats, work):
    """Concentration of the partner of each group: default · total + Σ excess · c, [mol/m3]."""
    start, species = view(ints, ints, _GROUP_START), view(ints, ints, _GROUP_SPECIES)
    default, excess = view(floats, ints, _GROUP_DEFAULT), view(floats, ints, _GROUP_EXCESS)
    partner, log_partner = view(work, ints, _PARTNER), view(work, ints, _LOG_PARTNER)
    for g in range(partner.size):
        m = default[g] * total
        for e in range(start[g], start[g + 1]):
            m += excess[e] * c[species[e]]
        if m < CANCELLED * default[g] * total:
            m = _sum_of_partners(c, species[start[g] : start[g + 1]], excess[start[g] : start[g + 1]], default[g])
        partner[g] = m
        log_partner[g] = math.log(max(m, SMALLEST_PARTNER))


@compiled
def _rate_constants(total, ints, floats, work):
    """k of every term, partner included, from the limits at this temperature; total as in `set_rates`."""
    k, limit = view(work, ints, _K), view(work, ints, _K_LIMIT)
    sign, partner = view(floats, ints, _TERM_SIGN), view(work, ints, _PARTNER)
    for t in range(k.size):
        k[t] = sign[t] * limit[t]
    body, group = view(ints, ints, _BODY_TERM), view(ints, ints, _BODY_GROUP)
    for b in range(body.size):
        k[body[b]] *= partner[group[b]]
    fall_off_constants(ints, floats, work)
    pressure_constants(total, ints, floats, work)


@compiled
def _rate_constant_slopes(ints, floats, work):
    """dk/dT at constant partner and dk/d[M] of every term (of laws of pressure by the total); k must be set."""
    k, by_T, by_M = view(work, ints, _K), view(work, ints, _K_BY_T), view(work, ints, _K_BY_M)
    limit, slope = view(work, ints, _K_LIMIT), view(work, ints, _K_SLOPE)
    sign = view(floats, ints, _TERM_SIGN)
    for t in range(k.size):
        by_T[t] = k[t] * slope[t]
        by_M[t] = 0.0
    body = view(ints, ints, _BODY_TERM)
    for b in range(body.size):
        by_M[body[b]] = sign[body[b]] * limit[body[b]]
    fall_off_slopes(ints, floats, work)
    pressure_slopes(ints, floats, work)


@compiled
def _sum_terms(values, total, ints):
    """Sums over the terms of each reaction; the first R terms are the reactions' own."""
    reaction = view(ints, ints, _TERM_REACTION)
    for j in range(total.size):
        total[j] = values[j]
    for t in range(total.size, values.size):
        total[reaction[t]] += values[t]


@compiled
def _products_of_activities(c, ints, work):
    """Πa over the reactants, into `forward`, and over the products, into `reverse`, of each reaction."""
    n = ints[at.SPECIES]
    a, inverse_scale = view(work, ints, _ACTIVITY), view(work, ints, _INVERSE_SCALE)
    for i in range(n):
        a[i] = c[i] * inverse_scale[i]
    a[n] = 1.0
    reactant, product = view(ints, ints, _REACTANT), view(ints, ints, _PRODUCT)
    forward, reverse = view(work, ints, _FORWARD), view(work, ints, _REVERSE)
    for j in range(forward.size):
        forward[j] = a[reactant[3 * j]] * a[reactant[3 * j + 1]] * a[reactant[3 * j + 2]]
        reverse[j] = a[product[3 * j]] * a[product[3 * j + 1]] * a[product[3 * j + 2]]
    side, species = view(ints, ints, _LONG_SIDE), view(ints, ints, _LONG_SPECIES)
    reaction = view(ints, ints, _LONG_REACTION)
    for m in range(side.size):
        if side[m] == 0:
            forward[reaction[m]] *= a[species[m]]
        else:
            reverse[reaction[m]] *= a[species[m]]


@compiled
def set_rates(c, total, ints, floats, work):
    """Forward, reverse and net rates [mol/(m3 s)] of every reaction; the thermal parts must stand for T.

    c: (N) concentrations [mol/m3], total: their sum as partners see it.
    """
    _partners(c, total, ints, floats, work)
    _rate_constants(total, ints, floats, work)
    k = view(work, ints, _K_TOTAL)
    _sum_terms(view(work, ints, _K), k, ints)
    _products_of_activities(c, ints, work)
    scale, net, bare = view(work, ints, _REACTANT_SCALE), view(work, ints, _NET), view(work, ints, _BARE)
    forward, reverse = view(work, ints, _FORWARD), view(work, ints, _REVERSE)
    for j in range(net.size):
        bare[j] = scale[j] * (forward[j] - reverse[j])
        net[j] = k[j] * bare[j]
        forward[j] = k[j] * (scale[j] * forward[j])
        reverse[j] = k[j] * (scale[j] * reverse[j])


@compiled
def _gather(rates, out, ints, floats):
    """Σ_j ν_ij rates_j for every species."""
    start, reaction, nu = view(ints, ints, _NU_START), view(ints, ints, _NU_REACTION), view(floats, ints, _NU)
    for i in range(out.size):
        total = 0.0
        for e in range(start[i], start[i + 1]):
            total += nu[e] * rates[reaction[e]]
        out[i] = total


@compiled
def set_production(c, total, ints, floats, work):
    """Rates and the production rates omega [mol/(m3 s)] of every species."""
    set_rates(c, total, ints, floats, work)
    _gather(view(work, ints, _NET), view(work, ints, _OMEGA), ints, floats)


@compiled
def _set_partials(ints, work):
    """∂w/∂c of every molecule of every reaction [1/s, at constant partner], into `partial`."""
    reactant, product = view(ints, ints, _REACTANT), view(ints, ints, _PRODUCT)
    a, inverse_scale = view(work, ints, _ACTIVITY), view(work, ints, _INVERSE_SCALE)
    k, scale, out = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE), view(work, ints, _PARTIAL)
    for j in range(k.size):
        o = 3 * j
        r0, r1, r2 = reactant[o], reactant[o + 1], reactant[o + 2]
        p0, p1, p2 = product[o], product[o + 1], product[o + 2]
        out[2 * o] = k[j] * (scale[j] * inverse_scale[r0] * a[r1] * a[r2])
        out[2 * o + 1] = k[j] * (scale[j] * inverse_scale[r1] * a[r0] * a[r2])
        out[2 * o + 2] = k[j] * (scale[j] * inverse_scale[r2] * a[r0] * a[r1])
        out[2 * o + 3] = -k[j] * (scale[j] * inverse_scale[p0] * a[p1] * a[p2])
        out[2 * o + 4] = -k[j] * (scale[j] * inverse_scale[p1] * a[p0] * a[p2])
        out[2 * o + 5] = -k[j] * (scale[j] * inverse_scale[p2] * a[p0] * a[p1])
    _set_long_partials(ints, work)


@compiled
def _set_long_partials(ints, work):
    """Completes the partials of sides with more than three molecules: each times the others' activities."""
    reactant, product = view(ints, ints, _REACTANT), view(ints, ints, _PRODUCT)
    reaction, species = view(ints, ints, _LONG_REACTION), view(ints, ints, _LONG_SPECIES)
    side = view(ints, ints, _LONG_SIDE)
    a, inverse_scale = view(work, ints, _ACTIVITY), view(work, ints, _INVERSE_SCALE)
    k, scale, out = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE), view(work, ints, _PARTIAL)
    first_long = 6 * k.size
    for m in range(side.size):
        j, s = reaction[m], side[m]
        for q in range(3):
            out[6 * j + 3 * s + q] *= a[species[m]]
        molecules = reactant if s == 0 else product
        value = k[j] * (scale[j] * inverse_scale[species[m]])
        for q in range(3):
            value *= a[molecules[3 * j + q]]
        for other in range(side.size):
            if other != m and reaction[other] == j and side[other] == s:
                value *= a[species[other]]
        out[first_long + m] = value if s == 0 else -value


@compiled
def set_derivatives(T, ints, floats, work):
    """Derivatives of omega: by concentrations and by the partners' total into `block`, by T into `omega_by_T`.

    set_production must have been called for the same state.
    """
    set_slopes(T, ints, floats, work)
    _rate_constant_slopes(ints, floats, work)
    _set_partials(ints, work)
    k_by_T = view(work, ints, _K_TOTAL_BY_T)
    _sum_terms(view(work, ints, _K_BY_T), k_by_T, ints)
    _temperature_derivatives(k_by_T, ints, floats, work)
    _partner_derivatives(ints, work)
    start, source = view(ints, ints, _SUM_START), view(ints, ints, _SUM_SOURCE)
    weight, partial, block = view(floats, ints, _SUM_WEIGHT), view(work, ints, _PARTIAL), view(work, ints, _BLOCK)
    for b in range(block.size):
        total = 0.0
        for e in range(start[b], start[b + 1]):
            total += weight[e] * partial[source[e]]
        block[b] = total


@compiled
def _temperature_derivatives(k_by_T, ints, floats, work):
    """∂omega/∂T: bare·dk/dT - reverse·d ln(ΠE_reac/ΠE_prod)/dT, summed over the reactions."""
    bare, reverse, by_T = view(work, ints, _BARE), view(work, ints, _REVERSE), view(work, ints, _NET_BY_T)
    reverse_slope = view(work, ints, _REVERSE_SLOPE)
    for j in range(by_T.size):
        by_T[j] = bare[j] * k_by_T[j] - reverse[j] * reverse_slope[j]
    _gather(by_T, view(work, ints, _OMEGA_BY_T), ints, floats)


@compiled
def _partner_derivatives(ints, work):
    """∂w/∂[M] of every term, behind the other partials; zero for terms without a partner."""
    by_M, bare, out = view(work, ints, _K_BY_M), view(work, ints, _BARE), view(work, ints, _PARTIAL)
    reaction = view(ints, ints, _TERM_REACTION)
    first = out.size - by_M.size
    for t in range(by_M.size):
        out[first + t] = by_M[t] * bare[reaction[t]]
