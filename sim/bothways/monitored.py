"""A case as the integrators take it: plain f and J, and the compiled form with the judge of every step."""

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np

from .case import Case
from .contents import Contents
from .equilibrium import conserved_by_reactions
from .integrate import CompiledSystem, Problem
from .kernels import callbacks, judge
from .vessel import Equations

TEMPERATURE_ATOL = 1e-12
"""Absolute tolerance of T, of the temperature at the start [-]."""


@dataclass(frozen=True)
class Monitored:
    """The integration problem of a case and the judge's ledger, which tells how it went."""

    problem: Problem
    ledger: np.ndarray = field(repr=False)

    def notes(self) -> dict[str, float]:
        """What the judge found, for the statistics of a run."""
        head = self.ledger
        return {"largest_drift_of_totals": float(head[judge.LARGEST_DRIFT]), "mendings": int(head[judge.MENDED]),
                "largest_drift_of_temperature": float(head[judge.LARGEST_ENERGY_DRIFT]),
                "largest_rise_refused": float(head[judge.LARGEST_EXCESS])}


def monitored(case: Case, equations: Equations, until: Callable[[float, np.ndarray], bool] | None = None) -> Monitored:
    """The problem of a case; the state's units are those of `vessel.Equations`. until : see `integrate.Problem`."""
    charge = case.charge
    part = charge.concentration if case.holds == "volume" else charge.amount
    start = np.append(part, charge.temperature)
    atol = np.append(np.full(part.size, case.atol * float(np.sum(part))), TEMPERATURE_ATOL * charge.temperature)
    ledger, system = _compiled(case, equations, start)
    stops = tuple(t for t in case.also_at if t < case.end)
    return Monitored(Problem(equations.f, equations.J, start, case.end, case.rtol, atol, stops, system, until), ledger)


def _compiled(case: Case, equations: Equations, start: np.ndarray) -> tuple[np.ndarray, CompiledSystem]:
    rows, starts = equations.bordered_pattern
    work, n = equations.tables.work(), start.size - 1
    kept = (equations.vessel, equations.tables.ints, equations.tables.floats, work)
    conserved = np.ascontiguousarray(conserved_by_reactions(case.mechanism), dtype=float)
    energy = Contents(case.mechanism, equations.tables).energy(start[:-1], start[-1], case.holds)
    ledger = judge.ledger_of(conserved, conserved @ start[:-1], energy, start[-1])
    context = np.append(callbacks.context_of(*kept, rows.size), [ledger.ctypes.data, len(conserved)])
    system = CompiledSystem(
        callbacks.f_of_bordered.address, callbacks.J_of_bordered.address, judge.judge.address, context, (rows, starts),
        equations.mass, 2, np.append(np.arange(n), n + 1), equations.bordered_state(start), (*kept, ledger))
    return ledger, system

