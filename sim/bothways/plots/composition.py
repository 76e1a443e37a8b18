"""Panels of mole fractions, and of a state variable: ordinates that suit their curves."""

import math
from collections.abc import Sequence

from .parts import Array, Curve, Panel, power_of_ten

CHANGING = 1e-3
"""Temperature and pressure are drawn if they change by more than this share of the start [-]."""
DECADES = 7
"""The most decades of a logarithmic panel."""
HEIGHT = 38.0
"""Of a panel of mole fractions [mm, on a page]."""


def state_panel(label: str, values: Array, height: float) -> Panel | None:
    """A panel of one state variable; none if it does not change."""
    low, high = float(values.min()), float(values.max())
    if not high - low > CHANGING * abs(float(values[0])):
        return None
    rim = 0.06 * (high - low)
    return Panel(label, (Curve(label, values),), (low - rim, high + rim), height, named=False)


def linear_panel(curves: Sequence[Curve]) -> Panel:
    """From zero; small fractions as multiples of a power of ten."""
    top = max(float(curve.values.max()) for curve in curves)
    k = math.floor(math.log10(top)) if 0 < top < 0.02 else 0
    scaled = tuple(Curve(c.name, c.values / 10.0**k, c.colour, c.dashes) for c in curves)
    label = f"mole fraction / {power_of_ten(k)}" if k else "mole fraction"
    high = 1.06 * (top or 1.0) / 10.0**k
    return Panel(label, scaled, (-0.02 * high, high), HEIGHT)


def log_panel(curves: Sequence[Curve]) -> Panel | None:
    """From above the largest peak to two decades below the smallest one."""
    if not curves:
        return None
    peaks = [math.log10(float(curve.values.max())) for curve in curves]
    high = math.ceil(max(peaks) + 0.15)
    low = max(min(math.floor(min(peaks)) - 2, high - 4), high - DECADES)
    return Panel("mole fraction", tuple(curves), (10.0**low, 10.0**high), HEIGHT, "log")
