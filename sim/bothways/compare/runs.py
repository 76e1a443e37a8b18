"""One run, with what comparisons ask of it worked out when it is first asked for."""

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from ..batch import landing
from ..case import Case, law_outside
from ..charge import Charge
from ..course import Course
from ..endpoint import Target, target_of
from ..errors import InputError
from ..integrate import OWN_METHODS, Outcome, Status, integrate, warm_up
from ..mechanism import Mechanism
from ..milestones import course_of, half_conversions, steepest_rise
from ..monitored import monitored
from ..recorder import Recorder
from ..vessel import Equations
from .correspondence import Correspondence

NEVER = np.nan
"""A time that does not come [s]."""


@dataclass(frozen=True, eq=False, repr=False)
class Run:
    """A case that was run: its columns (time, temperature, pressure, volume, amount) at accepted steps, and the outcome."""

    case: Case
    equations: Equations
    columns: dict[str, np.ndarray]
    outcome: Outcome

    @property
    def failure(self) -> str:
        """Why it did not reach its end; empty if it did."""
        whole = self.outcome.status in (Status.FINISHED, Status.STALLED) and len(self.columns["time"]) >= 2
        return "" if whole else self.outcome.reason or "the course has no steps"

    @property
    def time(self) -> np.ndarray:
        """Accepted steps (nt) [s]."""
        return self.columns["time"]

    @property
    def seconds(self) -> float:
        """Time the integration took [s]."""
        return float(self.outcome.counts["seconds"])

    @property
    def steps(self) -> int:
        """Accepted steps."""
        return int(self.outcome.counts["steps"])

    @cached_property
    def course(self) -> Course:
        """The run between its steps."""
        return course_of(self.case, self.equations, self.columns)

    @cached_property
    def ignition(self) -> float:
        """The ignition delay [s]: the instant of the steepest rise of T, or of p where T is held; NaN if there is none."""
        return next(iter(steepest_rise(self.case, self.course).values()), NEVER)

    @cached_property
    def half_conversions(self) -> dict[str, float]:
        """When each charged species has fallen to half [s], by name."""
        times, names = half_conversions(self.case, self.course), self.case.mechanism.names
        return {name: times[f"half-conversion of {name}"] for name in names if f"half-conversion of {name}" in times}

    @cached_property
    def target(self) -> Target:
        """Where it must end."""
        return target_of(self.case)

    def mole_fractions(self, times: np.ndarray) -> np.ndarray:
        """At rising times (m), (m, N) [-]."""
        part = np.maximum(self.course.at(times)[:, :-1], 0.0)
        return part / part.sum(axis=1, keepdims=True)

    def temperatures(self, times: np.ndarray) -> np.ndarray:
        """At rising times (m) [K]."""
        return self.course.at(times)[:, -1]


def run_once(case: Case) -> Run:
    """Runs a case to its end, or to where the solver gave up."""
    equations = case.equations()
    recorder = Recorder(case, equations)
    task = monitored(case, equations, landing(case, target_of(case)) if case.to_equilibrium else None)
    outcome = integrate(task.problem, case.method, recorder)
    if outcome.status is Status.INTERRUPTED:
        raise KeyboardInterrupt
    return Run(case, equations, recorder.course(), outcome)


def warm(case: Case) -> None:
    """Builds what all runs of a mechanism share, so that no run's time holds it."""
    task = monitored(case, case.equations())
    if case.method in OWN_METHODS:
        warm_up(task.problem)


def case_with(case: Case, mechanism: Mechanism, same: Correspondence) -> Case:
    """The case with another mechanism: the same amounts of the same species, the same vessel.

    Raises InputError where the mechanism lacks a species that is charged, or cannot start there.
    """
    if mechanism is case.mechanism:
        return case
    c, amount = case.charge, np.zeros(len(mechanism.species))
    for k in np.flatnonzero(c.amount):
        amount[_place(same, int(k), case, mechanism)] += c.amount[k]
    problem = law_outside(mechanism, c.temperature, c.pressure)
    lowest = Equations(mechanism).tables.lowest_temperature
    if problem or c.temperature < lowest:
        raise InputError(problem or f"{c.temperature:g} K is below {lowest:g} K, the lowest temperature of this mechanism",
                         file=mechanism.file, remedy="leave this condition out, or correct the mechanism")
    return replace(case, mechanism=mechanism, charge=Charge(amount, c.temperature, c.pressure, c.volume),
                   thermal_inertia=case.thermal_inertia)


def _place(same: Correspondence, k: int, case: Case, mechanism: Mechanism) -> int:
    if same.group[k] < 0:
        raise InputError(f"{case.mechanism.names[k]} is charged, but '{mechanism.name}' has no such species",
                         expected="every charged species in every mechanism", file=mechanism.file,
                         remedy="keep it in the reduced mechanism, or say in a mapping file (--mapping) what it is called there")
    return int(same.group[k])
