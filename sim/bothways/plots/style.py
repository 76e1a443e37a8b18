"""What all figures share: sizes, type, colours, dashes, and the width of a text.

Colours: the palette of M. Okabe and K. Ito, Color Universal Design (2008), as printed by B. Wong, Nature Methods 8
(2011) 441, doi:10.1038/nmeth.1618; its yellow is left out, for it is too pale for a line on white paper.
"""

import functools
import re
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import Any, ParamSpec

import matplotlib.style
from matplotlib.colors import to_rgb
from matplotlib.figure import Figure
from matplotlib.font_manager import FontProperties
from matplotlib.textpath import TextPath

from ..errors import InputError

P = ParamSpec("P")

INCH = 25.4
POINT = INCH / 72.0
RIM = 3.0
"""Lengths are in mm, type sizes in points. RIM: what stays white round the sheet."""
LEADING, LINE_HEIGHT = 1.22, 1.3
"""Distance of labels and of lines of text from one another, in type sizes [-]."""

PALETTE = {"blue": "#0072B2", "vermilion": "#D55E00", "bluish green": "#009E73", "reddish purple": "#CC79A7",
           "orange": "#E69F00", "black": "#000000", "sky blue": "#56B4E9"}
DASHES: tuple[Any, ...] = ("-", (0, (5.0, 1.4)), (0, (4.0, 1.2, 1.2, 1.2)), (0, (1.4, 1.1)))
MOST_LINES = len(PALETTE) * len(DASHES)
"""So many lines of one figure differ in colour or dashes (the two counts share no divisor)."""
BLACK, GREY, PALE, ALERT = "#000000", "#555555", "#E8E8E8", "#A83C00"

_FAMILY = "DejaVu Sans"  # comes with matplotlib: the same figure everywhere
_FONTS = {weight: FontProperties(family=_FAMILY, weight=weight) for weight in ("normal", "bold")}
_TICKS = {"major.pad": 2.0, "major.size": 2.6, "minor.size": 1.5, "major.width": 0.5, "minor.width": 0.4}
_RC = {
    "font.family": _FAMILY, "mathtext.fontset": "dejavusans", "text.hinting": "no_hinting",  # as wide as `text_width` says
    "axes.linewidth": 0.5, "axes.edgecolor": "#333333", "axes.labelpad": 2.5, "axes.formatter.useoffset": False,
    "axes.spines.top": False, "axes.spines.right": False, "axes.xmargin": 0.0,
    **{f"{x}tick.{name}": value for x in "xy" for name, value in _TICKS.items()},
    "lines.solid_capstyle": "butt", "lines.dash_capstyle": "butt",
    "pdf.fonttype": 42, "svg.fonttype": "path", "svg.hashsalt": "bothways",
}


@dataclass(frozen=True)
class Size:
    """A figure's width [mm], type sizes [pt], line width [pt] and scale of the panels' heights [-]."""

    width: float
    text: float
    small: float
    line: float
    scale: float


SIZES = {"page": Size(width=180.0, text=8.0, small=6.5, line=1.2, scale=1.0),
         "column": Size(width=85.0, text=7.0, small=6.0, line=1.0, scale=0.82)}


def size_named(width: str) -> Size:
    """The size of that name."""
    if width not in SIZES:
        raise InputError(f"unknown width '{width}'", expected=" or ".join(SIZES))
    return SIZES[width]


def settings() -> Any:
    """A context of matplotlib's defaults with ours upon them; the caller's return after it."""
    return matplotlib.style.context(["default", _RC])


def styled(draw: Callable[P, Figure]) -> Callable[P, Figure]:
    """A drawing function under our settings."""
    @functools.wraps(draw)
    def drawn(*args: P.args, **kwargs: P.kwargs) -> Figure:
        with settings():
            return draw(*args, **kwargs)

    return drawn


def line_styles() -> Iterator[tuple[str, Any]]:
    """Pairs of colour and dashes, neighbours differing in both, `MOST_LINES` of them."""
    colours = list(PALETTE.values())
    return ((colours[k % len(colours)], DASHES[k % len(DASHES)]) for k in range(MOST_LINES))


def darker(colour: str, share: float = 0.25) -> tuple[float, ...]:
    """A colour for text beside a line: thin strokes need more contrast than a line does."""
    return tuple((1.0 - share) * part for part in to_rgb(colour))


@functools.lru_cache(maxsize=4096)
def text_width(text: str, points: float, weight: str = "normal") -> float:
    """The width of a text [mm]."""
    if not text.strip():
        return 0.0
    return float(TextPath((0, 0), text, size=points, prop=_FONTS[weight]).get_extents().width) * POINT


def wrapped(text: str, points: float, width: float, weight: str = "normal") -> list[str]:
    """The text in lines no wider than `width` [mm], broken at spaces, but not at those that do not break."""
    lines: list[str] = []
    for word in filter(None, re.split(r"[ \t\r\n]+", text)):
        if lines and text_width(f"{lines[-1]} {word}", points, weight) <= width:
            lines[-1] += f" {word}"
        else:
            lines.append(word)
    return lines
