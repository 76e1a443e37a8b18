"""The common shape of every polynomial form: ranges of cp(T)/R over the powers -2…4 with two integration constants.

cp/R = Σ a_k T^(k-3), k = 1…7; h/RT and s/R follow with the constants b1 and b2 (B.J. McBride, M.J. Zehe,
S. Gordon, NASA/TP-2002-211556, 2002, eqs. 1-3). The 7-coefficient form, Shomate's and a constant heat capacity
are special cases, so one compiled function serves them all.
"""

from dataclasses import dataclass

import numpy as np

N_COEFFICIENTS = 9
LARGEST = 1e6
"""cp/R, h/RT and s/R larger than this are taken for slips [-]."""
LIMITS = 1.0, 1e5
"""Temperatures [K] beyond which nothing is evaluated."""


@dataclass(frozen=True)
class Ranges:
    """Consecutive temperature ranges of one species.

    boundaries : (n + 1,) temperatures [K], rising.
    rows : (n, 9) coefficients a1…a7, b1, b2.
    """

    boundaries: np.ndarray
    rows: np.ndarray


def cp_h_s(row: np.ndarray, temperature: float) -> tuple[float, float, float]:
    """cp/R, h/RT and s/R [-] of one row at a temperature [K]."""
    cp, h, s = cp_h_s_of(row, np.float64(temperature))
    return float(cp), float(h), float(s)


def cp_h_s_of(rows: np.ndarray, temperatures: np.ndarray | np.float64) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """cp/R, h/RT and s/R [-] of rows (…, 9) at temperatures (…) [K]."""
    a, T, log_T = np.moveaxis(rows, -1, 0), temperatures, np.log(temperatures)
    t1, t2, t4, t5, t6, t7 = a[0] / (T * T), a[1] / T, a[3] * T, a[4] * T**2, a[5] * T**3, a[6] * T**4
    cp = t1 + t2 + a[2] + t4 + t5 + t6 + t7
    h = -t1 + t2 * log_T + a[2] + t4 / 2 + t5 / 3 + t6 / 4 + t7 / 5 + a[7] / T
    s = -t1 / 2 - t2 + a[2] * log_T + t4 + t5 / 2 + t6 / 3 + t7 / 4 + a[8]
    return cp, h, s


def at(ranges: Ranges, temperature: float) -> tuple[float, float, float]:
    """cp/R, h/RT and s/R [-] at a temperature [K]; beyond the ends as `extended` says."""
    whole = extended(ranges)
    k = int(np.searchsorted(whole.boundaries[1:-1], temperature, side="right"))
    return cp_h_s(whole.rows[k], temperature)


@dataclass(frozen=True)
class Shift:
    """What closing one join changed: at T [K], h/RT and s/R of the upper range [-]."""

    temperature: float
    h: float
    s: float


def closed(ranges: Ranges) -> tuple[Ranges, tuple[Shift, ...]]:
    """The ranges with h and s continuous, made by shifting b1 and b2 of each upper range in turn."""
    rows, shifts = ranges.rows.copy(), []
    for k, T in enumerate(ranges.boundaries[1:-1]):
        _, h_below, s_below = cp_h_s(rows[k], T)
        _, h_above, s_above = cp_h_s(rows[k + 1], T)
        shifts.append(Shift(float(T), h_below - h_above, s_below - s_above))
        rows[k + 1, 7] += (h_below - h_above) * T
        rows[k + 1, 8] += s_below - s_above
    return Ranges(ranges.boundaries, rows), tuple(shifts)


def fault(ranges: Ranges, least_cp: float) -> str:
    """What makes ranges unusable: cp/R not above `least_cp`, values not finite or absurd; empty if nothing."""
    for k, row in enumerate(ranges.rows):
        low, high = np.clip(ranges.boundaries[k : k + 2], *LIMITS)
        for T in np.linspace(low, high, 5):
            values = dict(zip(("cp/R", "h/RT", "s/R"), cp_h_s(row, T), strict=True))
            wrong = [name for name, value in values.items() if not abs(value) < LARGEST]
            if wrong or values["cp/R"] <= least_cp:
                name = wrong[0] if wrong else "cp/R"
                return f"{name} is {values[name]:.4g} at {T:.4g} K"
    return ""


def extended(ranges: Ranges) -> Ranges:
    """The ranges with one of constant cp on either side (h and s continuous): 0 to infinity [K]."""
    low, high = ranges.boundaries[0], ranges.boundaries[-1]
    inner, rows = list(ranges.boundaries), [ranges.rows]
    if low > 0:
        rows.insert(0, _constant_row(ranges.rows[0], low))
        inner.insert(0, 0.0)
    if np.isfinite(high):
        rows.append(_constant_row(ranges.rows[-1], high))
        inner.append(np.inf)
    return Ranges(np.array(inner), np.vstack(rows))


def _constant_row(row: np.ndarray, temperature: float) -> np.ndarray:
    return constant_row(temperature, *cp_h_s(row, temperature))


def constant_row(temperature: float, cp: float, h: float, s: float) -> np.ndarray:
    """The row of a constant cp/R that takes the values h/RT and s/R at a temperature [K]; shape (9,)."""
    row = np.zeros(N_COEFFICIENTS)
    row[2] = cp
    row[7] = (h - cp) * temperature
    row[8] = s - cp * np.log(temperature)
    return row
