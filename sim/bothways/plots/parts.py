"""What a figure is made of, before anything is drawn: curves, panels, views, marks."""

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .style import BLACK

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Curve:
    """One line of a panel: its name as shown, in lines, and its values (nt); one without a name is not labelled."""

    name: str
    values: Array
    colour: str = BLACK
    dashes: Any = "-"


@dataclass(frozen=True)
class Panel:
    """A row of a figure: label and limits of its ordinate, its curves, its height [mm, on a page]."""

    label: str
    curves: tuple[Curve, ...]
    limits: tuple[float, float]
    height: float
    scale: str = "linear"
    named: bool = True  # whether its curves are labelled by their names
    ends: bool = True  # whether the curves' right ends tell them apart
    zero: bool = False  # whether zero is marked by a line
    linear_within: float = 1.0  # of a scale "symlog": up to here it is linear


@dataclass(frozen=True)
class View:
    """A column of a figure: a stretch of the abscissa (SI) and how its axis shows it."""

    start: float
    end: float
    label: str
    scale: str = "linear"
    origin: float = 0.0  # what the axis counts from
    unit: float = 1.0  # size of the axis' unit

    def on_axis(self, values: Array | float) -> Array:
        """Values of the abscissa as numbers on the axis."""
        return (np.asarray(values, dtype=np.float64) - self.origin) / self.unit


def power_of_ten(k: int) -> str:
    """10ᵏ."""
    return "10" + str(k).translate(str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"))
