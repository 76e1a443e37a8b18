"""Symbolic part of the sparse LU: ordering, fill, and where each value of the Jacobian goes. Done once.

Minimum degree on the symmetrised pattern (A. George, J.W.H. Liu, SIAM Rev. 31 (1989) 1, doi:10.1137/1031001), the
last `tail` unknowns kept last, since their rows and columns are full.
"""

from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from ..lanes import padded
from .full_block import block_size

INDEXED, ROW, EIGHT, BLOCK = 0.55, 4.0, 0.8, 0.055
"""Times as measured: of an operation whose place is looked up, of one row less a multiple of another and of each eight of
its columns in the block, of the block by its width cubed [ns]; only their ratios count."""
LARGEST_BLOCK = 400
"""A full block is tried up to this size."""


@dataclass(frozen=True)
class SparsePlan:
    """Static pattern of L + U of a permuted matrix, by rows.

    order : (n) original index of each permuted one.
    start, column : rows of L + U in compressed form, columns rising, without the columns of the full block at the end,
        whose rows stand whole behind them. diagonal : (rows before the block) place of each diagonal entry.
    target : place in all this of each value of the compressed-column input.
    """

    order: np.ndarray
    start: np.ndarray
    column: np.ndarray
    diagonal: np.ndarray
    target: np.ndarray

    @property
    def fill(self) -> int:
        """Entries of L + U and of the full block's own arrays."""
        return len(self.column) + int(block_size(len(self.order), len(self.order) - len(self.diagonal)))


def plan_of(rows: np.ndarray, starts: np.ndarray, tail: int) -> SparsePlan:
    """The plan of a pattern (uint32), made once: many runs share one."""
    return _plan_of_bytes(rows.tobytes(), starts.tobytes(), tail)


@lru_cache(maxsize=16)
def _plan_of_bytes(rows: bytes, starts: bytes, tail: int) -> SparsePlan:
    return plan(np.frombuffer(rows, np.uint32), np.frombuffer(starts, np.uint32).astype(np.int64), tail)


def plan(rows: np.ndarray, starts: np.ndarray, tail: int) -> SparsePlan:
    """The plan for a square matrix with compressed columns (rows, starts); a full diagonal is assumed."""
    n = len(starts) - 1
    neighbours = _graph(rows, starts, n)
    order, filled = _eliminate(neighbours, n, tail)
    place = np.empty(n, dtype=np.int64)
    place[order] = np.arange(n)
    dense = _first_full_row([place[np.array(filled[k], dtype=np.int64)] for k in order.tolist()])
    start, column, diagonal = _rows_of_factors(order, filled, place, dense)
    lookup = {(i, j): k for i in range(n) for k, j in
              enumerate(column[start[i] : start[i + 1]].tolist(), start[i])}
    wide = int(padded(n - dense))
    lookup |= {(i, dense + j): start[n] + i * wide + j for i in range(n) for j in range(n - dense)}
    columns = np.repeat(np.arange(n), np.diff(starts))
    target = [lookup[i, j] for i, j in zip(place[rows].tolist(), place[columns].tolist(), strict=True)]
    return SparsePlan(order.astype(np.uint32), start.astype(np.uint32), column.astype(np.uint32),
                      diagonal.astype(np.uint32), np.array(target, dtype=np.uint32))


def _first_full_row(filled: list[np.ndarray]) -> int:
    """Where the full block best begins, an odd number of eights before the end, by the time that its size costs.

    filled : of each eliminated unknown, where its neighbours that are eliminated later stand.
    """
    n = len(filled)
    ahead = np.array([len(later) for later in filled], dtype=float)
    costs = {}
    for size in [s for s in range(8, n, 16) if s <= LARGEST_BLOCK] or [n]:
        first, wide = n - size, float(padded(size))
        near = np.array([np.count_nonzero(later < first) for later in filled[:first]], dtype=float)
        costs[first] = (INDEXED * float(ahead[:first] @ near) + (ROW + EIGHT * wide / 8.0) * float(ahead[:first].sum())
                        + BLOCK * wide**3)
    return min(costs, key=lambda first: (costs[first], -first))


def _graph(rows: np.ndarray, starts: np.ndarray, n: int) -> list[set[int]]:
    neighbours: list[set[int]] = [set() for _ in range(n)]
    for j in range(n):
        for i in rows[starts[j] : starts[j + 1]].tolist():
            if i != j:
                neighbours[i].add(j)
                neighbours[j].add(i)
    return neighbours


def _eliminate(neighbours: list[set[int]], n: int, tail: int) -> tuple[np.ndarray, list[list[int]]]:
    """Elimination order and, for each unknown, its neighbours among those eliminated later."""
    last = set(range(n - tail, n))
    remaining = set(range(n - tail))
    order: list[int] = []
    later: list[list[int]] = [[] for _ in range(n)]
    while remaining:
        k = min(remaining, key=lambda v: (len(neighbours[v]), v))
        remaining.discard(k)
        _remove(k, neighbours, order, later)
    for k in sorted(last):
        _remove(k, neighbours, order, later)
    return np.array(order), later


def _remove(k: int, neighbours: list[set[int]], order: list[int], later: list[list[int]]) -> None:
    around = neighbours[k]
    later[k] = list(around)
    for v in around:
        neighbours[v].discard(k)
        neighbours[v] |= around
        neighbours[v].discard(v)
    order.append(k)
    neighbours[k] = set()


def _rows_of_factors(order: np.ndarray, later: list[list[int]], place: np.ndarray,
                     dense: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    n = len(order)
    rows: list[list[int]] = [[i] if i < dense else [] for i in range(n)]
    for k in order[:dense].tolist():
        for v in later[k]:
            rows[place[v]].append(int(place[k]))
            if place[v] < dense:
                rows[place[k]].append(int(place[v]))
    start = np.cumsum([0] + [len(row) for row in rows])
    column = np.concatenate([np.sort(np.array(row, dtype=np.int64)) for row in rows])
    diagonal = np.array([start[i] + int(np.searchsorted(column[start[i] : start[i + 1]], i)) for i in range(dense)],
                        dtype=np.int64)
    return start, column, diagonal
