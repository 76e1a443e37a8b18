"""Rate constants tabulated at several pressures: ln k linear in ln p between them, the end rows beyond.

k(T) at each pressure is a modified Arrhenius expression; rows at one pressure add up. The usual presentation of master
equation results (J.A. Miller, S.J. Klippenstein, J. Phys. Chem. A 110 (2006) 10528, doi:10.1021/jp062693x, discuss what
such k(T, p) mean). p is the pressure of the gas, whatever it is made of.
"""

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass

from ..entry import Entry
from .arrhenius import Arrhenius, read_expression
from .law import PRESSURE, Expression, Fault, Law, LawContext, PressureNodes

NAME = "pressure table"
PARTNER = PRESSURE


@dataclass(frozen=True)
class PressureTable(Law):
    """Rising pressures [Pa], and for each the expressions that add up."""

    pressures: tuple[float, ...]
    rows: tuple[tuple[Arrhenius, ...], ...]

    def k(self, temperature: float, partner: float = 1.0, pressure: float = 1e5) -> float:
        """k at T [K] and pressure [Pa]; no partner takes part."""
        p = self.pressures
        high = min(max(sum(node <= pressure for node in p), 1), len(p) - 1) if len(p) > 1 else 0
        low = max(high - 1, 0)
        if pressure <= p[low] or low == high:
            return self._at(low, temperature)
        if pressure >= p[high]:
            return self._at(high, temperature)
        share = math.log(pressure / p[low]) / math.log(p[high] / p[low])
        return self._at(low, temperature) ** (1 - share) * self._at(high, temperature) ** share

    def _at(self, node: int, temperature: float) -> float:
        return sum(row.k(temperature) for row in self.rows[node])

    def expressions(self) -> tuple[Expression, ...]:
        """One a row, in the order of the pressures."""
        return tuple(e for rows in self.rows for row in rows for e in row.expressions())

    def part(self) -> PressureNodes:
        """Logarithms of the pressures and the number of rows at each."""
        return PressureNodes(tuple(map(math.log, self.pressures)), tuple(map(len, self.rows)))

    def fault(self, temperatures: Sequence[float]) -> Fault | None:
        """Overflow of a row, or a sum of rows that is not positive."""
        for fault in (row.fault(temperatures) for rows in self.rows for row in rows):
            if fault:
                return fault
        for node, rows in enumerate(self.rows):
            if any(row.A < 0 for row in rows):
                for temperature in temperatures:
                    if not self._at(node, temperature) > 0:
                        return Fault(f"the rows at {self.pressures[node]:g} Pa add up to {self._at(node, temperature):.4g}",
                                     temperature, f"a positive sum from {temperatures[0]:g} to {temperatures[-1]:g} K")
        return None


def read(entry: Entry, context: LawContext) -> PressureTable:
    """The law from its table; A may be negative where several rows share a pressure. Rows may stand in any order."""
    example = "[{ p = 1e5, A = 1e9, n = 0.0, Ea = 50e3 }, …]"
    stated = entry.items("rows", example=example)
    if not stated:
        raise entry.error("no rows", expected=f"a list such as {example}", key="rows")
    tables = [entry.sub(data, f"{entry.place}.rows[{k}]") for k, data in enumerate(stated, 1)]
    pressures = [table.quantity("p", "pressure", sign="positive") for table in tables]
    rows = []
    for table, p in zip(tables, pressures, strict=True):
        sign = "not zero" if pressures.count(p) > 1 else "positive"
        rows.append((p, read_expression(table, context.order, sign)))
        table.done()
    rows.sort(key=lambda row: row[0])
    groups = [(p, tuple(row for _, row in group)) for p, group in itertools.groupby(rows, key=lambda row: row[0])]
    return PressureTable(tuple(p for p, _ in groups), tuple(group for _, group in groups))
