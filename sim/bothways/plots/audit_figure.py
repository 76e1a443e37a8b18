"""An audit as a figure: decades above the collision rate, published against derived reverse constants, jumps of K."""

import math

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator, NullFormatter

from ..audit import Audit
from ..audit.encounters import FORWARD, REVERSE, all_decades
from ..audit.findings.jumps_of_K import all_jumps
from ..audit.findings.published_reverse import pairs
from ..outfile import StrPath
from ..version import program_version
from . import style
from .parts import Array, power_of_ten
from .saving import check_picture, save
from .sheet import Margins, Sheet, Words, empty_sheet
from .style import POINT, RIM, Size
from .words import capitalised

LOWEST = -12.0
"""Decades below the collision rate that the histogram shows; what is further below stands in its first bar."""
_HEIGHTS = (42.0, 52.0)  # mm
_WIDEST = 0.5
_COLOURS = {FORWARD: style.PALETTE["sky blue"], REVERSE: style.PALETTE["vermilion"]}


@style.styled
def audit_figure(audit: Audit) -> Figure:
    """The figure, for a page (180 mm)."""
    size = style.size_named("page")
    sheet = empty_sheet(size, [h * size.scale for h in _HEIGHTS], 1, _margins(size), _words(audit))
    (top,), (bottom,) = sheet.axes
    _lift(sheet, top)
    _collisions(top, audit, size)
    left, right = _split(sheet, bottom)
    _parity(left, audit, size)
    _jumps(right, audit, size)
    return sheet.figure


def save_audit_figure(audit: Audit, path: StrPath, replace: bool = False) -> None:
    """Draws the figure and writes it as PNG, SVG or PDF, by the suffix."""
    check_picture(path, replace)
    save(audit_figure(audit), path, replace)


def _margins(size: Size) -> Margins:
    return Margins(RIM + (0.75 * size.text + 7.5) * POINT + style.text_width("10⁻¹⁰", size.text), RIM + 2.0,
                   above=0.6 * size.small * POINT, below=2.5 * 1.25 * size.text * POINT)


def _words(audit: Audit) -> Words:
    m, survey = audit.survey.mechanism, audit.survey
    p = ", ".join(f"{value / 1e5:.4g}" for value in survey.pressures)
    T = survey.temperatures
    facts = f"{len(m.species)} species, {len(m.reactions)} reactions; {T[0]:g} to {T[-1]:g} K" + f"; {p} bar" * survey.is_gas
    found = ", ".join(f"{n} {severity}{'s' * (n != 1)}" for severity, n in audit.counts.items())
    return Words(capitalised(f"audit of {m.name}"), facts, notes=f"Found: {found}.", program=f"bothways {program_version()}")


def _lift(sheet: Sheet, axes: Axes) -> None:
    """Makes room for the abscissa of the upper panel, by its own height."""
    box, room = axes.get_position(), 2.6 * sheet.size.text * POINT / sheet.height
    axes.set_position((box.x0, box.y0 + room, box.width, box.height - room))


def _split(sheet: Sheet, axes: Axes) -> tuple[Axes, Axes]:
    """Two axes in the place of one, with room for the right one's ordinate between."""
    box, gap = axes.get_position(), (sheet.margins.left + 2.0) / sheet.size.width
    half = 0.5 * (box.width - gap)
    axes.set_position((box.x0, box.y0, half, box.height))
    other = sheet.figure.add_axes((box.x0 + half + gap, box.y0, half, box.height))
    other.tick_params(which="both", labelsize=sheet.size.text)
    for label in (other.xaxis.label, other.yaxis.label):
        label.set_fontsize(sheet.size.text)
    other.yaxis.set_label_coords(-(sheet.margins.left - RIM - 0.75 * sheet.size.text * POINT) / (half * sheet.size.width), 0.5)
    return axes, other


def _collisions(axes: Axes, audit: Audit, size: Size) -> None:
    """Histogram of the decades by which constants of two molecules exceed the collision rate."""
    found = all_decades(audit.survey)
    known = {name: np.maximum(values[np.isfinite(values)], LOWEST) for name, values in found.items()}
    top = max([1.0, *(math.ceil(float(v.max())) for v in known.values() if v.size)])
    edges = np.arange(LOWEST, top + _WIDEST, _WIDEST)
    labels = [f"{name} ({len(v)}, {np.count_nonzero(v > 0)} above)" for name, v in known.items()]
    axes.hist(list(known.values()), bins=edges.tolist(), color=[_COLOURS[name] for name in known], label=labels, zorder=2)
    axes.axvline(0.0, color=style.BLACK, linewidth=0.8, zorder=3)
    axes.set_xlabel("largest decades above the collision rate")
    axes.set_xlim(LOWEST, top)
    _count_axis(axes)
    axes.legend(loc="best", fontsize=size.small, frameon=False)


def _count_axis(axes: Axes) -> None:
    """Counts on a logarithmic axis from below one, so that single ones are seen."""
    axes.set_ylim(0.7, max(2.0 * axes.get_ylim()[1], 12.0))
    axes.set_yscale("log")
    axes.yaxis.set_minor_formatter(NullFormatter())
    axes.set_ylabel("number")


def _parity(axes: Axes, audit: Audit, size: Size) -> None:
    """Published against derived reverse constants over the working range, each a line."""
    found = pairs(audit.survey)
    axes.set_xlabel("log₁₀ k derived (m³, mol, s)")
    axes.set_ylabel("log₁₀ k published")
    if not found:
        _nothing(axes, "no reverse constants are published", size)
        return
    curves = [(derived / np.log(10.0), published / np.log(10.0)) for published, derived in found.values()]
    values = np.concatenate([np.concatenate(pair) for pair in curves])
    low, high = _round_limits(values[np.isfinite(values)])
    for shift, dashes in ((0.0, "-"), (1.0, (0, (4, 2))), (-1.0, (0, (4, 2)))):
        axes.plot([low, high], [low + shift, high + shift], color=style.GREY, linewidth=0.5, linestyle=dashes, zorder=1)
    for (x, y), (colour, line) in zip(curves, _cycled(len(curves)), strict=True):
        axes.plot(x, y, color=colour, linestyle=line, linewidth=size.line, marker="o", markersize=1.5, zorder=2)
    axes.set_xlim(low, high)
    axes.set_ylim(low, high)
    axes.text(0.03, 0.93, "dashed: a factor of 10", transform=axes.transAxes, fontsize=size.small, color=style.GREY)


def _cycled(count: int) -> list:
    styles = list(style.line_styles())
    return [styles[k % len(styles)] for k in range(count)]


def _round_limits(values: Array) -> tuple[float, float]:
    low, high = (float(f(values)) for f in (np.min, np.max)) if values.size else (0.0, 1.0)
    room = max(0.05 * (high - low), 0.5)
    return math.floor(low - room), math.ceil(high + room)


def _jumps(axes: Axes, audit: Audit, size: Size) -> None:
    """Histogram of the largest jump of ln K of each reaction, on a logarithmic axis."""
    _, jumps = all_jumps(audit.survey)
    largest = np.max(np.abs(jumps), axis=0) if len(jumps) else np.zeros(0)
    shown = np.log10(largest[largest > 1e-8])
    axes.set_xlabel("largest jump of ln K at a join")
    if not shown.size:
        axes.set_ylabel("number")
        _nothing(axes, "no range joins", size)
        return
    low, high = math.floor(float(shown.min())), max(1, math.ceil(float(shown.max())))
    axes.hist(shown, bins=np.arange(low, high + 0.25, 0.25).tolist(), color=style.PALETTE["blue"], zorder=2)
    axes.axvline(math.log10(math.log(2.0)), color=style.BLACK, linewidth=0.8, zorder=3)
    axes.annotate("a factor of 2", (math.log10(math.log(2.0)), 1.0), xycoords=("data", "axes fraction"), xytext=(-2, -2),
                  textcoords="offset points", ha="right", va="top", fontsize=size.small, rotation=90)
    axes.set_xlim(low, high)
    axes.xaxis.set_major_locator(MaxNLocator(7, integer=True))
    axes.xaxis.set_major_formatter(lambda value, _: power_of_ten(round(value)))
    _count_axis(axes)


def _nothing(axes: Axes, text: str, size: Size) -> None:
    axes.set_xticks([])
    axes.set_yticks([])
    axes.text(0.5, 0.5, text, transform=axes.transAxes, ha="center", va="center", fontsize=size.text, color=style.GREY)
