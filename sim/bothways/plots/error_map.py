"""A map of the errors of reduced mechanisms over temperature, pressure and equivalence ratio."""

import math
from itertools import pairwise
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.colors import Normalize
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator

from ..compare import MEASURES, Comparison, Judged
from ..compare.limits import number_text
from ..errors import InputError
from . import style
from .of_comparisons import check_measure, facts, log_axis, program
from .parts import Array
from .sheet import Margins, Sheet, Words, empty_sheet
from .style import POINT, RIM, Size
from .words import capitalised

TILE = 42.0
"""Height of a map [mm, on a page]."""
MOST_MAPS = 4
"""So many equivalence ratios get maps of their own; more are brought together in as many bins."""


@style.styled
def error_map(comparison: Comparison, measure: str = "ignition", width: str = "page") -> Figure:
    """The error of every condition as a coloured mark at its T and p: a row a mechanism, a column an equivalence ratio.

    Crossed out where it is beyond its limit, hollow where the measure has no meaning.
    """
    size = style.size_named(width)
    check_measure(measure)
    if np.any(np.isnan([c.pressure for c in comparison.conditions])):
        raise InputError("the conditions have no pressure", expected="gases", remedy="draw the worst courses instead")
    columns = _bins(np.array([c.equivalence_ratio for c in comparison.conditions]))
    scale = _scale(comparison, measure)
    margins = Margins(RIM + (0.75 * size.text + 7.5) * POINT + 7.0, 20.0 * size.scale, 2.2 * size.text * POINT,
                      2.4 * size.text * POINT + 1.0)
    heights = [TILE * size.scale] * len(comparison.judged)
    sheet = empty_sheet(size, heights, len(columns), margins, _map_words(comparison, measure))
    for row, judged in zip(sheet.axes, comparison.judged, strict=True):
        for axes, (label, members) in zip(row, columns, strict=True):
            _draw_map(axes, comparison, judged, measure, members, scale, size)
            if row is sheet.axes[0] and label:
                axes.set_title(label, fontsize=size.text, pad=3.0)
        row[0].set_ylabel("pressure / bar")
        for axes in row[1:]:
            axes.tick_params(labelleft=False)
        _name_row(row[-1], judged, size)
    _finish_map(sheet, measure, scale)
    return sheet.figure


def _bins(ratio: Array) -> list[tuple[str, Array]]:
    """Titles and members (masks) of the columns."""
    known = np.unique(ratio[~np.isnan(ratio)])
    if not known.size:
        return [("", np.ones(len(ratio), dtype=bool))]
    if len(known) <= MOST_MAPS:
        return [(f"φ = {value:.4g}", ratio == value) for value in known]
    edges = np.quantile(known, np.linspace(0.0, 1.0, MOST_MAPS + 1))
    return [(f"φ = {low:.3g} to {high:.3g}", (ratio >= low) & ((ratio < high) | (high == edges[-1])))
            for low, high in pairwise(edges)]


def _scale(comparison: Comparison, measure: str) -> Normalize:
    """White at zero; as far as the limit, if there is one, else as the largest error."""
    values = np.concatenate([judged.values(measure) for judged in comparison.judged])
    known = np.abs(values[np.isfinite(values)])
    limit = [x.value for x in comparison.limits if x.measure == measure]
    top = limit[0] if limit else float(known.max(initial=0.0)) or 1.0
    return Normalize(-top, top)


def _draw_map(axes: Axes, comparison: Comparison, judged: Judged, measure: str, members: Array, scale: Normalize,
              size: Size) -> None:
    T, p = (np.array([getattr(c, name) for c in comparison.conditions])[members] for name in ("temperature", "pressure"))
    p, values = p / 1e5, judged.values(measure)[members]
    limit = next((x for x in comparison.limits if x.measure == measure), None)
    beyond = np.array([(limit is not None and not limit.keeps(v)) or math.isinf(v) for v in values], dtype=bool)
    nothing, area = np.isnan(values), _mark_size(axes, comparison) ** 2
    shown = np.clip(np.nan_to_num(values, posinf=1e300, neginf=-1e300), scale.vmin, scale.vmax)
    marks: dict[str, Any] = {"s": area, "marker": "s", "linewidths": 0.4, "edgecolors": "#777777", "clip_on": False}
    axes.scatter(T[~nothing], p[~nothing], c=shown[~nothing], norm=scale, cmap="PuOr_r", zorder=3, **marks)
    axes.scatter(T[nothing], p[nothing], facecolors="none", zorder=3, **marks)
    axes.scatter(T[beyond], p[beyond], s=0.35 * area, marker="x", color=style.BLACK, linewidths=0.9, zorder=4, clip_on=False)
    _map_axes(axes, comparison)


def _mark_size(axes: Axes, comparison: Comparison) -> float:
    """Side of a mark [pt], such that a full grid of them does not touch."""
    box = axes.get_window_extent()
    counts = [len({round(getattr(c, name), 6) for c in comparison.conditions}) for name in ("temperature", "pressure")]
    room = np.array([box.width, box.height]) * 72.0 / axes.figure.dpi / (1.6 * np.array(counts))
    return float(np.clip(room.min(), 3.0, 16.0))


def _map_axes(axes: Axes, comparison: Comparison) -> None:
    T, p = (np.array([getattr(c, name) for c in comparison.conditions]) for name in ("temperature", "pressure"))
    low, high = float(T.min()), float(T.max())
    rim = 0.12 * (high - low) or 50.0
    axes.set_xlim(low - rim, high + rim)
    axes.xaxis.set_major_locator(MaxNLocator(4, steps=[1, 2, 2.5, 5, 10]))
    log_axis(axes, "y", p / 1e5, 1.45)


def _name_row(axes: Axes, judged: Judged, size: Size) -> None:
    lines = style.wrapped(judged.mechanism.name.replace("-", "- "), size.text, 17.0 * size.scale)  # may break at hyphens
    axes.annotate("\n".join(lines).replace("- ", "-"), xy=(1.0, 1.0), xytext=(5.0, 0.0), xycoords="axes fraction",
                  textcoords="offset points", va="top", ha="left", fontsize=size.small, annotation_clip=False)


def _finish_map(sheet: Sheet, measure: str, scale: Normalize) -> None:
    """Labels of the abscissae, and the colours' scale beside the last row."""
    for row in sheet.axes[:-1]:
        for axes in row:
            axes.tick_params(labelbottom=False)
    for axes in sheet.axes[-1]:
        axes.set_xlabel("temperature / K")
    last = sheet.axes[-1][-1].get_position()
    left = last.x1 + 3.0 / sheet.size.width
    colours = sheet.figure.add_axes((left, last.y0, 2.6 / sheet.size.width, 0.6 * last.height))
    mappable = sheet.axes[-1][-1].collections[0]
    bar = sheet.figure.colorbar(mappable, cax=colours)
    top = float(scale.vmax or 1.0)
    bar.set_ticks([-top, 0.0, top], labels=[number_text(measure, v).replace("-", "−") for v in (-top, 0.0, top)])
    bar.ax.tick_params(labelsize=sheet.size.small)
    bar.outline.set_linewidth(0.4)  # type: ignore[operator]


def _map_words(comparison: Comparison, measure: str) -> Words:
    what = next(m.text for m in MEASURES if m.name == measure)
    limit = next((f"beyond the limit, {number_text(measure, x.value)}" for x in comparison.limits if x.measure == measure),
                 "lacking with the reduced mechanism")
    hollow = any(np.isnan(judged.values(measure)).any() for judged in comparison.judged)
    notes = f"{capitalised(what)}. Crosses: {limit}.{' Hollow: has no meaning there.' if hollow else ''}"
    return Words(f"Reductions of {comparison.parent.name}: {measure}", facts(comparison), notes=notes, program=program())
