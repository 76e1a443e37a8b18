"""The course of a run: temperature, pressure and composition against time."""

import math
from collections.abc import Sequence

import numpy as np
from matplotlib.figure import Figure

from ..outfile import StrPath
from ..trajectory import Trajectory
from . import style
from .labels import formula
from .panels import draw_panels
from .parts import Array, Curve, Panel, power_of_ten
from .saving import check_picture, save
from .selection import Selection, selected
from .views import time_views
from .words import instants, words

CHANGING = 1e-3
"""Temperature and pressure are drawn if they change by more than this share of the start [-]."""
DECADES = 7
"""The most decades of a logarithmic panel."""
HEIGHTS = {"temperature": 24.0, "pressure": 21.0, "composition": 38.0}
"""Of panels [mm, on a page]."""
PRESSURE_UNITS = (("bar", 1e5, 1e4), ("kPa", 1e3, 1e3), ("Pa", 1.0, 0.0))
"""Name, size [Pa], and the smallest highest pressure [Pa] for which it serves."""


@style.styled
def course(trajectory: Trajectory, species: Sequence[str] | None = None, time_axis: str | None = None,
           width: str = "page", between: tuple[float, float] | None = None) -> Figure:
    """The course of a run as a figure.

    Parameters
    ----------
    species : names; those that matter if none are given.
    time_axis : "linear" or "log", over the whole run; chosen by the course if not given (see `views`).
    width : "page" (180 mm) or "column" (85 mm).
    between : two times [s], to draw that stretch alone.
    """
    size = style.size_named(width)
    chosen = selected(trajectory, species)
    panels = _panels(trajectory, chosen)
    views = time_views(trajectory.time, panels, trajectory.milestones, time_axis, between)
    left_out = [_shown_name(trajectory, k) for k in chosen.diluents]
    texts = words(trajectory, left_out, views[0])
    return draw_panels(trajectory.time, panels, views, size, texts, instants(trajectory.milestones))


def save_course(trajectory: Trajectory, path: StrPath, replace: bool = False, species: Sequence[str] | None = None,
                time_axis: str | None = None, width: str = "page", between: tuple[float, float] | None = None) -> None:
    """Draws the course and writes it as PNG, SVG or PDF, by the suffix."""
    check_picture(path, replace)
    save(course(trajectory, species, time_axis, width, between), path, replace)


def _shown_name(trajectory: Trajectory, k: int) -> str:
    return formula(trajectory.species[k], float(trajectory.molar_mass[k]))


def _panels(trajectory: Trajectory, chosen: Selection) -> list[Panel]:
    styles = style.line_styles()
    major, trace = ([Curve(_shown_name(trajectory, k), trajectory.mole_fraction[:, k], *next(styles)) for k in some]
                    for some in (chosen.major, chosen.trace))
    state = (_state_panel("temperature / K", trajectory.temperature, HEIGHTS["temperature"]), _pressure_panel(trajectory))
    return [panel for panel in (*state, _linear_panel(major), _log_panel(trace)) if panel]


def _pressure_panel(trajectory: Trajectory) -> Panel | None:
    highest = float(trajectory.pressure.max())
    name, unit = next((name, unit) for name, unit, least in PRESSURE_UNITS if highest >= least)
    return _state_panel(f"pressure / {name}", trajectory.pressure / unit, HEIGHTS["pressure"])


def _state_panel(label: str, values: Array, height: float) -> Panel | None:
    """A panel of one state variable; none if it does not change."""
    low, high = float(values.min()), float(values.max())
    if not high - low > CHANGING * abs(float(values[0])):
        return None
    rim = 0.06 * (high - low)
    return Panel(label, (Curve(label, values),), (low - rim, high + rim), height, named=False)


def _linear_panel(curves: Sequence[Curve]) -> Panel:
    """From zero; small fractions as multiples of a power of ten."""
    top = max(float(curve.values.max()) for curve in curves)
    k = math.floor(math.log10(top)) if 0 < top < 0.02 else 0
    scaled = tuple(Curve(c.name, c.values / 10.0**k, c.colour, c.dashes) for c in curves)
    label = f"mole fraction / {power_of_ten(k)}" if k else "mole fraction"
    high = 1.06 * (top or 1.0) / 10.0**k
    return Panel(label, scaled, (-0.02 * high, high), HEIGHTS["composition"])


def _log_panel(curves: Sequence[Curve]) -> Panel | None:
    """From above the largest peak to two decades below the smallest one."""
    if not curves:
        return None
    peaks = np.log10([float(curve.values.max()) for curve in curves])
    high = math.ceil(peaks.max() + 0.15)
    low = max(min(math.floor(peaks.min()) - 2, high - 4), high - DECADES)
    return Panel("mole fraction", tuple(curves), (10.0**low, 10.0**high), HEIGHTS["composition"], "log")
