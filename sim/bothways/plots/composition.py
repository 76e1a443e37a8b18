"""Panels of mole fractions, and of a state variable: ordinates that suit their curves."""

import math
from collections.abc import Sequence

from .parts import Array, Curve, Panel, power_of_ten

CHANGING = 1e-3
"""Temperature and pressure are drawn if they change by more than this share of the start [-]."""
FRACTION, CONCENTRATION = ("mole fraction", ""), ("concentration", "mol/L")
"""What the composition is drawn as, and its unit."""
DECADES = 7
"""The most decades of a logarithmic panel."""
HEIGHT = 38.0
"""Of a panel of the composition [mm, on a page]."""


def state_panel(label: str, values: Array, height: float) -> Panel | None:
    """A panel of one state variable; none if it does not change."""
    low, high = float(values.min()), float(values.max())
    if not high - low > CHANGING * abs(float(values[0])):
        return None
    rim = 0.06 * (high - low)
    return Panel(label, (Curve(label, values),), (low - rim, high + rim), height, named=False)


def linear_panel(curves: Sequence[Curve], quantity: tuple[str, str] = FRACTION) -> Panel:
    """From zero; small values as multiples of a power of ten."""
    top = max(float(curve.values.max()) for curve in curves)
    k = math.floor(math.log10(top)) if 0 < top < 0.02 else 0
    scaled = tuple(Curve(c.name, c.values / 10.0**k, c.colour, c.dashes) for c in curves)
    label = _label(quantity, power_of_ten(k) if k else "")
    high = 1.06 * (top or 1.0) / 10.0**k
    return Panel(label, scaled, (-0.02 * high, high), HEIGHT)


def _label(quantity: tuple[str, str], power: str) -> str:
    name, unit = quantity
    scale = " ".join(filter(None, (power, unit)))
    return f"{name} / {f'({scale})' if unit else scale}" if scale else name


def log_panel(curves: Sequence[Curve], quantity: tuple[str, str] = FRACTION) -> Panel | None:
    """From above the largest peak to two decades below the smallest one."""
    if not curves:
        return None
    peaks = [math.log10(float(curve.values.max())) for curve in curves]
    high = math.ceil(max(peaks) + 0.15)
    low = max(min(math.floor(min(peaks)) - 2, high - 4), high - DECADES)
    return Panel(_label(quantity, ""), tuple(curves), (10.0**low, 10.0**high), HEIGHT, "log")
