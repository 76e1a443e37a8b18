"""The rate of formation of one species, split by reaction, against time."""

import math
from collections.abc import Sequence

import numpy as np
from matplotlib.figure import Figure

from .. import along
from ..outfile import StrPath
from ..trajectory import Trajectory
from . import style
from .labels import formula
from .panels import draw_panels
from .parts import Array, Curve, Panel, View, power_of_ten
from .saving import check_picture, save
from .style import Size
from .views import time_views
from .words import instants, words

MOST = 6
"""Reactions drawn each for itself; the others as one sum."""
SMALL = 1e-3
"""A reaction with less than this share of what the first has, at an instant and in all, is never drawn for itself [-]."""
HIDDEN = 0.02
"""Rates below this share of the largest cannot be read on a linear axis [-]."""
MOSTLY = 0.5
"""If more than this share of all that is turned over is turned over at such rates, both axes are logarithmic [-]."""
DECADES = 4
"""Of a symmetric logarithmic axis, on either side of its linear part."""
ROOM = 0.36
"""The most of a figure's width that the equations may take [-]."""
HEIGHT = 78.0
"""Of the panel [mm, on a page]."""
UNIT = "mol m⁻³ s⁻¹"


@style.styled
def contributions(trajectory: Trajectory, species: str, width: str = "page") -> Figure:
    """What the most important reactions contribute to the rate of formation of a species, as a figure.

    The most important are those with the largest shares of what is turned over, at an instant or in all. The figure shows
    the sum of all others as one line, and the net rate of formation. width : "page" (180 mm) or "column" (85 mm).
    """
    size = style.size_named(width)
    found = along.contributions(trajectory, species)
    lines = _lines(trajectory, found, size)
    scale = _linear_within(found)
    views = time_views(trajectory.time, [_as_seen(lines, scale)], trajectory.milestones, "log" if scale else None)
    name = formula(species, float(trajectory.molar_mass[trajectory.species.index(species)]))
    texts = words(trajectory, (), views[0], _remarks(found, scale))
    panel = _panel(name, lines, scale, _shown(trajectory.time, views))
    return draw_panels(trajectory.time, [panel], views, size, texts, instants(trajectory.milestones))


def save_contributions(trajectory: Trajectory, species: str, path: StrPath, replace: bool = False, width: str = "page") -> None:
    """Draws the contributions to a species and writes them as PNG, SVG or PDF, by the suffix."""
    check_picture(path, replace)
    save(contributions(trajectory, species, width), path, replace)


def important(time: Array, rate: Array) -> list[int]:
    """Places of the most important reactions, by the better of two shares: of the largest rate and of the turnover."""
    if not rate.shape[1]:
        return []
    peak, area = np.max(np.abs(rate), axis=0), np.trapezoid(np.abs(rate), time, axis=0)
    weight = np.maximum(peak / (peak.max() or 1.0), area / (area.max() or 1.0))
    return [int(k) for k in np.argsort(-weight, kind="stable")[:MOST] if weight[k] > SMALL]


def _lines(trajectory: Trajectory, found: along.Contributions, size: Size) -> list[Curve]:
    """The net rate, each important reaction, all others."""
    chosen = important(found.time, found.rate)
    others = np.setdiff1d(np.flatnonzero(np.any(found.rate != 0, axis=0)), chosen)
    styles = [pair for pair in style.line_styles() if pair[0] != style.BLACK]
    curves = [Curve("net", found.rate.sum(axis=1), style.BLACK)]
    for k, pair in zip(chosen, styles, strict=False):
        curves.append(Curve(equation_text(trajectory, found.reactions[k], size), found.rate[:, k], *pair))
    if others.size:
        curves.append(Curve(f"all {others.size} others" if others.size > 1 else "the other", found.rate[:, others].sum(axis=1),
                            style.GREY, style.DASHES[-1]))
    return curves


def equation_text(trajectory: Trajectory, equation: str, size: Size) -> str:
    """An equation with subscripts, in as many lines as its room asks for."""
    mass = dict(zip(trajectory.species, trajectory.molar_mass, strict=True))
    words_ = [formula(word, float(mass[word])) if word in mass else word for word in equation.split()]
    glued = " ".join(words_).replace("+ ", "+\u00a0")
    return "\n".join(style.wrapped(glued, size.text, ROOM * size.width)).replace("\u00a0", " ")


def _linear_within(found: along.Contributions) -> float:
    """Up to which rate a symmetric logarithmic axis is to be linear [mol/(m3 s)]; 0 if a linear axis serves."""
    gross = np.sum(np.abs(found.rate), axis=1)
    top, time = float(np.max(np.abs(found.rate), initial=0.0)), found.time
    if len(time) < 3 or top == 0:
        return 0.0
    turned = np.trapezoid(gross, time)
    hidden = np.trapezoid(np.where(gross < HIDDEN * top, gross, 0.0), time)
    return 10.0 ** (math.floor(math.log10(top)) - DECADES + 1) if hidden > MOSTLY * turned else 0.0


def _as_seen(lines: Sequence[Curve], linear_within: float) -> Panel:
    """The curves as heights on the axis, for the choice of the views."""
    seen = [Curve(c.name, np.arcsinh(c.values / linear_within) if linear_within else c.values) for c in lines]
    values = np.concatenate([curve.values for curve in seen])
    return Panel("", tuple(seen), (float(values.min()), float(values.max())), HEIGHT)


def _shown(time: Array, views: Sequence[View]) -> np.ndarray:
    return (time >= min(view.start for view in views)) & (time <= max(view.end for view in views))


def _panel(name: str, lines: Sequence[Curve], linear_within: float, shown: np.ndarray) -> Panel:
    """The panel, in units of a power of ten where the axis is linear."""
    values = np.concatenate([curve.values[shown] for curve in lines])
    top = float(np.max(np.abs(values), initial=0.0)) or 1.0
    k = 0 if linear_within else _power(top)
    unit = f"({power_of_ten(k)} {UNIT})" if k else f"({UNIT})"
    low, high = min(float(values.min()), 0.0) / 10.0**k, max(float(values.max()), 0.0) / 10.0**k
    limits = _symmetric_log(low, high, linear_within) if linear_within else _with_rim(low, high)
    scaled = tuple(Curve(c.name, c.values / 10.0**k, c.colour, c.dashes) for c in lines)
    return Panel(f"rate of formation of {name} / {unit}", scaled, limits, HEIGHT, "symlog" if linear_within else "linear",
                 ends=False, zero=True, linear_within=linear_within or 1.0)


def _power(top: float) -> int:
    """The power of ten of the unit in which `top` is a number of easy size."""
    k = math.floor(math.log10(top))
    return 0 if -1 <= k <= 2 else k


def _with_rim(low: float, high: float) -> tuple[float, float]:
    rim = 0.05 * ((high - low) or 1.0)
    return low - rim, high + rim


def _symmetric_log(low: float, high: float, linear_within: float) -> tuple[float, float]:
    return (min(1.5 * low, -linear_within), max(1.5 * high, linear_within))


def _remarks(found: along.Contributions, linear_within: float) -> list[str]:
    """What a reader must know."""
    if not np.any(found.rate):
        return [f"No reaction makes or takes {found.species} in this run."]
    linear = f"The ordinate is linear up to {linear_within:g} {UNIT} either way, logarithmic beyond."
    return ["Net: the sum of all reactions, forward less reverse."] + [linear] * bool(linear_within)
