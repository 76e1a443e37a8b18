"""Labels at the lines: formulae with subscripts, and the labelling of a row of panels."""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.lines import Line2D

from ..errors import InputError
from ..mechanism.elements import ATOMIC_MASS, parse_formula
from .parts import Array, Curve
from .places import Box, best_place, dense, spread
from .style import LEADING, POINT, Size, darker, text_width

LEADER = 11.0
"""Length of the line from a panel's edge to a label [pt]."""
_MIDDLE = 0.365
"""Half the height of capitals, so that their middle stands at the leader's end [-]."""
_INK_HEIGHT = 0.88
"""From the foot of a subscript to the top of a capital [-]."""
_DIGITS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


def formula(name: str, molar_mass: float) -> str:
    """The name with subscripts if it is a plain formula: one that has the species' molar mass [kg/mol]."""
    try:
        composition = parse_formula(name, ATOMIC_MASS)
    except InputError:
        return name
    mass = sum(count * ATOMIC_MASS[element] for element, count in composition.items())
    return name.translate(_DIGITS) if abs(mass - molar_mass) < 2e-3 * molar_mass else name


def margin(curves: Sequence[Curve], size: Size) -> float:
    """Width that labels of these curves take beside a panel [mm]."""
    widest = max((_extent(curve.name, size)[0] * POINT for curve in curves), default=0.0)
    return widest + (LEADER + 7.0) * POINT if curves else 0.0


def least_height(curves: Sequence[Curve], size: Size) -> float:
    """Height of a panel beside which the labels of these curves fit [mm]."""
    names = [curve.name for curve in curves if curve.name]
    return (len(names) * _most_lines(names) + 0.5) * LEADING * size.text * POINT


def _most_lines(names: Sequence[str]) -> int:
    return max((name.count("\n") + 1 for name in names), default=1)


def _extent(name: str, size: Size) -> Array:
    """(2) width of a label, and height of its ink [pt]."""
    lines = name.split("\n")
    width = max(text_width(line, size.text) for line in lines) / POINT
    return np.array([width, (_INK_HEIGHT + LEADING * (len(lines) - 1)) * size.text])


@dataclass(frozen=True, eq=False)
class Drawn:
    """A curve and its line in one view of its panel."""

    curve: Curve
    axes: Axes
    line: Line2D

    @cached_property
    def extent(self) -> Array:
        """(2) width and height of the axes [pt]."""
        box = self.axes.get_window_extent()
        return np.array([box.width, box.height]) * 72.0 / self.axes.figure.dpi

    @cached_property
    def path(self) -> Array:
        """(n, 2) the line from the axes' lower left corner [pt]; points that cannot be drawn are left out."""
        box = self.axes.get_window_extent()
        with np.errstate(divide="ignore", invalid="ignore"):
            path = self.axes.transData.transform(np.asarray(self.line.get_xydata(), dtype=np.float64))
        path = (path - [box.x0, box.y0]) * 72.0 / self.axes.figure.dpi
        return path[np.isfinite(path).all(axis=1) & (path[:, 1] > -1e4)]

    @cached_property
    def ink(self) -> Array:
        """(n, 2) points along the line, about 1 pt apart."""
        return dense(self.path)

    def peak(self) -> float:
        """Where the line is furthest from its right end [pt]."""
        y = self.path[:, 1] if len(self.path) else np.zeros(1)
        return float(y[np.argmax(np.abs(y - y[-1]))])

    def height_at_edge(self) -> float | None:
        """Where the line leaves the axes at the right [pt]; None if it is out of sight there or ends before."""
        width, height = self.extent
        if not len(self.path) or (len(self.path) > 1 and self.path[-1, 0] < width - 0.5):
            return None
        y = float(np.interp(width, self.path[:, 0], self.path[:, 1]))
        return y if -0.5 <= y <= height + 0.5 else None


def label_row(row: Sequence[Sequence[Drawn]], size: Size, ends: bool = True) -> None:
    """Labels every curve of a panel that has a name once; row: the drawn curves, view by view.

    Beside the last view where the line is in sight at its edge, else at the line within a view if there is a free
    place, else beside the last view with a sample of the line. Where the right ends do not tell the curves apart
    (`ends` false) all labels stand beside the last view with samples, each as near as may be to its line's peak.
    """
    taken: list[list[Box]] = [[] for _ in row]
    beside: list[tuple[Drawn, float | None]] = []
    for k in (k for k, drawn in enumerate(row[0]) if drawn.curve.name):
        if not ends:
            beside.append((row[-1][k], None))
            continue
        height = row[-1][k].height_at_edge()
        if height is not None or not _label_within(k, row, taken, size):
            beside.append((row[-1][k], height))
    _label_beside(beside, size, ends)


def _label_within(k: int, row: Sequence[Sequence[Drawn]], taken: Sequence[list[Box]], size: Size) -> bool:
    """Puts the label of curve k at the best free place along it in any view; False if there is none."""
    places = []
    for j, view in enumerate(row):
        others = np.concatenate([np.empty((0, 2)), *(drawn.ink for drawn in view if drawn is not view[k])])
        found = best_place(view[k].ink, others, view[k].extent, _extent(view[k].curve.name, size), taken[j])
        places += [(found[0], j, found[1])] if found else []
    if not places:
        return False
    _, j, box = min(places)
    taken[j].append(box)
    _write_within(row[j][k], box, size)
    return True


def _write_within(drawn: Drawn, box: Box, size: Size) -> None:
    centre = (0.5 * (box[0] + box[2]), 0.5 * (box[1] + box[3])) / drawn.extent
    _write(drawn, centre - [0.0, _MIDDLE * size.text / drawn.extent[1]], "center", size)


def _write(drawn: Drawn, xy: Array, ha: str, size: Size) -> None:
    """The name with its baseline at xy, in shares of the axes; several lines round the place of one."""
    lines = drawn.curve.name.split("\n")
    for k, line in enumerate(lines):
        up = (0.5 * (len(lines) - 1) - k) * LEADING * size.text / drawn.extent[1]
        drawn.axes.annotate(line, xy=(float(xy[0]), float(xy[1]) + up), xycoords="axes fraction", ha=ha, va="baseline",
                            fontsize=size.text, color=darker(drawn.curve.colour), annotation_clip=False)


def _label_beside(beside: Sequence[tuple[Drawn, float | None]], size: Size, ends: bool) -> None:
    if not beside:
        return
    lines = _most_lines([drawn.curve.name for drawn, _ in beside])
    height, half = float(beside[0][0].extent[1]), 0.5 * lines * size.text
    out_of_sight = [-half if ends else drawn.peak() for drawn, _ in beside]  # below the others, or at the peak
    wanted = [out if y is None else y for out, (_, y) in zip(out_of_sight, beside, strict=True)]
    places = spread(wanted, lines * LEADING * size.text, half, height - half)
    for (drawn, y), place in zip(beside, map(float, places), strict=True):
        if y is None:
            _lead(drawn, place, place, drawn.curve.dashes, size.line)
        else:
            _lead(drawn, y, place, "-", 0.5 * size.line)
        _write(drawn, np.array([drawn.extent[0] + LEADER + 2.0, place - _MIDDLE * size.text]) / drawn.extent, "left", size)


def _lead(drawn: Drawn, start: float, end: float, dashes: Any, width: float) -> None:
    """A line from beside the panel's edge at height `start` to the label at height `end` [pt]."""
    w, h = drawn.extent
    line = Line2D((1.0 + 1.5 / w, 1.0 + LEADER / w), (start / h, end / h), transform=drawn.axes.transAxes, clip_on=False,
                  color=drawn.curve.colour, label="_leader", linewidth=width, linestyle=dashes)
    drawn.axes.add_artist(line)
