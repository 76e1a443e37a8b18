"""The sheet: where header, panels and footer stand on paper, to the millimetre."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from .style import ALERT, GREY, INCH, LINE_HEIGHT, POINT, RIM, Size, text_width, wrapped

GAP = 3.0
"""Between panels [mm, on a page]."""

Line = tuple[str, float, dict[str, Any]]


@dataclass(frozen=True)
class Words:
    """What is written round the panels: title, facts and alert above them, notes and the program at the foot."""

    title: str
    facts: str = ""
    alert: str = ""
    notes: str = ""
    program: str = ""


@dataclass(frozen=True)
class Margins:
    """Room [mm] at the left for numbers and label, at the right for labels of lines, above for marks, below for the axis."""

    left: float
    right: float
    above: float
    below: float


@dataclass
class Sheet:
    """A figure with its panels: rows of axes from the top."""

    figure: Figure
    size: Size
    margins: Margins
    axes: list[list[Axes]] = field(default_factory=list)

    @property
    def height(self) -> float:
        """[mm]."""
        return float(self.figure.get_size_inches()[1]) * INCH

    def kept_within(self, centre: float, width: float) -> float:
        """The centre nearest to `centre` at which a text of that width is on the sheet [mm]."""
        return min(max(centre, RIM + 0.5 * width), self.size.width - RIM - 0.5 * width)

    def write(self, x: float, y: float, text: str, points: float, **how: Any) -> None:
        """A text at x from the left and y from the top [mm]."""
        self.figure.text(x / self.size.width, 1.0 - y / self.height, text, fontsize=points, va="baseline", **how)


def empty_sheet(size: Size, heights: Sequence[float], columns: int, margins: Margins, words: Words) -> Sheet:
    """Header, footer and empty axes: a row for each height [mm], so many columns."""
    head, notes = _head_lines(size, words), _note_lines(size, words)
    top = RIM + sum(_down(points) for _, points, _ in head) + margins.above
    gap = GAP * size.scale
    total = top + sum(heights) + gap * (len(heights) - 1) + margins.below + len(notes) * _down(size.small) + 1.5
    figure = Figure(figsize=(size.width / INCH, total / INCH))
    FigureCanvasAgg(figure)
    sheet = Sheet(figure, size, margins)
    _write_head(sheet, head)
    _write_foot(sheet, notes, words.program)
    _add_axes(sheet, heights, columns, top, gap)
    return sheet


def _down(points: float) -> float:
    return LINE_HEIGHT * points * POINT


def _head_lines(size: Size, words: Words) -> list[Line]:
    """The header's lines with their type."""
    parts: list[Line] = [(words.title, size.text + 1.0, {"fontweight": "bold"}), (words.facts, size.small, {"color": GREY}),
                         (words.alert, size.text, {"color": ALERT, "fontweight": "bold"})]
    return [(line, points, how) for text, points, how in parts
            for line in wrapped(text, points, size.width - 2.0 * RIM, how.get("fontweight", "normal"))]


def _note_lines(size: Size, words: Words) -> list[str]:
    """The footer's lines; the program's name shares the last one if there is room."""
    room = size.width - 2.0 * RIM
    lines = wrapped(words.notes, size.small, room)
    left = room - 4.0 - text_width(words.program, size.small)
    return lines if lines and text_width(lines[-1], size.small) <= left else [*lines, ""]


def _write_head(sheet: Sheet, head: Sequence[Line]) -> None:
    y = RIM - 1.0
    for line, points, how in head:
        y += _down(points)
        sheet.write(RIM, y, line, points, **how)


def _write_foot(sheet: Sheet, notes: Sequence[str], program: str) -> None:
    points, last = sheet.size.small, sheet.height - 1.8
    for k, line in enumerate(reversed(notes)):
        sheet.write(RIM, last - k * _down(points), line, points, color=GREY)
    sheet.write(sheet.size.width - RIM, last, program, points, color=GREY, ha="right")


def _add_axes(sheet: Sheet, heights: Sequence[float], columns: int, top: float, gap: float) -> None:
    left, right = sheet.margins.left, sheet.margins.right
    width = (sheet.size.width - left - right - gap * (columns - 1)) / columns
    for k, height in enumerate(heights):
        y = top + sum(heights[:k]) + gap * k
        sheet.axes.append([_axes(sheet, left + j * (width + gap), y, width, height) for j in range(columns)])


def _axes(sheet: Sheet, x: float, y: float, width: float, height: float) -> Axes:
    """Axes whose upper left corner is at x, y [mm]; all ordinates' labels stand in line at the rim."""
    w, h, points = sheet.size.width, sheet.height, sheet.size.text
    axes = sheet.figure.add_axes((x / w, 1.0 - (y + height) / h, width / w, height / h))
    axes.tick_params(which="both", labelsize=points)
    axes.xaxis.label.set_fontsize(points)
    axes.yaxis.label.set_fontsize(points)
    axes.yaxis.set_label_coords(-(x - RIM - 0.75 * points * POINT) / width, 0.5)
    return axes
