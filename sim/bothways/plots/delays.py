"""Ignition delays with a parent and its reductions: on the axes of an Arrhenius plot, and against each other."""

from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from ..compare import Comparison, Judged
from ..errors import InputError
from . import style
from .of_comparisons import facts, log_axis, program
from .parts import Array
from .sheet import Margins, Words, empty_sheet
from .style import POINT, RIM, Size
from .words import NOT_A_SAFETY_CASE

HEIGHT = 62.0
"""Of the panels [mm, on a page]."""
MARKERS = "os^Dv<>p"


@style.styled
def parity(comparison: Comparison, width: str = "page") -> Figure:
    """Ignition delays on the axes of an Arrhenius plot, and against the parent's own.

    Raises InputError where nothing ignites with the parent.
    """
    size = style.size_named(width)
    theirs = np.array([c.ignition for c in comparison.conditions])
    if not np.isfinite(theirs).any():
        raise InputError("nothing ignites in any condition", expected="an ignition to draw", remedy="draw the worst courses")
    aside = RIM + (0.75 * size.text + 7.5) * POINT + 7.0
    margins = Margins(aside, aside, 1.2 * size.text * POINT, 3.2 * size.text * POINT)
    sheet = empty_sheet(size, [HEIGHT * size.scale], 2, margins, _parity_words(comparison))
    T = np.array([c.temperature for c in comparison.conditions])
    _arrhenius(sheet.axes[0][0], comparison, 1000.0 / T, theirs, size)
    _against_parent(sheet.axes[0][1], comparison, theirs, size)
    return sheet.figure


def _series(comparison: Comparison) -> list[tuple[Judged, Array, dict[str, Any]]]:
    """Delays of each reduction and how they are marked."""
    colours = [c for name, c in style.PALETTE.items() if name != "black"]
    return [(judged, np.array([o.ignition for o in judged.outcomes]),
             {"marker": MARKERS[k % len(MARKERS)], "color": colours[k % len(colours)], "linestyle": "none", "markersize": 3.0,
              "markeredgewidth": 0.0}) for k, judged in enumerate(comparison.judged)]


def _arrhenius(axes: Axes, comparison: Comparison, x: Array, theirs: Array, size: Size) -> None:
    axes.plot(x, theirs, marker="o", color=style.BLACK, linestyle="none", markersize=5.0, markerfacecolor="none",
              markeredgewidth=0.6, label=f"{comparison.parent.name} (parent)", zorder=3, clip_on=False)
    for judged, own, marks in _series(comparison):
        axes.plot(x, own, label=judged.mechanism.name, zorder=4, clip_on=False, **marks)
    rim = 0.06 * (np.ptp(x) or 0.1)
    axes.set_xlim(float(x.min()) - rim, float(x.max()) + rim)
    log_axis(axes, "y", theirs[np.isfinite(theirs)], 2.0)
    axes.set_xlabel("1000 K / temperature")
    axes.set_ylabel("ignition delay / s")
    axes.legend(fontsize=size.small, frameon=False, loc="upper left", handletextpad=0.2, borderaxespad=0.2)


def _against_parent(axes: Axes, comparison: Comparison, theirs: Array, size: Size) -> None:
    """The ratio of each delay to the parent's, against the parent's."""
    limit = next((x.value for x in comparison.limits if x.measure == "ignition"), None)
    axes.axhline(0.0, color=style.GREY, linewidth=0.6, zorder=1)
    if limit:
        axes.axhspan(-100.0 * limit, 100.0 * limit, color=style.PALE, linewidth=0, zorder=0)
    for judged, _, marks in _series(comparison):
        axes.plot(theirs, 100.0 * judged.values("ignition"), zorder=4, clip_on=False, **marks)
    log_axis(axes, "x", theirs[np.isfinite(theirs)], 1.6)
    axes.set_xlabel("ignition delay of the parent / s")
    axes.set_ylabel("error / %")
    axes.yaxis.tick_right()
    axes.yaxis.set_label_position("right")
    axes.yaxis.set_label_coords(1.0 + 30.0 / (axes.get_window_extent().width * 72.0 / axes.figure.dpi), 0.5)
    axes.spines["left"].set_visible(False)
    axes.spines["right"].set_visible(True)


def _parity_words(comparison: Comparison) -> Words:
    lacking = [f"{judged.mechanism.name}: {np.isinf(judged.values('ignition')).sum()} conditions in which either alone ignites"
               for judged in comparison.judged if np.isinf(judged.values("ignition")).any()]
    limited = " Grey: within the limit." if any(x.measure == "ignition" for x in comparison.limits) else ""
    notes = f"Delay: the instant of the steepest rise.{limited} {'; '.join(lacking)} {NOT_A_SAFETY_CASE}"
    return Words(f"Ignition delays with {comparison.parent.name} and its reductions", facts(comparison), notes=notes,
                 program=program())
