"""Rates of lumped steps: real orders, Horiuti's stoichiometric number and adsorption, with their derivatives.

A lumped term has forward and reverse rates k X G φ(M, N) and k X G φ(N, M) with M = Π c^|ν| over the reactants,
N = Π c^ν/Kc over the products (ν net), s = 1/σ, φ(M, N) = M^s, X = Π c^m with m = α - |ν| s of a reactant, α else (so that
α is the forward order, and m or m + ν s the reverse one), and G = (1 + Σ K_i c_i^p)^-power. Hence reverse/forward =
(Q/Kc)^s, and nothing infinite is formed. Orders below one have an infinite slope at zero; they start smoothly:

- in X and G, c^p is c (c² + ε²)^((p-1)/2) for p > 0 and (c² + ε²)^(p/2) for p < 0, ε = SMALLEST_CONCENTRATION. X and G
  are factors of both directions, so that neither sign nor zero of the net rate changes.
- in φ, only if s < 1, M^s is M (M² + δ² N² + τ²)^((s-1)/2), δ = SMALLEST_QUOTIENT, τ = SMALLEST_PRODUCT: φ(M, N) - φ(N, M)
  rises with M and falls with N, so it vanishes at M = N and nowhere else, and has the sign of the affinity.
"""

from ..compiled import compiled
from . import layout as at
from .layout import view

SMALLEST_CONCENTRATION = 1e-9
"""ε [mol/m3]: a power of a concentration below starts smoothly."""
SMALLEST_QUOTIENT = 1e-12
"""δ [-]: (Q/K)^(1/σ), or its inverse, is linear in Q/K, or its inverse, below."""
SMALLEST_PRODUCT = 1e-30
"""τ [(mol/m3)^Σ|ν|]: the same where both sides vanish."""
SMALLEST_ADSORPTION = 0.1
"""1 + Σ K c^p is at least 1 wherever no concentration is negative; in trial states it is kept above this [-]."""

_TERM = at.offset_slot(at.INTS, "lump_term")
_START = at.offset_slot(at.INTS, "lump_start")
_SPECIES = at.offset_slot(at.INTS, "lump_species")
_DILUTED = at.offset_slot(at.INTS, "lump_diluted")
_ADSORBED_START = at.offset_slot(at.INTS, "adsorbed_start")
_ADSORBED_SPECIES = at.offset_slot(at.INTS, "adsorbed_species")
_ADSORBED_EXPRESSION = at.offset_slot(at.INTS, "adsorbed_expression")
_PLAIN_TERM = at.offset_slot(at.INTS, "plain_term")
_TERM_REACTION = at.offset_slot(at.INTS, "term_reaction")
_SHARE = at.offset_slot(at.FLOATS, "lump_share")
_NU = at.offset_slot(at.FLOATS, "lump_nu")
_POWER = at.offset_slot(at.FLOATS, "lump_power")
_ADSORBED_POWER = at.offset_slot(at.FLOATS, "adsorbed_power")
_GROUP_POWER = at.offset_slot(at.FLOATS, "adsorption_power")
_CHANGE = at.offset_slot(at.FLOATS, "amount_change")
_DILUTION = at.offset_slot(at.WORK, "dilution")
_SCALE = at.offset_slot(at.WORK, "scale")
_INVERSE_SCALE = at.offset_slot(at.WORK, "inverse_scale")
_K_LIMIT = at.offset_slot(at.WORK, "k_limit")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_K = at.offset_slot(at.WORK, "k")
_K_BY_T = at.offset_slot(at.WORK, "k_by_T")
_K_BY_M = at.offset_slot(at.WORK, "k_by_M")
_REVERSE_SLOPE = at.offset_slot(at.WORK, "reverse_slope")
_NET = at.offset_slot(at.WORK, "net")
_CONCENTRATION = at.offset_slot(at.WORK, "concentration")
_BARE = at.offset_slot(at.WORK, "lump_bare")
_LUMP_FORWARD = at.offset_slot(at.WORK, "lump_forward")
_LUMP_REVERSE = at.offset_slot(at.WORK, "lump_reverse")
_PARTIAL = at.offset_slot(at.WORK, "partial")


@compiled
def smooth_power(c, p):
    """c^p with a smooth start below SMALLEST_CONCENTRATION, and its slope; odd in c for p > 0."""
    if p == 0.0:
        return 1.0, 0.0
    if p == 1.0:
        return c, 1.0
    size = c * c + SMALLEST_CONCENTRATION * SMALLEST_CONCENTRATION
    if p > 0.0:
        value = size ** (0.5 * (p - 1.0))
        return c * value, value * (1.0 + (p - 1.0) * c * c / size)
    value = size ** (0.5 * p)
    return value, p * value * c / size


@compiled
def driving_part(here, there, share):
    """φ(here, there), about here^share, and its derivatives by both."""
    if share == 1.0:
        return here, 1.0, 0.0
    mixed = SMALLEST_QUOTIENT * SMALLEST_QUOTIENT if share < 1.0 else 0.0
    size = here * here + mixed * there * there + SMALLEST_PRODUCT * SMALLEST_PRODUCT
    value = size ** (0.5 * (share - 1.0))
    bend = (share - 1.0) * value * here / size
    return here * value, value + bend * here, bend * mixed * there


@compiled
def _whole_power(x, count):
    total = 1.0
    for _ in range(count):
        total *= x
    return total


@compiled
def _sides(q, by, c, ints, floats, work):
    """M and N of lumped term q; where `by` is one of its entries, that side's derivative by the entry's concentration."""
    start, species, nu = view(ints, ints, _START), view(ints, ints, _SPECIES), view(floats, ints, _NU)
    scale, inverse = view(work, ints, _SCALE), view(work, ints, _INVERSE_SCALE)
    left, right = 1.0, 1.0
    if view(ints, ints, _DILUTED)[q] > 0:  # solution.py says why
        right = view(work, ints, _DILUTION)[view(ints, ints, _DILUTED)[q] - 1]
    for e in range(start[q], start[q + 1]):  # ΠE of the reactants first: the order in which nothing overflows early
        i, count = species[e], int(-nu[e])
        if count > 0:
            right *= _whole_power(scale[i], count)
            left *= count * _whole_power(c[i], count - 1) if e == by else _whole_power(c[i], count)
    for e in range(start[q], start[q + 1]):
        i, count = species[e], int(nu[e])
        if count > 0 and e == by:
            right *= count * inverse[i] * _whole_power(c[i] * inverse[i], count - 1)
        elif count > 0:
            right *= _whole_power(c[i] * inverse[i], count)
    return left, right


@compiled
def _front(q, by, c, ints, floats):
    """X of lumped term q; where `by` is one of its entries, its derivative by the entry's concentration."""
    start, species, power = view(ints, ints, _START), view(ints, ints, _SPECIES), view(floats, ints, _POWER)
    total = 1.0
    for e in range(start[q], start[q + 1]):
        value, slope = smooth_power(c[species[e]], power[e])
        total *= slope if e == by else value
    return total


@compiled
def _adsorption(q, c, ints, floats, work):
    """G of lumped term q and its derivative by the sum 1 + Σ K c^p."""
    start, species = view(ints, ints, _ADSORBED_START), view(ints, ints, _ADSORBED_SPECIES)
    expression, power = view(ints, ints, _ADSORBED_EXPRESSION), view(floats, ints, _ADSORBED_POWER)
    constant, exponent = view(work, ints, _K_LIMIT), view(floats, ints, _GROUP_POWER)[q]
    total = 1.0
    for e in range(start[q], start[q + 1]):
        value, _ = smooth_power(c[species[e]], power[e])
        total += constant[expression[e]] * value
    if total < SMALLEST_ADSORPTION:
        return SMALLEST_ADSORPTION ** -exponent, 0.0
    group = total**-exponent
    return group, -exponent * group / total


@compiled
def keep_plain(values, total, ints):
    """Sums over the mass-action terms alone, of the reactions that have lumped ones; `total`: (R) over all terms."""
    term, plain = view(ints, ints, _TERM), view(ints, ints, _PLAIN_TERM)
    reaction = view(ints, ints, _TERM_REACTION)
    for q in range(term.size):
        total[reaction[term[q]]] = 0.0
    for p in range(plain.size):
        total[reaction[plain[p]]] += values[plain[p]]


@compiled
def add_lumped_rates(c, ints, floats, work):
    """Adds the lumped terms to the net rates, and keeps their one-way rates; their k must be set."""
    term, reaction = view(ints, ints, _TERM), view(ints, ints, _TERM_REACTION)
    if term.size == 0:
        return
    k, share = view(work, ints, _K), view(floats, ints, _SHARE)
    net, bare = view(work, ints, _NET), view(work, ints, _BARE)
    forward, reverse = view(work, ints, _LUMP_FORWARD), view(work, ints, _LUMP_REVERSE)
    for q in range(term.size):
        t = term[q]
        left, right = _sides(q, -1, c, ints, floats, work)
        group, _ = _adsorption(q, c, ints, floats, work)
        front = _front(q, -1, c, ints, floats) * group
        ahead, back = driving_part(left, right, share[q])[0], driving_part(right, left, share[q])[0]
        bare[q] = front * (ahead - back)
        forward[q], reverse[q] = k[t] * (front * ahead), k[t] * (front * back)
        net[reaction[t]] += k[t] * bare[q]


@compiled
def add_lumped_ways(forward, reverse, ints, work):
    """Adds the one-way rates of the lumped terms to those of the reactions, (R) each."""
    term, reaction = view(ints, ints, _TERM), view(ints, ints, _TERM_REACTION)
    own_forward, own_reverse = view(work, ints, _LUMP_FORWARD), view(work, ints, _LUMP_REVERSE)
    for q in range(term.size):
        forward[reaction[term[q]]] += own_forward[q]
        reverse[reaction[term[q]]] += own_reverse[q]


@compiled
def add_lumped_slopes(by_T, ints, floats, work):
    """Adds ∂w/∂T to by_T (R), and sets ∂w/∂c of every entry; the rates and the slopes of k must be set."""
    c, term, reaction = view(work, ints, _CONCENTRATION), view(ints, ints, _TERM), view(ints, ints, _TERM_REACTION)
    k, k_by_T, reverse_slope = view(work, ints, _K), view(work, ints, _K_BY_T), view(work, ints, _REVERSE_SLOPE)
    bare, share = view(work, ints, _BARE), view(floats, ints, _SHARE)
    for q in range(term.size):
        t, j = term[q], reaction[term[q]]
        left, right = _sides(q, -1, c, ints, floats, work)
        group, by_sum = _adsorption(q, c, ints, floats, work)
        front = _front(q, -1, c, ints, floats)
        ahead, ahead_by_left, ahead_by_right = driving_part(left, right, share[q])
        back, back_by_right, back_by_left = driving_part(right, left, share[q])
        flow, by_left, by_right = ahead - back, ahead_by_left - back_by_left, ahead_by_right - back_by_right
        heating = _set_adsorbed(q, k[t] * front * flow * by_sum, c, ints, floats, work)
        flow_by_right = k[t] * group * front * by_right * right
        by_T[j] += bare[q] * k_by_T[t] + heating + flow_by_right * reverse_slope[j]
        _add_dilution(q, flow_by_right, ints, floats, work)
        _set_entries(q, k[t] * group, front, flow, by_left, by_right, c, ints, floats, work)


@compiled
def set_lumped_partners(by_terms, ints, work):
    """∂w/∂[M] of the lumped terms into their places among those of all terms, (T)."""
    term, by_M, bare = view(ints, ints, _TERM), view(work, ints, _K_BY_M), view(work, ints, _BARE)
    for q in range(term.size):
        by_terms[term[q]] = by_M[term[q]] * bare[q]


@compiled
def _add_dilution(q, by_log_right, ints, floats, work):
    """Adds what the total concentration does to N, where activities are mole fractions; by_log_right: ∂w/∂ln N."""
    place, dilution, out = view(ints, ints, _DILUTED)[q], view(work, ints, _DILUTION), view(work, ints, _PARTIAL)
    if place > 0:
        change = view(floats, ints, _CHANGE)[place - 1]
        out[out.size - ints[at.DILUTED] + place - 1] -= change * by_log_right * dilution[ints[at.DILUTED]]


@compiled
def _set_entries(q, k, front, flow, by_left, by_right, c, ints, floats, work):
    """∂w/∂c of the entries of lumped term q by X and by M or N."""
    start, nu, out = view(ints, ints, _START), view(floats, ints, _NU), view(work, ints, _PARTIAL)
    first = out.size - ints[at.DILUTED] - ints[at.LUMP_ENTRIES]
    for e in range(start[q], start[q + 1]):
        total = _front(q, e, c, ints, floats) * flow
        if nu[e] != 0.0:
            left, right = _sides(q, e, c, ints, floats, work)
            total += front * (by_left * left if nu[e] < 0.0 else by_right * right)
        out[first + e] = k * total


@compiled
def _set_adsorbed(q, by_sum, c, ints, floats, work):
    """∂w/∂c of the adsorbed species of lumped term q from ∂w/∂(1 + Σ K c^p); returns what the K's add to ∂w/∂T."""
    start, species = view(ints, ints, _ADSORBED_START), view(ints, ints, _ADSORBED_SPECIES)
    expression, power = view(ints, ints, _ADSORBED_EXPRESSION), view(floats, ints, _ADSORBED_POWER)
    constant, slope, out = view(work, ints, _K_LIMIT), view(work, ints, _K_SLOPE), view(work, ints, _PARTIAL)
    first = out.size - ints[at.DILUTED] - species.size
    heating = 0.0
    for e in range(start[q], start[q + 1]):
        value, by_c = smooth_power(c[species[e]], power[e])
        out[first + e] = by_sum * constant[expression[e]] * by_c
        heating += by_sum * constant[expression[e]] * slope[expression[e]] * value
    return heating


@compiled
def conductances(forward, reverse, ints, floats, work):
    """Turns the forward rates (R) of a state at equilibrium into Σ over terms of rate/σ [mol/(m3 s)].

    It is what the net rate answers to A/RT there: forward·[1 - exp(-A/(σRT))] = forward/σ·A/RT near A = 0.
    """
    term, reaction = view(ints, ints, _TERM), view(ints, ints, _TERM_REACTION)
    own, share = view(work, ints, _LUMP_FORWARD), view(floats, ints, _SHARE)
    for j in range(forward.size):
        forward[j] = (forward[j] * reverse[j]) ** 0.5
    for q in range(term.size):
        forward[reaction[term[q]]] += (share[q] - 1.0) * own[q]
