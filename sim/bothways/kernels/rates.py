"""The balanced rates and their derivatives: the one rule that ties both directions.

With a_i = c_i/E_i a mass-action step has the net rate k·ΠE_reac·(Πa_reac - Πa_prod), which vanishes to round-off
at equilibrium; no reverse rate constant is formed (balance.py states the rule in plain Python).
"""

import math

from ..compiled import compiled, span
from ..sums import sum_at
from . import layout as at
from .fall_off import SMALLEST_PARTNER, fall_off_constants, fall_off_slopes
from .layout import view
from .lumped import add_lumped_rates, add_lumped_slopes, add_lumped_ways, keep_plain, set_lumped_partners
from .pressure import pressure_constants, pressure_slopes
from .solution import dilute, dilute_partials
from .thermal import set_slopes

_REACTANT0 = at.offset_slot(at.INTS, "reactant0")
_REACTANT1 = at.offset_slot(at.INTS, "reactant1")
_PRODUCT0 = at.offset_slot(at.INTS, "product0")
_PRODUCT1 = at.offset_slot(at.INTS, "product1")
_LONG_REACTION = at.offset_slot(at.INTS, "long_reaction")
_LONG_SPECIES = at.offset_slot(at.INTS, "long_species")
_LONG_SIDE = at.offset_slot(at.INTS, "long_side")
_TERM_REACTION = at.offset_slot(at.INTS, "term_reaction")
_BODY_TERM = at.offset_slot(at.INTS, "body_term")
_BODY_GROUP = at.offset_slot(at.INTS, "body_group")
_GROUP_START = at.offset_slot(at.INTS, "group_start")
_GROUP_SPECIES = at.offset_slot(at.INTS, "group_species")
_CHANGED_SPECIES = at.offset_slot(at.INTS, "changed_species")
_CHANGED_START = at.offset_slot(at.INTS, "changed_start")
_CHANGED_REACTION = at.offset_slot(at.INTS, "changed_reaction")
_TARGET = at.offset_slot(at.INTS, "target")
_RESPONSE_START = at.offset_slot(at.INTS, "response_start")
_RESPONSE_TERM = at.offset_slot(at.INTS, "response_term")
_EXTRA_PLACE = at.offset_slot(at.INTS, "extra_place")
_EXTRA_SOURCE = at.offset_slot(at.INTS, "extra_source")
_TERM_SIGN = at.offset_slot(at.FLOATS, "term_sign")
_GROUP_DEFAULT = at.offset_slot(at.FLOATS, "group_default")
_GROUP_EXCESS = at.offset_slot(at.FLOATS, "group_excess")
_EXTRA_WEIGHT = at.offset_slot(at.FLOATS, "extra_weight")
_INVERSE_SCALE = at.offset_slot(at.WORK, "inverse_scale")
_LOG_PARTNER = at.offset_slot(at.WORK, "log_partner")
_K_LIMIT = at.offset_slot(at.WORK, "k_limit")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_SCALE = at.offset_slot(at.WORK, "scale")
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
    """Πa over the reactants, into `forward`, and over the products, into `reverse`, of each reaction; ΠE over the reactants.

    All in one loop, since what it takes is looking up places; E alone would stand while the temperature does.
    """
    a, inverse_scale = view(work, ints, _ACTIVITY), view(work, ints, _INVERSE_SCALE)
    scale, out = view(work, ints, _SCALE), view(work, ints, _REACTANT_SCALE)
    for i in range(c.size):
        a[i] = c[i] * inverse_scale[i]
    a[c.size] = 1.0
    r0, r1 = view(ints, ints, _REACTANT0), view(ints, ints, _REACTANT1)
    p0, p1 = view(ints, ints, _PRODUCT0), view(ints, ints, _PRODUCT1)
    forward, reverse = view(work, ints, _FORWARD), view(work, ints, _REVERSE)
    for j in range(forward.size):
        first, second = r0[j], r1[j]
        forward[j] = a[first] * a[second]
        out[j] = scale[first] * scale[second]
        reverse[j] = a[p0[j]] * a[p1[j]]
    side, species = view(ints, ints, _LONG_SIDE), view(ints, ints, _LONG_SPECIES)
    reaction = view(ints, ints, _LONG_REACTION)
    for m in range(side.size):
        if side[m] == 0:
            forward[reaction[m]] *= a[species[m]]
            out[reaction[m]] *= scale[species[m]]
        else:
            reverse[reaction[m]] *= a[species[m]]


@compiled
def set_rates(c, total, ints, floats, work):
    """Net rates [mol/(m3 s)] of every reaction, from Πa of both sides; the thermal parts must stand for T.

    c: (N) concentrations [mol/m3], total: their sum as partners see it.
    """
    _partners(c, total, ints, floats, work)
    _rate_constants(total, ints, floats, work)
    k = view(work, ints, _K_TOTAL)
    _sum_terms(view(work, ints, _K), k, ints)
    keep_plain(view(work, ints, _K), k, ints)
    _products_of_activities(c, ints, work)
    dilute(total, ints, floats, work)
    scale, net = view(work, ints, _REACTANT_SCALE), view(work, ints, _NET)
    forward, reverse = view(work, ints, _FORWARD), view(work, ints, _REVERSE)
    for j in range(k.size):
        net[j] = k[j] * (scale[j] * (forward[j] - reverse[j]))
    add_lumped_rates(c, ints, floats, work)


@compiled
def one_way_rates(ints, work, forward, reverse):
    """Forward and reverse rates [mol/(m3 s)] of every reaction, (R) each; the rates must be set."""
    k, scale = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE)
    of_reactants, of_products = view(work, ints, _FORWARD), view(work, ints, _REVERSE)
    for j in range(k.size):
        forward[j] = k[j] * (scale[j] * of_reactants[j])
        reverse[j] = k[j] * (scale[j] * of_products[j])
    add_lumped_ways(forward, reverse, ints, work)


@compiled
def _gather(rates, out, ints):
    """Σ_j ν_ij rates_j for every species; rates: (2 R + 1) as `net`, its second half set here."""
    r = rates.size // 2
    given, turned = span(rates, 0, r), span(rates, r + 1, rates.size)
    for j in range(r):
        turned[j] = -given[j]
    rates[r] = 0.0
    out[:] = 0.0
    species, start = view(ints, ints, _CHANGED_SPECIES), view(ints, ints, _CHANGED_START)
    reaction = view(ints, ints, _CHANGED_REACTION)
    for k in range(species.size):
        out[species[k]] = sum_at(rates, reaction, start[k], start[k + 1])


@compiled
def set_production(c, total, ints, floats, work):
    """Rates and the production rates omega [mol/(m3 s)] of every species."""
    set_rates(c, total, ints, floats, work)
    _gather(view(work, ints, _NET), view(work, ints, _OMEGA), ints)


@compiled
def _set_partials(ints, work):
    """∂w/∂c of every molecule of every reaction [1/s, at constant partner], into `partial`."""
    r0, r1 = view(ints, ints, _REACTANT0), view(ints, ints, _REACTANT1)
    p0, p1 = view(ints, ints, _PRODUCT0), view(ints, ints, _PRODUCT1)
    a, inverse_scale = view(work, ints, _ACTIVITY), view(work, ints, _INVERSE_SCALE)
    k, scale, out = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE), view(work, ints, _PARTIAL)
    for j in range(k.size):
        whole, o = k[j] * scale[j], 4 * j
        out[o] = whole * inverse_scale[r0[j]] * a[r1[j]]
        out[o + 1] = whole * inverse_scale[r1[j]] * a[r0[j]]
        out[o + 2] = -whole * inverse_scale[p0[j]] * a[p1[j]]
        out[o + 3] = -whole * inverse_scale[p1[j]] * a[p0[j]]
    _set_long_partials(ints, work)


@compiled
def _set_long_partials(ints, work):
    """Completes the partials of sides with more than two molecules: each times the others' activities."""
    r0, r1 = view(ints, ints, _REACTANT0), view(ints, ints, _REACTANT1)
    p0, p1 = view(ints, ints, _PRODUCT0), view(ints, ints, _PRODUCT1)
    reaction, species = view(ints, ints, _LONG_REACTION), view(ints, ints, _LONG_SPECIES)
    side = view(ints, ints, _LONG_SIDE)
    a, inverse_scale = view(work, ints, _ACTIVITY), view(work, ints, _INVERSE_SCALE)
    k, scale, out = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE), view(work, ints, _PARTIAL)
    first_long = 4 * k.size
    for m in range(side.size):
        j, s = reaction[m], side[m]
        for q in range(2):
            out[4 * j + 2 * s + q] *= a[species[m]]
        value = k[j] * (scale[j] * inverse_scale[species[m]])
        value *= a[r0[j]] * a[r1[j]] if s == 0 else -(a[p0[j]] * a[p1[j]])
        other = m - 1
        while other >= 0 and reaction[other] == j:  # a reaction's own stand next to one another
            value *= a[species[other]] if side[other] == s else 1.0
            other -= 1
        other = m + 1
        while other < side.size and reaction[other] == j:
            value *= a[species[other]] if side[other] == s else 1.0
            other += 1
        out[first_long + m] = value


@compiled
def set_derivatives(T, ints, floats, work):
    """Derivatives of omega: by concentrations and by the partners' total into `block`, by T into `omega_by_T`.

    set_production must have been called for the same state.
    """
    set_slopes(T, ints, floats, work)
    _rate_constant_slopes(ints, floats, work)
    bare, scale = view(work, ints, _BARE), view(work, ints, _REACTANT_SCALE)
    forward, reverse = view(work, ints, _FORWARD), view(work, ints, _REVERSE)
    for j in range(bare.size):
        bare[j] = scale[j] * (forward[j] - reverse[j])
    _set_partials(ints, work)
    dilute_partials(ints, floats, work)
    _temperature_derivatives(ints, floats, work)
    _partner_derivatives(ints, work)
    _fill_block(ints, floats, work)


@compiled
def _fill_block(ints, floats, work):
    """The block from the partials, as mechanism/jacobian_sums.py lays them out."""
    partial, block, target = view(work, ints, _PARTIAL), view(work, ints, _BLOCK), view(ints, ints, _TARGET)
    block[:] = 0.0
    for q in range(target.size // 4):
        d, o = partial[q], 4 * q
        block[target[o]] -= d
        block[target[o + 1]] -= d
        block[target[o + 2]] += d
        block[target[o + 3]] += d
    place, source = view(ints, ints, _EXTRA_PLACE), view(ints, ints, _EXTRA_SOURCE)
    weight = view(floats, ints, _EXTRA_WEIGHT)
    for e in range(place.size):
        block[place[e]] += weight[e] * partial[source[e]]


@compiled
def _temperature_derivatives(ints, floats, work):
    """∂omega/∂T: bare·dk/dT - reverse rate·d ln(ΠE_reac/ΠE_prod)/dT, summed over the reactions."""
    k, scale, k_by_T = view(work, ints, _K_TOTAL), view(work, ints, _REACTANT_SCALE), view(work, ints, _K_TOTAL_BY_T)
    bare, reverse, by_T = view(work, ints, _BARE), view(work, ints, _REVERSE), view(work, ints, _NET_BY_T)
    reverse_slope = view(work, ints, _REVERSE_SLOPE)
    _sum_terms(view(work, ints, _K_BY_T), k_by_T, ints)
    keep_plain(view(work, ints, _K_BY_T), k_by_T, ints)
    for j in range(k.size):
        by_T[j] = bare[j] * k_by_T[j] - k[j] * (scale[j] * reverse[j]) * reverse_slope[j]
    add_lumped_slopes(by_T, ints, floats, work)
    _gather(by_T, view(work, ints, _OMEGA_BY_T), ints)


@compiled
def _partner_derivatives(ints, work):
    """∂w/∂[M] of every term, behind the other partials, zero for terms without a partner; then the responses."""
    by_M, bare, out = view(work, ints, _K_BY_M), view(work, ints, _BARE), view(work, ints, _PARTIAL)
    reaction, start = view(ints, ints, _TERM_REACTION), view(ints, ints, _RESPONSE_START)
    term = view(ints, ints, _RESPONSE_TERM)
    responses = start.size // 2
    first = 4 * bare.size + ints[at.LONG]
    by_terms = span(out, first, first + by_M.size + 1)
    for t in range(by_M.size):
        by_terms[t] = by_M[t] * bare[reaction[t]]
    by_terms[by_M.size] = 0.0
    set_lumped_partners(by_terms, ints, work)
    for p in range(responses):
        low, middle, high = start[2 * p], start[2 * p + 1], start[2 * p + 2]
        out[first + by_M.size + 1 + p] = sum_at(by_terms, term, low, middle) - sum_at(by_terms, term, middle, high)
