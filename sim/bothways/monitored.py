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
from .integrate import ByReaction, CompiledSystem, Problem
from .kernels import by_reaction, callbacks, exchange, judge
from .mechanism.rate_partials import rate_partials
from .reach import reachable
from .surfaces import Surfaces, surfaces_of
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
    surfaces: Surfaces | None = field(default=None, repr=False)

    def notes(self) -> dict[str, float]:
        """What the judge found, for the statistics of a run."""
        head = self.ledger
        return {"largest_drift_of_totals": float(head[judge.LARGEST_DRIFT]), "mendings": int(head[judge.MENDED]),
                "largest_drift_of_temperature": float(head[judge.LARGEST_ENERGY_DRIFT]),
                "largest_rise_refused": float(head[judge.LARGEST_EXCESS]), **self._crossings()}

    def _crossings(self) -> dict[str, float]:
        if self.surfaces is None:
            return {}
        return {"surfaces_crossed": self.surfaces.crossings, "largest_jump_of_energy": self.surfaces.jump}


def monitored(case: Case, equations: Equations, until: Callable[[float, np.ndarray], bool] | None = None,
              everywhere: bool = False) -> Monitored:
    """The problem of a case; the state's units are those of `vessel.Equations`, or of exchange.py where heat comes from
    outside. until : see `integrate.Problem`. everywhere : see `surfaces.surfaces_of`.
    """
    charge = case.charge
    part = charge.concentration if case.holds == "volume" else charge.amount
    start = np.append(part, charge.temperature)
    atol = np.append(np.full(part.size, case.atol * float(np.sum(part))), TEMPERATURE_ATOL * charge.temperature)
    stops = tuple(t for t in case.also_at if t < case.end)
    parts = _Parts(case, equations, everywhere)
    if case.schedule is None:
        system = _compiled(parts, start)
        problem = Problem(equations.f, equations.J, start, case.end, case.rtol, atol, stops, system, until,
                          most_steps=case.most_steps, longest=case.longest)
        return Monitored(problem, parts.ledger, parts.surfaces)
    further = ExchangingEquations(equations)
    start, atol = (np.append(a, b) for a, b in zip((start, atol), _further(case, equations, part), strict=True))
    problem = Problem(further.f, further.J, start, case.end, case.rtol, atol, stops, _exchanging(parts, further, start), until,
                      case.schedule.corners, case.most_steps, case.longest)
    return Monitored(problem, parts.ledger, parts.surfaces)


class _Parts:
    """What the compiled form of a case is made of: arrays of its own, the judge's ledger, surfaces."""

    def __init__(self, case: Case, equations: Equations, everywhere: bool) -> None:
        tables, charge, work = equations.tables, case.charge, equations.tables.work()
        part = charge.concentration if case.holds == "volume" else charge.amount
        self.surfaces = surfaces_of(case, tables, work, everywhere)
        if self.surfaces is not None:
            self.surfaces.begin(part, charge.temperature)
        # f and J of the plain form set their own vessel to other times
        floats = tables.floats if self.surfaces is None else self.surfaces.floats
        self.arrays = (equations.vessel.copy(), tables.ints, floats, work)
        conserved = np.ascontiguousarray(conserved_by_reactions(case.mechanism), dtype=float)
        energy = Contents(case.mechanism, tables).energy(part, charge.temperature, case.holds)
        self.ledger = judge.ledger_of(conserved, conserved @ part, energy, charge.temperature)
        self.n_rows, self.equations, self.n = len(conserved), equations, part.size
        self.mechanism, (there, self.running) = case.mechanism, reachable(case.mechanism, case.charge.amount)
        self.absent = np.flatnonzero(~there).astype(np.uint32)

    def context(self, values: int) -> np.ndarray:
        """What callbacks and judge are handed; values: of the Jacobian."""
        table = np.empty((0, 0)) if self.surfaces is None else self.surfaces.table
        more = [self.ledger.ctypes.data, self.n_rows, table.ctypes.data, len(table), self.absent.ctypes.data, self.absent.size]
        return np.append(callbacks.context_of(*self.arrays, values), np.array(more, dtype=np.int64))

    def by_reaction(self) -> ByReaction:
        """The form by reactions; those that cannot proceed from the charge are left out of it."""
        entries = rate_partials(self.mechanism)
        arrays = entries.reaction, entries.species, entries.source, entries.weight
        more = np.array([*(array.ctypes.data for array in arrays), entries.weight.size], dtype=np.int64)
        return ByReaction(by_reaction.rates_by_reaction.address, by_reaction.slopes_by_reaction.address,
                          np.append(self.context(0), more), self.mechanism.stoichiometry * self.running, entries.reaction,
                          entries.species, (*self.kept(), *arrays))

    def kept(self) -> tuple[np.ndarray, ...]:
        """What the addresses in the context belong to."""
        return (*self.arrays, self.ledger, self.absent, *([] if self.surfaces is None else [self.surfaces.table]))

    def enter(self, follow: Callable[[float, np.ndarray], None] | None) -> Callable[[float, np.ndarray], None] | None:
        """What a method tells where f goes on in another way: `follow` the schedule, and change over at surfaces."""
        surfaces, head, n = self.surfaces, self.ledger, self.n
        if surfaces is None:
            return follow

        def enter(t: float, z: np.ndarray) -> None:
            if follow is not None:
                follow(t, z)
            added = surfaces.cross(z[:n], float(z[n + 1]))
            head[judge.ENERGY] += added
            head[judge.START_ENERGY] += added

        return enter


def _further(case: Case, equations: Equations, part: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Start and absolute tolerances of the unknowns behind T: heats and entropies that T hardly feels."""
    T, contents = case.charge.temperature, Contents(case.mechanism, equations.tables)
    heat = FURTHER_ATOL * case.rtol * T * (contents.heat_capacity(part, T, case.holds) + equations.heat_capacity)
    sizes = [heat, heat / T] if case.heat == "jacket" else [heat / (R * T)]
    return np.zeros(len(sizes)), np.array(sizes)


def _exchanging(parts: _Parts, further: ExchangingEquations, start: np.ndarray) -> CompiledSystem:
    return CompiledSystem(
        exchange.f_of_exchanging.address, exchange.J_of_exchanging.address, judge.judge.address,
        parts.context(further.pattern[0].size), further.pattern, further.mass, further.bordered_size - parts.n, further.places,
        further.bordered_state(0.0, start), parts.kept(), parts.enter(partial(further.enter, parts.arrays[0])))


def _compiled(parts: _Parts, start: np.ndarray) -> CompiledSystem:
    equations, n = parts.equations, parts.n
    return CompiledSystem(
        callbacks.f_of_bordered.address, callbacks.J_of_bordered.address, judge.judge.address,
        parts.context(equations.bordered_pattern[0].size), equations.bordered_pattern, equations.mass, 2,
        np.append(np.arange(n), n + 1), equations.bordered_state(start), parts.kept(), parts.enter(None), parts.by_reaction)
