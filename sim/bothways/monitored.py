"""A case as the integrators take it: plain f and J, and the compiled form with the judge of every step."""

from collections.abc import Callable
from dataclasses import dataclass, field
from functools import partial

import numpy as np

from .case import Case
from .constants import GAS_CONSTANT as R
from .contents import Contents
from .equilibrium import conserved_by_reactions
from .exchange import ExchangingEquations
from .integrate import CompiledSystem, Problem
from .kernels import callbacks, exchange, judge
from .vessel import Equations

TEMPERATURE_ATOL = 1e-12
"""Absolute tolerance of T, of the temperature at the start [-]."""
FURTHER_ATOL = 1e-2
"""Absolute tolerance of heat received, of the heat that changes T by its relative tolerance [-]."""


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
    """The problem of a case; the state's units are those of `vessel.Equations`, or of exchange.py where heat comes from
    outside. until : see `integrate.Problem`.
    """
    charge = case.charge
    part = charge.concentration if case.holds == "volume" else charge.amount
    start = np.append(part, charge.temperature)
    atol = np.append(np.full(part.size, case.atol * float(np.sum(part))), TEMPERATURE_ATOL * charge.temperature)
    stops = tuple(t for t in case.also_at if t < case.end)
    if case.schedule is None:
        ledger, system = _compiled(case, equations, start)
        return Monitored(Problem(equations.f, equations.J, start, case.end, case.rtol, atol, stops, system, until), ledger)
    further = ExchangingEquations(equations)
    start, atol = (np.append(a, b) for a, b in zip((start, atol), _further(case, equations, part), strict=True))
    ledger, system = _exchanging(case, further, start)
    return Monitored(Problem(further.f, further.J, start, case.end, case.rtol, atol, stops, system, until,
                             case.schedule.corners), ledger)


def _further(case: Case, equations: Equations, part: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Start and absolute tolerances of the unknowns behind T: heats and entropies that T hardly feels."""
    T, contents = case.charge.temperature, Contents(case.mechanism, equations.tables)
    heat = FURTHER_ATOL * case.rtol * T * (contents.heat_capacity(part, T, case.holds) + equations.heat_capacity)
    sizes = [heat, heat / T] if case.heat == "jacket" else [heat / (R * T)]
    return np.zeros(len(sizes)), np.array(sizes)


def _exchanging(case: Case, further: ExchangingEquations, start: np.ndarray) -> tuple[np.ndarray, CompiledSystem]:
    equations, n = further.equations, len(case.mechanism.species)
    vessel = equations.vessel.copy()  # f and J of the plain form set their own to other times
    kept = (vessel, equations.tables.ints, equations.tables.floats, equations.tables.work())
    ledger, context = _judged(case, equations, start[: n + 1], kept, further.pattern[0].size)
    system = CompiledSystem(
        exchange.f_of_exchanging.address, exchange.J_of_exchanging.address, judge.judge.address, context, further.pattern,
        further.mass, further.bordered_size - n, further.places, further.bordered_state(0.0, start), (*kept, ledger),
        partial(further.enter, vessel))
    return ledger, system


def _compiled(case: Case, equations: Equations, start: np.ndarray) -> tuple[np.ndarray, CompiledSystem]:
    rows, starts = equations.bordered_pattern
    work, n = equations.tables.work(), start.size - 1
    kept = (equations.vessel, equations.tables.ints, equations.tables.floats, work)
    ledger, context = _judged(case, equations, start, kept, rows.size)
    system = CompiledSystem(
        callbacks.f_of_bordered.address, callbacks.J_of_bordered.address, judge.judge.address, context, (rows, starts),
        equations.mass, 2, np.append(np.arange(n), n + 1), equations.bordered_state(start), (*kept, ledger))
    return ledger, system


def _judged(case: Case, equations: Equations, start: np.ndarray, kept: tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray],
            values: int) -> tuple[np.ndarray, np.ndarray]:
    """The judge's ledger for a plain start, and the context of callbacks and judge."""
    conserved = np.ascontiguousarray(conserved_by_reactions(case.mechanism), dtype=float)
    energy = Contents(case.mechanism, equations.tables).energy(start[:-1], start[-1], case.holds)
    ledger = judge.ledger_of(conserved, conserved @ start[:-1], energy, start[-1])
    return ledger, np.append(callbacks.context_of(*kept, values), [ledger.ctypes.data, len(conserved)])
