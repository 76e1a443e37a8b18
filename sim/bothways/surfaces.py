"""Surfaces of a case, where a step must end and the method start anew: joins left as published, rows of pressure tables.

Between two surfaces the right-hand side is smooth: the fit that holds on the state's side goes on beyond the join for
REACH, in tables of the run's own, until the state changes over.
"""

from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np

from .case import Case
from .constants import GAS_CONSTANT as R
from .contents import Contents
from .kernels import layout
from .kernels import surfaces as kernel
from .kernels.molar import molar_functions
from .mechanism import Mechanism, Tables, table_view
from .thermo.polynomial import cp_h_s

REACH = 100.0
"""So far [K] a fit is used beyond its join by a step that is then shortened; its coefficients change at the join."""
WIDTH_T, WIDTH_LOG_P = 0.1, 1e-3
"""Hysteresis at first [K, -]."""
SMALLEST_JUMP = 1e-13
"""Of h/RT or s/R; smaller ones are round-off of coefficients that meet."""


@dataclass
class Surfaces:
    """The surfaces of a run. table : see kernels/surfaces.py. tops : places in `floats` that belong to each.

    floats, work : the run's own tables. jumps : energy that changing over added or took, relative to the thermal energy.
    """

    table: np.ndarray
    tops: list[np.ndarray]
    ints: np.ndarray
    floats: np.ndarray
    work: np.ndarray
    holds: str
    less: float
    crossings: int = 0
    jump: float = 0.0
    _scratch: np.ndarray = field(default_factory=lambda: np.empty(0), repr=False)

    def begin(self, amount: np.ndarray, T: float) -> None:
        """Sides and triggers for a start; one on a surface counts as above it, as the fits do."""
        for k, row in enumerate(self.table):
            value = kernel.quantity(row[kernel.KIND], amount, T)
            row[kernel.SIDE] = 1.0 if value >= row[kernel.PLACE] else -1.0
            near = abs(value - row[kernel.PLACE]) <= 1e-9 * max(1.0, abs(row[kernel.PLACE]))
            row[kernel.TRIGGER] = row[kernel.PLACE] - (row[kernel.SIDE] * row[kernel.WIDTH] if near else 0.0)
            self._set_tops(k)
        self._forget()

    def cross(self, amount: np.ndarray, T: float) -> float:
        """Changes over where a state is at a trigger or beyond; the energy that adds, in units of the state [J/m3 or J]."""
        before, crossed = self._energy(amount, T), False
        for k, row in enumerate(self.table):
            near = kernel.NEAR * max(1.0, abs(row[kernel.TRIGGER]))
            if row[kernel.SIDE] * (row[kernel.TRIGGER] - kernel.quantity(row[kernel.KIND], amount, T)) >= -near:
                kernel.change_over(self.table, k)
                self._set_tops(k)
                self.crossings += 1
                crossed = True
        if not crossed:
            return 0.0
        self._forget()
        added = self._energy(amount, T) - before
        self.jump = max(self.jump, abs(added) / (R * T * float(np.sum(amount))))
        return added

    def _set_tops(self, k: int) -> None:
        row = self.table[k]
        self.floats[self.tops[k]] = row[kernel.PLACE] - row[kernel.SIDE] * REACH

    def _forget(self) -> None:
        """What the tables of the run keep for a temperature stands for it no more."""
        slot = layout.offset_slot(layout.WORK, "seen")
        self.work[self.ints[slot] : self.ints[slot + 1]] = np.nan

    def _energy(self, amount: np.ndarray, T: float) -> float:
        molar = np.empty((4, amount.size))
        molar_functions(T, 0, self.ints, self.floats, *molar)
        return float(R * T * (amount @ (molar[1] - self.less)))


def surfaces_of(case: Case, tables: Tables, work: np.ndarray, everywhere: bool = False) -> Surfaces | None:
    """The surfaces of a case, None if it has none; everywhere : at joins that were closed as well (to measure it)."""
    places: list[tuple[float, float, list[int]]] = []
    if case.heat != "isothermal" and (everywhere or case.mechanism.joins != "closed"):
        places += [(kernel.TEMPERATURE, T, tops) for T, tops in joins(case.mechanism, tables, everywhere).items()]
    if case.holds == "volume":
        places += [(kernel.LOG_PRESSURE, float(p), []) for p in np.unique(table_view(tables, "node_log_p"))]
    if not places:
        return None
    table = np.zeros((len(places), kernel.SIZE))
    for row, (kind, place, _) in zip(table, places, strict=True):
        width = WIDTH_T if kind == kernel.TEMPERATURE else WIDTH_LOG_P
        row[[kernel.KIND, kernel.PLACE, kernel.WIDTH, kernel.FIRST_WIDTH]] = kind, place, width, width
    return Surfaces(table, [np.array(tops, dtype=int) for *_, tops in places], tables.ints, tables.floats.copy(), work,
                    case.holds, Contents(case.mechanism, tables).less(case.holds))


def joins(mechanism: Mechanism, tables: Tables, everywhere: bool = False) -> dict[float, list[int]]:
    """Temperatures [K] at which fits do not meet, rising, and where in `floats` the species' range tops stand."""
    start, first = table_view(tables, "range_start"), tables.ints[layout.offset_slot(layout.FLOATS, "range_top")]
    top, rows = table_view(tables, "range_top"), table_view(tables, "range_row").reshape(-1, 9)
    found: dict[float, list[int]] = {}
    for k in _inner(start.astype(int), len(mechanism.species)):
        below, above = cp_h_s(rows[k], top[k]), cp_h_s(rows[k + 1], top[k])
        if everywhere or max(abs(below[1] - above[1]), abs(below[2] - above[2])) > SMALLEST_JUMP * max(1.0, abs(below[1])):
            found.setdefault(float(top[k]), []).append(int(first) + k)
    return dict(sorted(found.items()))


def _inner(start: np.ndarray, count: int) -> Iterator[int]:
    """The ranges that another one of the same species follows."""
    for i in range(count):
        yield from range(start[i], start[i + 1] - 1)
