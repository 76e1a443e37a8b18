"""Fall-off: k between a low- and a high-pressure limit, and its derivatives.

Two groups: Lindemann's and Troe's, which published sets use by the hundred, and every other curve (further width rules,
Stewart, Larson and Golden's, chemically activated channels), so that the first group's loops ask no more questions.
rates/fall_off.py, rates/sri.py and rates/activated.py state the formulas.
"""

import math

import numpy as np

from ..compiled import compiled, span
from . import layout as at
from .elementary import LN10, SMALLEST, exp_array, in_groups, log_array
from .layout import view

SMALLEST_PARTNER = 1e-300
_SMALLEST_CENTRE = 1e-30
_LARGEST_EXPONENT = 700.0
_PER_LN10 = 1.0 / LN10

_FALL_TERM = at.offset_slot(at.INTS, "fall_term")
_FALL_LOW = at.offset_slot(at.INTS, "fall_low")
_FALL_GROUP = at.offset_slot(at.INTS, "fall_group")
_CURVE_TERM = at.offset_slot(at.INTS, "curve_term")
_CURVE_LOW = at.offset_slot(at.INTS, "curve_low")
_CURVE_GROUP = at.offset_slot(at.INTS, "curve_group")
_CURVE_WIDTH = at.offset_slot(at.INTS, "curve_width")
_CURVE_ACTIVATED = at.offset_slot(at.INTS, "curve_activated")
_FALL_PARAMETER = at.offset_slot(at.FLOATS, "fall_parameter")
_CURVE_PARAMETER = at.offset_slot(at.FLOATS, "curve_parameter")
_SEEN = at.offset_slot(at.WORK, "seen")
_LOG_K = at.offset_slot(at.WORK, "log_k")
_K_LIMIT = at.offset_slot(at.WORK, "k_limit")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_CENTRE_EXPONENT = at.offset_slot(at.WORK, "centre_exponent")
_CENTRE_PART = at.offset_slot(at.WORK, "centre_part")
_LOG_CENTRE = at.offset_slot(at.WORK, "log_centre")
_LOG_CENTRE_SLOPE = at.offset_slot(at.WORK, "log_centre_slope")
_CENTRE = at.offset_slot(at.WORK, "centre")
_RATIO = at.offset_slot(at.WORK, "fall_ratio")
_LOG_RATIO = at.offset_slot(at.WORK, "fall_log_ratio")
_SHARE = at.offset_slot(at.WORK, "fall_share")
_FALL_PARTNER = at.offset_slot(at.WORK, "fall_partner")
_REDUCED = at.offset_slot(at.WORK, "fall_reduced")
_BY_REDUCED = at.offset_slot(at.WORK, "fall_by_reduced")
_BY_CENTRE = at.offset_slot(at.WORK, "fall_by_centre")
_LOG_BROADENING = at.offset_slot(at.WORK, "log_broadening")
_BROADENING = at.offset_slot(at.WORK, "broadening")
_CURVE_CENTRE = at.offset_slot(at.WORK, "curve_centre")
_CURVE_CENTRE_SLOPE = at.offset_slot(at.WORK, "curve_centre_slope")
_CURVE_FACTOR = at.offset_slot(at.WORK, "curve_factor")
_PARTNER = at.offset_slot(at.WORK, "partner")
_LOG_PARTNER = at.offset_slot(at.WORK, "log_partner")
_K = at.offset_slot(at.WORK, "k")
_K_BY_T = at.offset_slot(at.WORK, "k_by_T")
_K_BY_M = at.offset_slot(at.WORK, "k_by_M")


@compiled
def set_centre_exponents(T, ints, floats, work):
    """Exponents of the parts of every F_cent at T [K]; parameters: (4 L) a, 1/T***, 1/T*, T**, one kind after another."""
    parameter, exponent = view(floats, ints, _FALL_PARAMETER), view(work, ints, _CENTRE_EXPONENT)
    n = exponent.size // 3
    for q in range(2 * n):
        exponent[q] = -T * parameter[n + q]
    inverse = 1.0 / T
    for q in range(n):
        exponent[2 * n + q] = -parameter[3 * n + q] * inverse


@compiled
def set_centres(T, ints, floats, work):
    """What of every fall-off hangs on T [K] alone: log10 F_cent, k_0/k_inf and its log10; the exponentials must be set.

    Lindemann's F_cent comes out as 1 exactly.
    """
    parameter, centre = view(floats, ints, _FALL_PARAMETER), view(work, ints, _CENTRE)
    exponent, parts = view(work, ints, _CENTRE_EXPONENT), view(work, ints, _CENTRE_PART)
    n = centre.size
    for e in range(parts.size):
        parts[e] = parts[e] if exponent[e] >= SMALLEST else 0.0  # a published T* of 1e-30 means zero, its slope too
    for q in range(n):
        a = parameter[q]
        centre[q] = max((1.0 - a) * parts[q] + a * parts[n + q] + parts[2 * n + q], _SMALLEST_CENTRE)
    _log_in_groups(work, ints, _CENTRE, _LOG_CENTRE)
    log_centre = view(work, ints, _LOG_CENTRE)
    for q in range(n):
        log_centre[q] *= _PER_LN10
    _set_ratios(ints, work)
    _set_curve_centres(T, ints, floats, work)


@compiled
def _log_in_groups(work, ints, given, result):
    values = in_groups(work, np.int64(ints[given]), np.int64(ints[given + 1]))
    first = np.int64(ints[result])
    log_array(values, span(work, first, first + values.size))


@compiled
def set_centre_slopes(T, ints, floats, work):
    """d log10 F_cent/dT [1/K] of every fall-off; `set_centres` must stand for T."""
    parameter, centre = view(floats, ints, _FALL_PARAMETER), view(work, ints, _CENTRE)
    slope, parts = view(work, ints, _LOG_CENTRE_SLOPE), view(work, ints, _CENTRE_PART)
    n = centre.size
    for q in range(n):
        a, value = parameter[q], centre[q]
        by_T = (parts[2 * n + q] * parameter[3 * n + q] / (T * T) - (1.0 - a) * parts[q] * parameter[n + q]
                - a * parts[n + q] * parameter[2 * n + q])
        slope[q] = by_T / (value * LN10) if value > _SMALLEST_CENTRE else 0.0


@compiled
def _set_ratios(ints, work):
    """k_0/k_inf of every fall-off and its log10."""
    log_k, limit = view(work, ints, _LOG_K), view(work, ints, _K_LIMIT)
    term, low = view(ints, ints, _FALL_TERM), view(ints, ints, _FALL_LOW)
    ratio, log_ratio, high = view(work, ints, _RATIO), view(work, ints, _LOG_RATIO), view(work, ints, _SHARE)
    for q in range(term.size):
        e, t = low[q], term[q]
        ratio[q], high[q] = limit[e], limit[t]
        log_ratio[q] = (log_k[e] - log_k[t]) * _PER_LN10
    for q in range(ratio.size):  # apart, since looking up places keeps the divisions from being done by the vector
        ratio[q] /= high[q]


@compiled
def _set_curve_centres(T, ints, floats, work):
    """log10 of the centre, its slope, and ln of the factor beside it, of every other curve."""
    parameter, centre = view(floats, ints, _CURVE_PARAMETER), view(work, ints, _CURVE_CENTRE)
    slope, factor = view(work, ints, _CURVE_CENTRE_SLOPE), view(work, ints, _CURVE_FACTOR)
    log_T = math.log(T) if centre.size > 0 else 0.0
    for u in range(centre.size):
        p = parameter[8 * u : 8 * u + 8]
        x1, x2 = p[0] * math.exp(-T * p[1]), p[2] * math.exp(-T * p[3])
        x3 = p[4] * math.exp(min(-p[5] / T, _LARGEST_EXPONENT))
        value, by_T = x1 + x2 + x3, x3 * p[5] / (T * T) - x1 * p[1] - x2 * p[3]
        if value < _SMALLEST_CENTRE:
            value, by_T = _SMALLEST_CENTRE, 0.0
        centre[u] = math.log(value) / LN10
        slope[u] = by_T / (value * LN10)
        factor[u] = p[6] + p[7] * log_T


@compiled
def _broadening(log_reduced, log_centre):
    """log10 F of Troe's form and its derivatives by log10 P_r and by log10 F_cent (Gilbert, Luther, Troe 1983)."""
    x = log_reduced - 0.4 - 0.67 * log_centre
    n = 0.75 - 1.27 * log_centre
    d = n - 0.14 * x
    s = d * d + x * x
    q = d * d / s
    twist = 2.0 * log_centre * d * x / (s * s)
    return log_centre * q, -twist * n, q + twist * (0.67 * d - 1.1762 * x)


@compiled
def _width(rule, log_reduced, log_centre):
    """log10 F beside its factor, and derivatives as `_broadening`, by a rule: 0 Troe, 1 IUPAC, 2 width 1 (JPL, SRI)."""
    if rule == 0:
        return _broadening(log_reduced, log_centre)
    n, n_slope = (0.75 - 1.27 * log_centre, -1.27) if rule == 1 else (1.0, 0.0)
    s = n * n + log_reduced * log_reduced
    q = n * n / s
    twist = 2.0 * log_centre * n * log_reduced / (s * s)
    return log_centre * q, -twist * n, q + twist * log_reduced * n_slope


@compiled
def fall_off_constants(ints, floats, work):
    """k of every term in fall-off, from the limits at this temperature and the partners."""
    partner, log_partner = view(work, ints, _PARTNER), view(work, ints, _LOG_PARTNER)
    group, log_ratio = view(ints, ints, _FALL_GROUP), view(work, ints, _LOG_RATIO)
    m, reduced = view(work, ints, _FALL_PARTNER), view(work, ints, _REDUCED)
    for q in range(m.size):
        m[q] = partner[group[q]]
        reduced[q] = log_ratio[q] + log_partner[group[q]] * _PER_LN10
    log_factor, factor = view(work, ints, _LOG_BROADENING), view(work, ints, _BROADENING)
    _log_broadenings(reduced, view(work, ints, _LOG_CENTRE), log_factor)
    _exp_in_groups(work, ints, _LOG_BROADENING, _BROADENING)
    k, limit, ratio = view(work, ints, _K), view(work, ints, _K_LIMIT), view(work, ints, _RATIO)
    term, low, share = view(ints, ints, _FALL_TERM), view(ints, ints, _FALL_LOW), view(work, ints, _SHARE)
    for q in range(m.size):
        share[q] = m[q] / (1.0 + m[q] * ratio[q]) * factor[q]
    for q in range(m.size):
        k[term[q]] = limit[low[q]] * share[q]
    _curve_constants(ints, floats, work)


@compiled
def _exp_in_groups(work, ints, given, result):
    values = in_groups(work, np.int64(ints[given]), np.int64(ints[given + 1]))
    first = np.int64(ints[result])
    exp_array(values, span(work, first, first + values.size))


@compiled
def _log_broadenings(reduced, log_centre, out):
    """ln F of many; the value alone of `_broadening`."""
    for q in range(out.size):
        x = reduced[q] - 0.4 - 0.67 * log_centre[q]
        d = 0.75 - 1.27 * log_centre[q] - 0.14 * x
        out[q] = LN10 * log_centre[q] * (d * d / (d * d + x * x))


@compiled
def _curve_constants(ints, floats, work):
    """k of every term on another curve."""
    k, limit, partner = view(work, ints, _K), view(work, ints, _K_LIMIT), view(work, ints, _PARTNER)
    term, low, group = view(ints, ints, _CURVE_TERM), view(ints, ints, _CURVE_LOW), view(ints, ints, _CURVE_GROUP)
    rule, activated = view(ints, ints, _CURVE_WIDTH), view(ints, ints, _CURVE_ACTIVATED)
    log_k, log_partner = view(work, ints, _LOG_K), view(work, ints, _LOG_PARTNER)
    centre, factor = view(work, ints, _CURVE_CENTRE), view(work, ints, _CURVE_FACTOR)
    for u in range(term.size):
        t, e, m = term[u], low[u], partner[group[u]]
        log_reduced = log_k[e] + log_partner[group[u]] - log_k[t]
        log_F, _, _ = _width(rule[u], log_reduced / LN10, centre[u])
        F = math.exp(LN10 * log_F + factor[u])
        k[t] = limit[e] * (1.0 if activated[u] == 1 else m) / (1.0 + m * limit[e] / limit[t]) * F


@compiled
def fall_off_slopes(ints, floats, work):
    """dk/dT at constant partner and dk/d[M] of every term in fall-off; k must be set."""
    k, by_T, by_M = view(work, ints, _K), view(work, ints, _K_BY_T), view(work, ints, _K_BY_M)
    limit, slope, ratio = view(work, ints, _K_LIMIT), view(work, ints, _K_SLOPE), view(work, ints, _RATIO)
    term, low, m = view(ints, ints, _FALL_TERM), view(ints, ints, _FALL_LOW), view(work, ints, _FALL_PARTNER)
    centre_slope, factor = view(work, ints, _LOG_CENTRE_SLOPE), view(work, ints, _BROADENING)
    by_reduced, by_centre = view(work, ints, _BY_REDUCED), view(work, ints, _BY_CENTRE)
    _broadening_slopes(view(work, ints, _REDUCED), view(work, ints, _LOG_CENTRE), by_reduced, by_centre)
    for q in range(m.size):
        t, e = term[q], low[q]
        alone = 1.0 / (1.0 + m[q] * ratio[q])
        response = alone + (by_reduced[q] if m[q] > SMALLEST_PARTNER else 0.0)  # d ln k/d ln P_r
        by_T[t] = k[t] * (slope[t] + (slope[e] - slope[t]) * response + LN10 * by_centre[q] * centre_slope[q])
        by_M[t] = limit[e] * alone * factor[q] * response
    _curve_slopes(ints, floats, work)


@compiled
def _broadening_slopes(reduced, log_centre, by_reduced, by_centre):
    """Derivatives of log10 F by log10 P_r and by log10 F_cent, of many."""
    for q in range(reduced.size):
        _, by_reduced[q], by_centre[q] = _broadening(reduced[q], log_centre[q])


@compiled
def _curve_slopes(ints, floats, work):
    """dk/dT and dk/d[M] of every term on another curve.

    An activated channel is the same curve without its factor [M], so d ln k/d ln P_r is less by one.
    """
    k, by_T, by_M = view(work, ints, _K), view(work, ints, _K_BY_T), view(work, ints, _K_BY_M)
    limit, slope, partner = view(work, ints, _K_LIMIT), view(work, ints, _K_SLOPE), view(work, ints, _PARTNER)
    term, low, group = view(ints, ints, _CURVE_TERM), view(ints, ints, _CURVE_LOW), view(ints, ints, _CURVE_GROUP)
    rule, activated = view(ints, ints, _CURVE_WIDTH), view(ints, ints, _CURVE_ACTIVATED)
    log_k, log_partner = view(work, ints, _LOG_K), view(work, ints, _LOG_PARTNER)
    centre, centre_slope = view(work, ints, _CURVE_CENTRE), view(work, ints, _CURVE_CENTRE_SLOPE)
    parameter, T = view(floats, ints, _CURVE_PARAMETER), view(work, ints, _SEEN)[0]
    factor = view(work, ints, _CURVE_FACTOR)
    for u in range(term.size):
        t, e, m = term[u], low[u], partner[group[u]]
        log_reduced = log_k[e] + log_partner[group[u]] - log_k[t]
        log_F, by_reduced, by_centre = _width(rule[u], log_reduced / LN10, centre[u])
        by_reduced = by_reduced if m > SMALLEST_PARTNER else 0.0
        share = 1.0 / (1.0 + m * limit[e] / limit[t])
        by_T[t] = k[t] * (slope[t] + (slope[e] - slope[t]) * (share + by_reduced)
                          + LN10 * by_centre * centre_slope[u] + parameter[8 * u + 7] / T)
        if activated[u] == 1:
            by_M[t] = k[t] * (by_reduced / max(m, SMALLEST_PARTNER) - share * limit[e] / limit[t])
        else:
            by_M[t] = limit[e] * share * math.exp(LN10 * log_F + factor[u]) * (share + by_reduced)
