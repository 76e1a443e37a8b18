"""Where a label may stand: geometry only, in points from the lower left corner of a panel."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from .parts import Array

Box = tuple[float, float, float, float]
"""Left, bottom, right, top [pt]."""

CLEAR, NEAR = 0.8, 4.5
"""Another line must keep the one distance from a label [pt]; any line within the other seems to be meant by it."""
BETWEEN = 3.0
"""Between labels side by side [pt]."""
AMBIGUOUS = 120.0
"""What it costs if all of them are others, in points of distance from the highest point of its own."""
_DIRECTIONS = np.array([(0.0, 1.0), (-1.0, 0.0), (1.0, 0.0), (-0.8, 0.8), (0.8, 0.8), (0.0, -1.0), (-0.8, -0.8),
                        (0.8, -0.8)])


def spread(wanted: Sequence[float], apart: float, low: float, high: float) -> Array:
    """Positions nearest (least squares) to the wanted ones, at least `apart` and within low..high if they fit.

    With z_i = y_i - i·apart the condition is that z does not fall: isotonic regression (pool adjacent violators).
    """
    order = np.argsort(wanted, kind="stable")
    steps = apart * np.arange(len(order))
    z = _isotonic(np.asarray(wanted, dtype=np.float64)[order] - steps)
    places = np.empty(len(order))
    places[order] = np.clip(z, low, max(low, high - steps[-1])) + steps if len(order) else z
    return places


def _isotonic(values: Array) -> Array:
    """The nearest sequence that does not fall."""
    blocks: list[list[float]] = []
    for value in values:
        blocks.append([float(value), 1.0])
        while len(blocks) > 1 and blocks[-2][0] > blocks[-1][0]:
            (a, m), (b, n) = blocks[-2:]
            blocks[-2:] = [[(m * a + n * b) / (m + n), m + n]]
    return np.array([mean for mean, count in blocks for _ in range(int(count))])


def dense(path: Array, step: float = 1.0) -> Array:
    """The path (n, 2) with points between its own, about `step` apart; points that are not finite are dropped."""
    path = path[np.isfinite(path).all(axis=1)]
    if len(path) < 2:
        return path
    path = np.clip(path, -1e3, 1e4)
    along = np.append(0.0, np.cumsum(np.hypot(*np.diff(path, axis=0).T)))
    at = np.linspace(0.0, along[-1], int(along[-1] / step) + 2)
    return np.column_stack([np.interp(at, along, path[:, 0]), np.interp(at, along, path[:, 1])])


def best_place(own: Array, others: Array, extent: Array, text: Array, taken: Sequence[Box]) -> tuple[float, Box] | None:
    """The cheapest free box for a label beside a line, with its cost; None if there is none.

    own, others : (n, 2) dense points of the line and of all others; extent, text : (2) sizes of panel and label.
    """
    seen = own[((own >= 0) & (own <= extent)).all(axis=1)]
    if not len(seen):
        return None
    boxes, cost = _candidates(seen, text)
    own_ink, other_ink = _Ink(own, extent), _Ink(others, extent)
    free = _inside(boxes, extent) & _apart(boxes, taken)
    free &= (own_ink.within(boxes) == 0) & (other_ink.within(boxes, CLEAR) == 0)
    if not free.any():
        return None
    meant, others_near = own_ink.within(boxes, NEAR), other_ink.within(boxes, NEAR)
    cost = np.where(free, cost + AMBIGUOUS * others_near / np.maximum(meant + others_near, 1.0), np.inf)
    k = int(np.argmin(cost))
    x0, y0, x1, y1 = map(float, boxes[k])
    return float(cost[k]), (x0, y0, x1, y1)


def _candidates(seen: Array, text: Array) -> tuple[Array, Array]:
    """Boxes (n, 4) on all sides along the line and their costs (n): the distance from its highest point."""
    points = seen[:: max(1, len(seen) // 160)]
    centres = (points[:, None, :] + _DIRECTIONS * (0.5 * text + [2.5, 1.5])).reshape(-1, 2)
    away = np.hypot(*(points - seen[np.argmax(seen[:, 1])]).T)
    return np.hstack([centres - 0.5 * text, centres + 0.5 * text]), np.repeat(away, len(_DIRECTIONS))


def _inside(boxes: Array, extent: Array) -> NDArray[np.bool_]:
    x0, y0, x1, y1 = boxes.T
    return np.asarray((x0 >= 2.0) & (y0 >= 1.0) & (x1 <= extent[0] - 1.0) & (y1 <= extent[1]))


def _apart(boxes: Array, taken: Sequence[Box]) -> NDArray[np.bool_]:
    free = np.ones(len(boxes), dtype=bool)
    for x0, y0, x1, y1 in taken:
        beside = (boxes[:, 0] >= x1 + BETWEEN) | (boxes[:, 2] <= x0 - BETWEEN)
        free &= beside | (boxes[:, 1] >= y1) | (boxes[:, 3] <= y0)
    return free


class _Ink:
    """Counts of points in boxes, from a summed-area table of cells of 1 pt (F. C. Crow, SIGGRAPH 1984, 207,
    doi:10.1145/800031.808600)."""

    def __init__(self, points: Array, extent: Array) -> None:
        self.size = np.ceil(extent).astype(int) + 1
        inside = points[((points >= 0) & (points < self.size)).all(axis=1)].astype(int)
        cells = np.zeros(self.size + 1)
        np.add.at(cells, (inside[:, 0] + 1, inside[:, 1] + 1), 1.0)
        self.table = cells.cumsum(axis=0).cumsum(axis=1)

    def within(self, boxes: Array, rim: float = 0.0) -> Array:
        """How many points lie in each box or within `rim` of it, to the cell."""
        low = np.clip(np.floor(boxes[:, :2] - rim).astype(int), 0, self.size)
        high = np.clip(np.ceil(boxes[:, 2:] + rim).astype(int), 0, self.size)
        t = self.table
        return t[high[:, 0], high[:, 1]] - t[low[:, 0], high[:, 1]] - t[high[:, 0], low[:, 1]] + t[low[:, 0], low[:, 1]]
