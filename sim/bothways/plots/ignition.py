"""Ignition delays of a sweep on Arrhenius axes: ln t against 1000 K/T, a curve for each other condition."""

from collections.abc import Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.lines import Line2D
from matplotlib.ticker import FuncFormatter, MaxNLocator

from ..errors import InputError
from ..outfile import StrPath
from ..report import CAUTION, NOTABLE_RISE, counted
from ..sweep import Sweep
from . import style
from .saving import check_picture, save
from .sheet import Margins, Sheet, Words, empty_sheet
from .views import time_unit

MOST_CURVES = 12
"""More conditions than this are drawn as points alone."""
HEIGHT = 80.0
"""Of the panel [mm, on a page]."""
_WORDS = {"start_pressure": ("p", "bar", 1e5), "start_equivalence_ratio": ("φ", "", 1.0), "case_mechanism": ("", "", 1.0),
          "heat": ("", "", 1.0), "holds": ("constant", "", 1.0)}
"""What tells curves apart: word before the value, unit and its size."""


@style.styled
def ignition(found: Sweep, width: str = "page") -> Figure:
    """The times of the steepest rise of a sweep's cases against 1000 K/T, by what else varies.

    Cases that agree in all but the temperature are joined; open marks at the upper edge are cases without a steep rise.
    Raises InputError where no case has a steep rise.
    """
    size = style.size_named(width)
    delay, T = found["steepest_rise"], found["start_temperature"]
    if not np.any(np.isfinite(delay)):
        raise InputError("no case has a steep rise of temperature or pressure", file=found.path,
                         expected="ignition delays to draw", remedy="until.time may be too short")
    groups = _groups(found)
    sheet = empty_sheet(size, [HEIGHT * size.scale], 1, Margins(17.0, _room(groups, size), 6.0, 11.0), _words(found))
    axes = sheet.axes[0][0]
    name, unit = time_unit(float(np.nanmax(delay)))
    axes.set_yscale("log")
    _draw(axes, groups, 1e3 / T, delay / unit, size)
    _finish(axes, sheet, name, 1e3 / T)
    return sheet.figure


def save_ignition(found: Sweep, path: StrPath, replace: bool = False, width: str = "page") -> None:
    """Draws the ignition delays and writes them as PNG, SVG or PDF, by the suffix."""
    check_picture(path, replace)
    save(ignition(found, width), path, replace)


def _groups(found: Sweep) -> list[tuple[str, np.ndarray]]:
    """Name and cases of each set of conditions that differ in temperature alone; one without a name where there are many."""
    columns = [name for name in _WORDS if name in found and len(set(_listed(found[name]))) > 1]
    if not columns:
        return [("", np.arange(len(found)))]
    rows = list(zip(*(_listed(found[name]) for name in columns), strict=True))
    distinct = sorted(set(rows), key=lambda row: tuple((isinstance(v, str), v) for v in row))
    if len(distinct) > MOST_CURVES:
        return [("", np.arange(len(found)))]
    return [(", ".join(map(_named, columns, row)), np.array([k for k, other in enumerate(rows) if other == row]))
            for row in distinct]


def _listed(values: Any) -> list[Any]:
    return list(values) if isinstance(values, tuple) else [float(f"{v:.6g}") for v in values]


def _named(column: str, value: Any) -> str:
    word, unit, size = _WORDS[column]
    text = value if isinstance(value, str) else f"{value / size:.4g}"
    return " ".join(filter(None, [f"{word} =" if word in ("p", "φ") else word, text, unit]))


def _room(groups: Sequence[tuple[str, np.ndarray]], size: style.Size) -> float:
    widest = max(style.text_width(name, size.text) for name, _ in groups)
    return widest + 15.0 if widest else style.RIM + 2.0


def _draw(axes: Axes, groups: Sequence[tuple[str, np.ndarray]], x: np.ndarray, y: np.ndarray, size: style.Size) -> None:
    styles, handles = style.line_styles(), []
    joined = len(groups) > 1 or len(np.unique(x)) == len(x)
    for name, cases in groups:
        colour, dashes = next(styles)
        some = cases[np.argsort(x[cases])]
        there = some[np.isfinite(y[some])]
        axes.plot(x[there], y[there], color=colour, linestyle=dashes if joined and len(groups) <= MOST_CURVES else "none",
                  linewidth=size.line, marker="o", markersize=2.6, markeredgewidth=0.0)
        none = some[~np.isfinite(y[some])]
        axes.plot(x[none], np.full(none.size, 0.985), color=colour, linestyle="none", marker="^", markersize=3.6,
                  markerfacecolor="white", markeredgewidth=0.6, transform=axes.get_xaxis_transform(), clip_on=False)
        handles.append(Line2D([], [], color=colour, linestyle=dashes, linewidth=size.line, marker="o", markersize=2.6,
                              markeredgewidth=0.0, label=name))
    if groups[0][0]:
        axes.legend(handles=handles, loc="upper left", bbox_to_anchor=(1.01, 1.0), frameon=False, fontsize=size.text,
                    handlelength=2.6, handletextpad=0.6, borderaxespad=0.0, labelspacing=0.35)


def _finish(axes: Axes, sheet: Sheet, unit: str, x: np.ndarray) -> None:
    margin = 0.02 * (float(np.ptp(x)) or 0.1)
    axes.set_xlim(float(x.min()) - margin, float(x.max()) + margin)
    axes.margins(y=0.08)
    axes.set_xlabel("1000 K / temperature at the start")
    axes.set_ylabel(f"time of steepest rise / {unit}")
    axes.yaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
    upper = axes.secondary_xaxis("top", functions=(_swapped, _swapped))
    upper.xaxis.set_major_locator(MaxNLocator(6, steps=[1, 2, 5, 10]))
    upper.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g} K"))
    upper.tick_params(labelsize=sheet.size.small, length=2.0)


def _swapped(values: Any) -> Any:
    """1000/x, both ways."""
    with np.errstate(divide="ignore"):
        return 1e3 / np.maximum(np.asarray(values, dtype=float), 1e-9)


def _words(found: Sweep) -> Words:
    none = int(np.sum(~np.isfinite(found["steepest_rise"])))
    facts = counted(len(found), "case") + (f"; {none} without a steep rise (open marks above)" if none else "")
    hotter = np.nanmax(found["end_temperature"] - found["start_temperature"], initial=0.0)
    notes = f"Caution: {CAUTION}" if hotter > NOTABLE_RISE["temperature"] else ""
    isothermal = "" if "isothermal" not in found["heat"] else ", of pressure where isothermal"
    return Words(found.title, f"{facts}; time of the steepest rise of temperature{isothermal}", "", notes,
                 f"bothways {found.program_version}")
