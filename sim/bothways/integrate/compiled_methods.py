"""Driver of the compiled methods: hands over addresses and buffers, chunk after chunk, so that Ctrl-C is heard."""

import time
from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np

from . import bdf, graded, stepping
from . import rosenbrock as ros
from .differences import LEADING, ROWS
from .interface import (
    MOST_REFUSED,
    MOST_STEPS,
    MOST_STEPS_IF_ASKED,
    NOT_ENOUGH,
    OUT_OF_TIME,
    STEP_TOO_SMALL,
    ByReaction,
    CompiledSystem,
    Monitor,
    Outcome,
    Problem,
    Status,
)
from .pattern import plan_of
from .rosenbrock_tables import RODAS5P, RosenbrockTable

CHUNK, CHUNK_IF_ASKED = 64, 8
"""Steps between returns to Python, and where the problem wants to be asked whether to end."""
PATIENCE, USUAL_RTOL, CHEAP = 1000, 1e-6, 100
"""Where so many steps have not come to the end that is asked for, a Rosenbrock method goes on by reactions. More steps are
allowed at a tighter rtol than USUAL_RTOL, as many more as the order tells, and with more unknowns than CHEAP, by the square root
of how many more, since steps by reactions cost more then. (Common practice, no source.)"""
DROWNED = 1e15
"""And where the fastest rate times the time reached is more than this: an entry of the Jacobian that holds the fastest rate to
sixteen digits says nothing any more about rates of one over that time [-]."""
FEW, MANY = 400, 1000
"""A step by reactions takes time as the cube of the unknowns: of more than FEW only a run that round-off stops goes on that way,
of more than MANY none does. (Common practice, no source; 350 unknowns take a hundred times as long as by species.)"""
RESUMED = 1e-2
"""The first step by reactions is tried no shorter than this part of the time reached [-]: long steps damp what round-off has
left of fast transients, which may be too fast for the clock."""
SMALLEST_STEP = 1e-15
"""Of the time reached; below, a step no longer moves the clock."""
STALLED, TIME_IS_UP = -1, -2
_REASONS = {
    STALLED: f"{MOST_REFUSED} steps were refused: round-off drives them, and what is left is too slow for double precision "
             "to tell from it; shorten the time",
    stepping.TOO_SMALL: STEP_TOO_SMALL,
    stepping.NOT_FINITE: "the right-hand side is not finite at the start: check charge and temperature",
    stepping.TOO_MANY: NOT_ENOUGH,
    TIME_IS_UP: OUT_OF_TIME,
}


@dataclass
class Stepper:
    """A compiled integration between chunks: addresses, memory and counters. A method begins it and lets it advance."""

    problem: Problem
    memory: np.ndarray = field(init=False, repr=False)
    counts: np.ndarray = field(default_factory=lambda: np.zeros(stepping.COUNTS_SIZE, dtype=np.int64), init=False)

    def __post_init__(self) -> None:
        system = self.system
        self.rows, self.starts = (part.astype(np.uint32) for part in system.pattern)
        self.plan = plan_of(self.rows, self.starts, system.tail)
        columns = np.repeat(np.arange(len(self.starts) - 1), np.diff(system.pattern[1]))
        self.own = np.flatnonzero(self.rows == columns).astype(np.uint32)
        self.z, self.slope = system.start.copy(), np.empty(system.start.size)
        self.rtol, self.atol = self.problem.rtol, np.full(self.z.size, np.inf)
        self.atol[system.places] = self.problem.atol
        usual = MOST_STEPS if self.problem.until is None else MOST_STEPS_IF_ASKED
        self.counts[stepping.STEP_LIMIT] = self.problem.most_steps or usual
        self.deadline, self.most_refused = time.perf_counter() + self.problem.longest, MOST_REFUSED
        chunk = CHUNK if self.problem.until is None else CHUNK_IF_ASKED
        self.times, self.states = np.empty(chunk), np.empty((chunk, self.z.size))

    @property
    def system(self) -> CompiledSystem:
        """The problem's compiled form."""
        assert self.problem.compiled is not None
        return self.problem.compiled

    def remember(self, size: int) -> None:
        """Empty memory of a method."""
        self.memory = np.zeros(size)
        self.memory[stepping.SMALLEST_STEP] = SMALLEST_STEP

    def begin(self) -> bool:
        """Begins, or begins anew where it stands (after a corner of f); False where f is not finite there."""
        if self.system.enter is not None:
            self.system.enter(float(self.memory[stepping.TIME]), self.z)
        left = self.problem.end - self.memory[stepping.TIME]
        self.memory[stepping.STEP] = stepping.begin(self.system.f, self.system.context, self.z, self.atol, self.rtol,
                                                    self.first_order, left, self.slope)
        self.counts[stepping.F_CALLS] += 2
        return bool(np.isfinite(self.memory[stepping.STEP]))

    first_order = 1.0

    def advance(self, stop: float) -> tuple[int, int]:
        """Goes on towards `stop`: status, and how many of `times` and `states` were filled."""
        raise NotImplementedError

    def common(self) -> tuple:
        """What every method's `advance` takes first."""
        s, p = self.system, self.plan
        return (s.f, s.J, s.judge, s.context, self.rows, self.starts, p.order, p.start, p.column, p.diagonal, p.target,
                self.own, s.mass)

    def in_trouble(self, status: int) -> bool:
        """Whether round-off drives the steps: the judge refuses too many, or they became too small."""
        return status == stepping.TOO_SMALL or bool(self.counts[stepping.JUDGED_AGAINST] > self.most_refused)

    def change_over(self) -> bool:
        """Goes on in another way, if there is one left."""
        return False

    def work(self) -> dict[str, int | float]:
        """What it took so far."""
        return {name: int(count) for name, count in zip(stepping.COUNTED, self.counts, strict=False)}


@dataclass
class RosenbrockStepper(Stepper):
    """Rosenbrock methods; see rosenbrock.py."""

    table: RosenbrockTable = RODAS5P

    def __post_init__(self) -> None:
        super().__post_init__()
        self.by_reaction: ByReaction | None = None
        tighter = max(1.0, USUAL_RTOL / self.problem.rtol) ** (1.0 / self.table.order)
        self.patience = PATIENCE * tighter * max(1.0, self.own.size / CHEAP) ** 0.5
        self.remember(ros.MEMORY_SIZE)
        self.packed, self.first_order = self.table.packed(), float(self.table.order)

    def begin(self) -> bool:
        """As every method, without a memory of the steps before."""
        self.memory[ros.LAST_STEP] = 0.0
        return super().begin()

    def advance(self, stop: float) -> tuple[int, int]:
        """Goes on towards `stop`."""
        if self.by_reaction is not None:
            by = self.by_reaction
            return graded.advance(by.rates, by.slopes, self.system.judge, by.context, self.space, self.packed, self.table.gamma,
                                  float(self.table.estimator_order), self.z, self.memory, self.atol, self.rtol, stop,
                                  self.times, self.states, self.counts)
        return ros.advance(*self.common(), self.packed, self.table.gamma, float(self.table.estimator_order), self.z,
                           self.memory, self.atol, self.rtol, stop, self.times, self.states, self.counts)

    def in_trouble(self, status: int) -> bool:
        """As every method; or what the time reached asks for drowns in the fastest rate; or, on the way to an end that is asked
        for, too many steps."""
        if self.by_reaction is not None or self.own.size > FEW:
            return super().in_trouble(status)
        drowned = self.memory[stepping.TIME] * self.memory[ros.FASTEST] > DROWNED
        slow = self.problem.until is not None and self.counts[stepping.STEPS] + self.counts[stepping.REJECTED] > self.patience
        return super().in_trouble(status) or bool(drowned) or bool(slow)

    def change_over(self) -> bool:
        """Goes on by reactions (graded.py), from where it stands."""
        if self.by_reaction is not None or self.system.by_reaction is None or self.own.size > MANY:
            return False
        by = self.system.by_reaction()
        if not by.nu.any():
            return False
        self.by_reaction, self.space = by, graded.space_for(by, len(self.table.m))
        self.memory[ros.LAST_STEP] = 0.0
        self.memory[stepping.STEP] = max(self.memory[stepping.STEP], RESUMED * self.memory[stepping.TIME])
        self.most_refused = int(self.counts[stepping.JUDGED_AGAINST]) + MOST_REFUSED
        return True


@dataclass
class BDFStepper(Stepper):
    """Backward differentiation; see bdf.py. It works to parts of the tolerances, see there."""

    leading: tuple[float, ...] = LEADING

    def __post_init__(self) -> None:
        super().__post_init__()
        self.remember(bdf.MEMORY_SIZE)
        self.rtol, self.atol = max(bdf.RTOL_PART * self.rtol, bdf.TIGHTEST), bdf.ATOL_PART * self.atol
        self.history, self.spacing = np.zeros((ROWS, self.z.size)), np.zeros(ROWS)
        self.jacobian, self.lu = np.empty(self.rows.size), np.zeros(self.plan.fill)
        self.coefficients = np.array(self.leading)

    def begin(self) -> bool:
        """As every method, at order 1."""
        sound = super().begin()
        self.memory[bdf.CEILING] = np.inf
        bdf.restart(self.z, self.slope, self.memory, self.history, self.spacing)
        return sound

    def advance(self, stop: float) -> tuple[int, int]:
        """Goes on towards `stop`."""
        return bdf.advance(*self.common(), self.coefficients, self.z, self.memory, self.atol, self.rtol, stop, self.times,
                           self.states, self.counts, self.history, self.spacing, self.jacobian, self.lu)


STEPPERS: dict[str, Callable[[Problem], Stepper]] = {"Rosenbrock": RosenbrockStepper, "BDF": BDFStepper}
"""The compiled methods by name."""


def integrate(problem: Problem, method: str, monitor: Monitor) -> Outcome:
    """Integrates a problem that has a compiled form with the method of that name."""
    began = time.perf_counter()
    stepper, outcome = STEPPERS[method](problem), Outcome(Status.FINISHED, 0.0)
    try:
        status = stepping.REACHED if stepper.begin() else stepping.NOT_FINITE
        for stop, corner in problem.landings:
            if status == stepping.REACHED and not _ended(problem, outcome, stepper):
                status = _until(stop, stepper, monitor, outcome)
                if corner and status == stepping.REACHED and not stepper.begin():
                    status = stepping.NOT_FINITE
        if status == STALLED and problem.until is not None:
            outcome.status = Status.STALLED
        elif status != stepping.REACHED:
            outcome.status = Status.GAVE_UP
            outcome.reason = f"at {outcome.time:.6g} s: " + _REASONS[status].format(
                steps=stepper.counts[stepping.STEP_LIMIT], longest=problem.longest)
    except KeyboardInterrupt:
        outcome.status, outcome.reason = Status.INTERRUPTED, f"interrupted at {outcome.time:.6g} s"
    outcome.counts |= stepper.work() | {"seconds": time.perf_counter() - began}
    return outcome


def _until(stop: float, stepper: Stepper, monitor: Monitor, outcome: Outcome) -> int:
    """Steps to `stop`, telling the monitor of each; the status."""
    status = stepping.BUFFER_FULL
    while status == stepping.BUFFER_FULL:
        status, written = stepper.advance(stop)
        for t, y in zip(stepper.times[:written].tolist(), stepper.states[:written, stepper.system.places], strict=True):
            outcome.time = t
            monitor.accepted(t, y)
        if stepper.in_trouble(status) and stepper.change_over() and status == stepping.TOO_SMALL:
            status = stepping.BUFFER_FULL
        if stepper.counts[stepping.JUDGED_AGAINST] > stepper.most_refused:
            return STALLED
        if status == stepping.AT_CROSSING:
            status = stepping.REACHED if outcome.time >= stop else stepping.BUFFER_FULL
            if not stepper.begin():
                return stepping.NOT_FINITE
        if status == stepping.BUFFER_FULL and _ended(stepper.problem, outcome, stepper):
            return stepping.REACHED
        if status in (stepping.BUFFER_FULL, stepping.REACHED) and _late(stepper, outcome):
            return TIME_IS_UP
    return status


def _ended(problem: Problem, outcome: Outcome, stepper: Stepper) -> bool:
    """Whether the problem may end where it is."""
    return problem.until is not None and problem.until(outcome.time, stepper.z[stepper.system.places])


def _late(stepper: Stepper, outcome: Outcome) -> bool:
    """Whether its time is up before it is where it should end."""
    problem = stepper.problem
    return (time.perf_counter() > stepper.deadline and outcome.time < problem.end
            and not _ended(problem, outcome, stepper))
