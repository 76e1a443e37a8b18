"""Driver of the compiled methods: hands over addresses and buffers, chunk after chunk, so that Ctrl-C is heard."""

import time
from dataclasses import dataclass, field
from functools import lru_cache

import numpy as np

from . import rosenbrock as ros
from .interface import MOST_REFUSED, MOST_STEPS, MOST_STEPS_IF_ASKED, CompiledSystem, Monitor, Outcome, Problem, Status
from .pattern import SparsePlan, plan
from .rosenbrock_tables import RODAS5P, RosenbrockTable

CHUNK, CHUNK_IF_ASKED = 64, 8
"""Steps between returns to Python, and where the problem wants to be asked whether to end."""
SMALLEST_STEP = 1e-15
"""Of the time reached; below, a step no longer moves the clock."""
STALLED = -1
_REASONS = {
    STALLED: f"{MOST_REFUSED} steps were refused: round-off drives them, and what is left is too slow for double precision "
             "to tell from it; shorten the time",
    ros.TOO_SMALL: "the step became too small to move on; the tolerances may be tighter than double precision can meet: "
                   "loosen rtol, or raise atol",
    ros.NOT_FINITE: "the right-hand side is not finite at the start: check charge and temperature",
    ros.TOO_MANY: "{steps} steps were not enough; loosen rtol or shorten the time",
}


@lru_cache(maxsize=16)
def _plan(rows: bytes, starts: bytes, tail: int) -> SparsePlan:
    """The plan of a pattern, made once: many runs share one."""
    return plan(np.frombuffer(rows, np.uint32), np.frombuffer(starts, np.uint32).astype(np.int64), tail)


@dataclass
class Stepper:
    """A compiled Rosenbrock integration between chunks: tables, memory and counters; `advance` goes on."""

    problem: Problem
    table: RosenbrockTable = RODAS5P
    memory: np.ndarray = field(default_factory=lambda: np.zeros(ros.MEMORY_SIZE))
    counts: np.ndarray = field(default_factory=lambda: np.zeros(ros.COUNTS_SIZE, dtype=np.int64))

    def __post_init__(self) -> None:
        system = self.system
        self.rows, self.starts = (part.astype(np.uint32) for part in system.pattern)
        self.plan = _plan(self.rows.tobytes(), self.starts.tobytes(), system.tail)
        columns = np.repeat(np.arange(len(self.starts) - 1), np.diff(system.pattern[1]))
        self.own = np.flatnonzero(self.rows == columns).astype(np.uint32)
        self.z = system.start.copy()
        self.atol = np.full(self.z.size, np.inf)
        self.atol[system.places] = self.problem.atol
        self.memory[ros.SMALLEST_STEP] = SMALLEST_STEP
        self.counts[ros.STEP_LIMIT] = MOST_STEPS if self.problem.until is None else MOST_STEPS_IF_ASKED
        chunk = CHUNK if self.problem.until is None else CHUNK_IF_ASKED
        self.times, self.states = np.empty(chunk), np.empty((chunk, self.z.size))
        self.packed = self.table.packed()

    @property
    def system(self) -> CompiledSystem:
        """The problem's compiled form."""
        assert self.problem.compiled is not None
        return self.problem.compiled

    def begin(self) -> bool:
        """Chooses the first step; False where the right-hand side is not finite."""
        self.memory[ros.STEP] = ros.begin(self.system.f, self.system.context, self.z, self.atol, self.problem.rtol,
                                          float(self.table.order), self.problem.end)
        return bool(np.isfinite(self.memory[ros.STEP]))

    def advance(self, stop: float) -> tuple[int, int]:
        """Goes on towards `stop`: status, and how many of `times` and `states` were filled."""
        s, p = self.system, self.plan
        return ros.advance(s.f, s.J, s.judge, s.context, self.rows, self.starts, p.order, p.start, p.column, p.diagonal,
                           p.target, self.own, s.mass, self.packed, self.table.gamma, float(self.table.estimator_order),
                           self.z, self.memory, self.atol, self.problem.rtol, stop, self.times, self.states, self.counts)

    def work(self) -> dict[str, int | float]:
        """What it took so far."""
        names = ("steps", "rejected", "f_evaluations", "J_evaluations", "factorisations", "solves",
                 "dense_factorisations", "rejected_by_second_law")
        return {name: int(count) for name, count in zip(names, self.counts, strict=False)}


def integrate(problem: Problem, monitor: Monitor) -> Outcome:
    """Integrates a problem that has a compiled form with the Rosenbrock method Rodas5P."""
    began = time.perf_counter()
    stepper, outcome = Stepper(problem), Outcome(Status.FINISHED, 0.0)
    try:
        status = ros.REACHED if stepper.begin() else ros.NOT_FINITE
        for stop in (*problem.stops, problem.end):
            if status == ros.REACHED and not _ended(problem, outcome, stepper):
                status = _until(stop, stepper, monitor, outcome)
        if status == STALLED and problem.until is not None:
            outcome.status = Status.STALLED
        elif status != ros.REACHED:
            outcome.status = Status.GAVE_UP
            outcome.reason = f"at {outcome.time:.6g} s " + _REASONS[status].format(steps=stepper.counts[ros.STEP_LIMIT])
    except KeyboardInterrupt:
        outcome.status, outcome.reason = Status.INTERRUPTED, f"interrupted at {outcome.time:.6g} s"
    outcome.counts |= stepper.work() | {"seconds": time.perf_counter() - began}
    return outcome


def _until(stop: float, stepper: Stepper, monitor: Monitor, outcome: Outcome) -> int:
    """Steps to `stop`, telling the monitor of each; the status."""
    status = ros.BUFFER_FULL
    while status == ros.BUFFER_FULL:
        status, written = stepper.advance(stop)
        for t, z in zip(stepper.times[:written], stepper.states[:written], strict=True):
            outcome.time = float(t)
            monitor.accepted(outcome.time, z[stepper.system.places])
        if stepper.counts[ros.JUDGED_AGAINST] > MOST_REFUSED:
            return STALLED
        if status == ros.BUFFER_FULL and _ended(stepper.problem, outcome, stepper):
            return ros.REACHED
    return status


def _ended(problem: Problem, outcome: Outcome, stepper: Stepper) -> bool:
    """Whether the problem may end where it is."""
    return problem.until is not None and problem.until(outcome.time, stepper.z[stepper.system.places])
