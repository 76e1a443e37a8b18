"""The course of a run: temperature, pressure and composition against time."""

from collections.abc import Sequence

import numpy as np
from matplotlib.figure import Figure

from ..mechanism.phase import LITRE
from ..outfile import StrPath
from ..trajectory import Trajectory
from . import style
from .composition import CONCENTRATION, FRACTION, linear_panel, log_panel, state_panel
from .labels import formula
from .panels import draw_panels
from .parts import Curve, Panel
from .saving import check_picture, save
from .selection import Selection, selected
from .views import time_views
from .words import instants, words

HEIGHTS = {"temperature": 24.0, "pressure": 21.0}
"""Of panels of the state [mm, on a page]."""
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
    solution = bool(np.isnan(trajectory.pressure[0]))
    values = trajectory.concentration / LITRE if solution else trajectory.mole_fraction
    quantity = CONCENTRATION if solution else FRACTION
    major, trace = ([Curve(_shown_name(trajectory, k), values[:, k], *next(styles)) for k in some]
                    for some in (chosen.major, chosen.trace))
    state = (state_panel("temperature / K", trajectory.temperature, HEIGHTS["temperature"]), _pressure_panel(trajectory))
    return [panel for panel in (*state, linear_panel(major, quantity), log_panel(trace, quantity)) if panel]


def _pressure_panel(trajectory: Trajectory) -> Panel | None:
    highest = float(trajectory.pressure.max())
    if np.isnan(highest):
        return None
    name, unit = next((name, unit) for name, unit, least in PRESSURE_UNITS if highest >= least)
    return state_panel(f"pressure / {name}", trajectory.pressure / unit, HEIGHTS["pressure"])
