"""Panels upon a sheet: any curves against any abscissa, in one view or several side by side."""

import math
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import FixedLocator, LogLocator, MaxNLocator, NullFormatter, NullLocator, ScalarFormatter

from . import style
from .labels import Drawn, label_row, least_height, margin
from .parts import Array, Panel, View
from .sheet import Margins, Sheet, Words, empty_sheet
from .style import INCH, POINT, RIM, Size

STEPS = [1, 2, 2.5, 5, 10]
LOW_PANEL = 30.0
"""Panels lower than this get fewer numbers [mm]."""


def draw_panels(abscissa: Array, panels: Sequence[Panel], views: Sequence[View], size: Size, words: Words,
                marks: Mapping[str, float] | None = None) -> Figure:
    """A figure: a row a panel, a column a view; marks : values of the abscissa to mark in all panels, by their text."""
    marks = {name: at for name, at in (marks or {}).items() if views[0].start < at < views[0].end}
    heights = [_height(panel, size) for panel in panels]
    sheet = empty_sheet(size, heights, len(views), _margins(panels, views, size, bool(marks)), words)
    for row, panel in zip(sheet.axes, panels, strict=True):
        _draw(row, panel, abscissa, views, size)
    _set_abscissae(sheet, views)
    for name, at in marks.items():
        _mark(sheet, views, name, at)
    return sheet.figure


def _height(panel: Panel, size: Size) -> float:
    """[mm], such that all labels fit beside the panel."""
    needed = least_height(panel.curves, size) if panel.named else 0.0
    return max(panel.height * size.scale, needed)


def _margins(panels: Sequence[Panel], views: Sequence[View], size: Size, marked: bool) -> Margins:
    numbers = max(_numbers_width(panel, size) for panel in panels)
    named = [curve for panel in panels if panel.named for curve in panel.curves]
    left = RIM + (0.75 * size.text + 7.5) * POINT + numbers
    right = max(margin(named, size), RIM)
    lines = max(len(label) for label in _labels(views, size, left + right))
    return Margins(left, right, above=(1.9 * size.small if marked else 0.6 * size.small) * POINT,
                   below=(1.1 + 1.25 * (1 + lines)) * size.text * POINT)


def _numbers_width(panel: Panel, size: Size) -> float:
    """The width of the widest number beside the ordinate [mm]."""
    if panel.scale == "log":
        return style.text_width("10⁻¹⁰", size.text)
    if panel.scale == "symlog":
        return style.text_width("−10⁻¹⁰", size.text)
    formatter = ScalarFormatter(useOffset=False)
    formatter.create_dummy_axis()
    formatter.axis.set_view_interval(*panel.limits)  # type: ignore[union-attr]
    low, high = panel.limits
    ticks = [tick for tick in _locator(panel).tick_values(low, high) if low <= tick <= high]
    return max((style.text_width(text, size.text) for text in formatter.format_ticks(ticks)), default=0.0)


def _locator(panel: Panel) -> MaxNLocator:
    return MaxNLocator(4 if panel.height < LOW_PANEL else 5, steps=STEPS, min_n_ticks=3)


def _labels(views: Sequence[View], size: Size, aside: float) -> list[list[str]]:
    """The abscissae's labels in lines; aside : width of both margins [mm]."""
    room = (size.width - aside) / len(views)
    return [style.wrapped(view.label.replace(" / ", "\u00a0/\u00a0"), size.text, room) for view in views]


def _draw(row: Sequence[Axes], panel: Panel, abscissa: Array, views: Sequence[View], size: Size) -> None:
    drawn = []
    for axes, view in zip(row, views, strict=True):
        _set_axes(axes, panel, view)
        drawn.append(_draw_curves(axes, panel, view.on_axis(abscissa), size))
    row[0].set_ylabel(panel.label)
    for axes in row[1:]:
        axes.tick_params(labelleft=False)
    if panel.named:
        label_row(drawn, size, panel.ends)


def _draw_curves(axes: Axes, panel: Panel, x: Array, size: Size) -> list[Drawn]:
    """Lines; a single point is a dot."""
    dot: dict[str, Any] = {"marker": "o", "markersize": 3.0, "clip_on": False} if len(x) == 1 else {}
    return [Drawn(curve, axes, axes.plot(x, curve.values, color=curve.colour, linestyle=curve.dashes, label=curve.name,
                                         linewidth=size.line, zorder=3, **dot)[0]) for curve in panel.curves]


def _set_axes(axes: Axes, panel: Panel, view: View) -> None:
    axes.set_xscale(view.scale)
    axes.set_yscale(panel.scale, **({"linthresh": panel.linear_within} if panel.scale == "symlog" else {}))
    axes.set_xlim(*view.on_axis(np.array([view.start, view.end])))
    axes.set_ylim(*panel.limits)
    axes.tick_params(labelbottom=False)
    if panel.scale == "log":
        _set_decades(axes, round(math.log10(panel.limits[1] / panel.limits[0])))
    elif panel.scale == "symlog":
        axes.yaxis.set_major_locator(FixedLocator(_symmetric_decades(panel)))
        axes.yaxis.set_minor_locator(NullLocator())
    else:
        axes.yaxis.set_major_locator(_locator(panel))
    if panel.limits[0] < 0 < panel.limits[1] and panel.zero:
        axes.axhline(0.0, color=style.GREY, linewidth=0.5, zorder=1)


def _symmetric_decades(panel: Panel) -> list[float]:
    """Zero and the powers of ten on either side of the linear part, five a side at most."""
    first, last = (round(math.log10(x)) for x in (panel.linear_within, max(map(abs, panel.limits))))
    powers = [10.0**k for k in range(first, last + 1, max(1, math.ceil((last - first) / 4)))]
    return [x for x in (*(-p for p in powers), 0.0, *powers) if panel.limits[0] <= x <= panel.limits[1]]


def _set_decades(axes: Axes, decades: int) -> None:
    few = decades <= 5
    axes.yaxis.set_major_locator(LogLocator(numticks=9 if few else 5))
    axes.yaxis.set_minor_locator(LogLocator(subs="all" if few else (1.0,), numticks=99))
    axes.yaxis.set_minor_formatter(NullFormatter())


def _set_abscissae(sheet: Sheet, views: Sequence[View]) -> None:
    """Labels under the last row, and in the first view the stretches that the others show."""
    labels = _labels(views, sheet.size, sheet.margins.left + sheet.margins.right)
    for k, (view, label) in enumerate(zip(views, labels, strict=True)):
        sheet.axes[-1][k].tick_params(labelbottom=True)
        sheet.axes[-1][k].set_xlabel("\n".join(label).replace("\u00a0", " "))
        for row in sheet.axes:
            if view.scale == "linear":
                row[k].xaxis.set_major_locator(MaxNLocator(_numbers(sheet, len(views)), steps=STEPS, min_n_ticks=3))
            else:
                row[k].xaxis.set_minor_formatter(NullFormatter())
            if k:
                row[0].axvspan(*views[0].on_axis(np.array([view.start, view.end])), color=style.PALE, linewidth=0, zorder=0)


def _numbers(sheet: Sheet, columns: int) -> int:
    """How many numbers at most fit under a panel."""
    width = (sheet.size.width - sheet.margins.left - sheet.margins.right) / columns
    return max(3, min(8, int(width / (5.0 * sheet.size.text * POINT))))


def _mark(sheet: Sheet, views: Sequence[View], name: str, at: float) -> None:
    """A thin line through all panels, its text above the first."""
    for row in sheet.axes:
        for axes, view in zip(row, views, strict=True):
            axes.axvline(float(view.on_axis(at)), color=style.GREY, linewidth=0.5, linestyle=(0, (1, 1.5)), zorder=1)
    top, x, points = sheet.axes[0][0], float(views[0].on_axis(at)), sheet.size.small
    centre = float(top.transData.transform((x, top.get_ylim()[1]))[0]) / sheet.figure.dpi * INCH
    shift = sheet.kept_within(centre, style.text_width(name, points)) - centre
    top.annotate(name, xy=(x, 1.0), xycoords=("data", "axes fraction"), xytext=(shift / POINT, 2.0),
                 textcoords="offset points", ha="center", va="bottom", fontsize=points, color=style.GREY)


