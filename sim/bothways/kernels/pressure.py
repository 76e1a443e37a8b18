"""Rate constants that depend on the pressure of the gas: tables and Chebyshev series, and their derivatives.

The pressure is C R T with C the total that partners see, so that one statement serves all vessels: what k answers to
C goes through the border of the Jacobian, and where the pressure is held, C = p/(R T), both parts cancel in sum.
rates/pressure_table.py and rates/chebyshev.py state the formulas.
"""

import math

from ..compiled import compiled
from ..constants import GAS_CONSTANT as R
from . import layout as at
from .elementary import LARGEST, SMALLEST
from .layout import view

_SMALLEST_PRESSURE = 1e-300
_SMALLEST_SUM = 1e-300

_TABLE_TERM = at.offset_slot(at.INTS, "table_term")
_TABLE_START = at.offset_slot(at.INTS, "table_start")
_NODE_START = at.offset_slot(at.INTS, "node_start")
_ROW_EXPRESSION = at.offset_slot(at.INTS, "row_expression")
_SERIES_TERM = at.offset_slot(at.INTS, "series_term")
_SERIES_ROWS = at.offset_slot(at.INTS, "series_rows")
_SERIES_START = at.offset_slot(at.INTS, "series_start")
_COLUMN_START = at.offset_slot(at.INTS, "column_start")
_NODE_LOG_P = at.offset_slot(at.FLOATS, "node_log_p")
_ROW_SIGN = at.offset_slot(at.FLOATS, "row_sign")
_SERIES_WINDOW = at.offset_slot(at.FLOATS, "series_window")
_COLUMN_COEFFICIENT = at.offset_slot(at.FLOATS, "column_coefficient")
_SEEN = at.offset_slot(at.WORK, "seen")
_LOG_K = at.offset_slot(at.WORK, "log_k")
_K_LIMIT = at.offset_slot(at.WORK, "k_limit")
_K_SLOPE = at.offset_slot(at.WORK, "k_slope")
_PRESSURE = at.offset_slot(at.WORK, "pressure")
_COLUMN = at.offset_slot(at.WORK, "column")
_COLUMN_SLOPE = at.offset_slot(at.WORK, "column_slope")
_K = at.offset_slot(at.WORK, "k")
_K_BY_T = at.offset_slot(at.WORK, "k_by_T")
_K_BY_M = at.offset_slot(at.WORK, "k_by_M")


@compiled
def _reduced(value, low, high):
    """The place of a value between the ends of a window, -1…1, and its slope, 0 outside."""
    x = (2.0 * value - low - high) / (high - low)
    if abs(x) > 1.0:
        return math.copysign(1.0, x), 0.0
    return x, 2.0 / (high - low)


@compiled
def set_columns(T, ints, floats, work):
    """Sums of every Chebyshev series over its powers in 1/T, column by column, with slopes, as they are at T [K]."""
    rows, start, first = view(ints, ints, _SERIES_ROWS), view(ints, ints, _SERIES_START), view(ints, ints, _COLUMN_START)
    window, c = view(floats, ints, _SERIES_WINDOW), view(floats, ints, _COLUMN_COEFFICIENT)
    column, slope = view(work, ints, _COLUMN), view(work, ints, _COLUMN_SLOPE)
    for h in range(rows.size):
        x, x_slope = _reduced(1.0 / T, window[4 * h], window[4 * h + 1])
        for q in range(start[h], start[h + 1]):
            column[q], by_x = _chebyshev(c[first[q] : first[q] + rows[h]], x)
            slope[q] = -by_x * x_slope / (T * T)


@compiled
def _chebyshev(c, x):
    """Σ c_n φ_n(x) and its derivative by x, from the recurrence of the polynomials."""
    value, slope = c[0], 0.0
    below, below_slope, this, this_slope = 1.0, 0.0, x, 1.0
    for n in range(1, c.size):
        value += c[n] * this
        slope += c[n] * this_slope
        below, this, below_slope, this_slope = (this, 2.0 * x * this - below, this_slope,
                                                2.0 * this + 2.0 * x * this_slope - below_slope)
    return value, slope


@compiled
def _series(h, log_p, ints, floats, work):
    """ln k of a Chebyshev series and its derivatives by T and by ln p."""
    start, window = view(ints, ints, _SERIES_START), view(floats, ints, _SERIES_WINDOW)
    column, slope = view(work, ints, _COLUMN), view(work, ints, _COLUMN_SLOPE)
    y, y_slope = _reduced(log_p, window[4 * h + 2], window[4 * h + 3])
    value, by_y = _chebyshev(column[start[h] : start[h + 1]], y)
    by_T, _ = _chebyshev(slope[start[h] : start[h + 1]], y)
    return value, by_T, by_y * y_slope


@compiled
def _node(node, ints, floats, work):
    """ln k and d ln k/dT at one pressure of a table: its rows add up."""
    start, expression = view(ints, ints, _NODE_START), view(ints, ints, _ROW_EXPRESSION)
    k_slope = view(work, ints, _K_SLOPE)
    first, last = start[node], start[node + 1]
    if last == first + 1:
        return view(work, ints, _LOG_K)[expression[first]], k_slope[expression[first]]
    limit, sign = view(work, ints, _K_LIMIT), view(floats, ints, _ROW_SIGN)
    total, by_T = 0.0, 0.0
    for row in range(first, last):
        value = sign[row] * limit[expression[row]]
        total += value
        by_T += value * k_slope[expression[row]]
    if not total > _SMALLEST_SUM:  # beyond the range in which the file was checked
        return SMALLEST, 0.0
    return math.log(total), by_T / total


@compiled
def _table(q, log_p, ints, floats, work):
    """ln k of a pressure table and its derivatives by T and by ln p."""
    start, node_log_p = view(ints, ints, _TABLE_START), view(floats, ints, _NODE_LOG_P)
    node, last = start[q], start[q + 1] - 1
    while node < last and node_log_p[node + 1] <= log_p:
        node += 1
    low, low_by_T = _node(node, ints, floats, work)
    if node == last or log_p < node_log_p[node]:
        return low, low_by_T, 0.0
    high, high_by_T = _node(node + 1, ints, floats, work)
    span = node_log_p[node + 1] - node_log_p[node]
    share = (log_p - node_log_p[node]) / span
    return low + share * (high - low), low_by_T + share * (high_by_T - low_by_T), (high - low) / span


@compiled
def _exp(x):
    return math.exp(min(max(x, SMALLEST), LARGEST))


@compiled
def pressure_constants(total, ints, floats, work):
    """k of every term that depends on pressure; total: concentration [mol/m3] that makes the pressure."""
    table, series = view(ints, ints, _TABLE_TERM), view(ints, ints, _SERIES_TERM)
    if table.size + series.size == 0:
        return
    k, pressure = view(work, ints, _K), view(work, ints, _PRESSURE)
    pressure[0] = max(total * R * view(work, ints, _SEEN)[0], _SMALLEST_PRESSURE)
    log_p = math.log(pressure[0])
    for q in range(table.size):
        value, _, _ = _table(q, log_p, ints, floats, work)
        k[table[q]] = _exp(value)
    for h in range(series.size):
        value, _, _ = _series(h, log_p, ints, floats, work)
        k[series[h]] = _exp(value)


@compiled
def pressure_slopes(ints, floats, work):
    """dk/dT at constant total and dk/dC of every term that depends on pressure; k must be set."""
    table, series = view(ints, ints, _TABLE_TERM), view(ints, ints, _SERIES_TERM)
    if table.size + series.size == 0:
        return
    log_p = math.log(view(work, ints, _PRESSURE)[0])
    for q in range(table.size):
        _, by_T, by_log_p = _table(q, log_p, ints, floats, work)
        _set_slopes(table[q], by_T, by_log_p, ints, work)
    for h in range(series.size):
        _, by_T, by_log_p = _series(h, log_p, ints, floats, work)
        _set_slopes(series[h], by_T, by_log_p, ints, work)


@compiled
def _set_slopes(term, by_T, by_log_p, ints, work):
    """The slopes of one term from those of ln k, p = C R T."""
    k, T = view(work, ints, _K)[term], view(work, ints, _SEEN)[0]
    view(work, ints, _K_BY_T)[term] = k * (by_T + by_log_p / T)
    view(work, ints, _K_BY_M)[term] = k * by_log_p * R * T / view(work, ints, _PRESSURE)[0]
