"""An equilibrium constant as a reaction states it: K at a temperature, with ΔH and ΔCp there and their uncertainties."""

import math
from collections.abc import Mapping
from dataclasses import dataclass

from ..entry import Entry

SPREAD_K, SPREAD_H, SPREAD_CP = 0.01, 100.0, 1.0
"""Uncertainties where none are stated: 1 % of K, 0.1 kJ/mol of ΔH, 1 J/(mol K) of ΔCp (our own choice)."""
_KEYS = ("K", "dH", "dCp")


@dataclass(frozen=True)
class StatedEquilibrium:
    """K [-] over the standard state at a temperature `at` [K]; dH [J/mol] and dCp [J/(mol K)] there.

    dCp : constant; None where it is not stated. spread : uncertainties of ln K [-], dH and dCp.
    """

    K: float
    at: float
    dH: float
    dCp: float | None
    spread: tuple[float, float, float]


def read_equilibrium(entry: Entry) -> StatedEquilibrium | None:
    """The key `equilibrium` of a reaction, if it is there; errors: K or temperature not positive, numbers not finite."""
    if entry.get("equilibrium", None) is None:
        return None
    table = entry.table("equilibrium")
    K, at = table.number("K", sign="positive"), table.quantity("at", "temperature", sign="positive")
    dH, dCp = table.quantity("dH", "molar energy"), table.quantity("dCp", "molar heat capacity", None)
    spread = _spread(table)
    table.done()
    return StatedEquilibrium(K, at, dH, dCp, spread)


def _spread(table: Entry) -> tuple[float, float, float]:
    """The uncertainty: a number, relative in K, or a table of K, dH and dCp."""
    stated = table.get("uncertainty", {})
    inner = table.sub(stated if isinstance(stated, Mapping) else {"K": stated}, f"{table.place}.uncertainty")
    K = inner.number("K", SPREAD_K, "positive")
    H = inner.quantity("dH", "molar energy", SPREAD_H, "positive")
    Cp = inner.quantity("dCp", "molar heat capacity", SPREAD_CP, "positive")
    inner.done(also=_KEYS)
    return math.log1p(K), H, Cp
