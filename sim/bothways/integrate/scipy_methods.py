"""The door to scipy's implicit methods: the independent check of every other integrator.

Radau IIA of order 5 (E. Hairer, G. Wanner, Solving Ordinary Differential Equations II, 2nd ed., 1996, IV.8).
"""

import time
import warnings
from typing import Any

import numpy as np

from .interface import MOST_STEPS, NOT_ENOUGH, OUT_OF_TIME, STEP_TOO_SMALL, Monitor, Outcome, Problem, Status

METHODS = ("Radau",)
"""Those offered; `integrate` takes the name of any other of scipy's implicit methods as well, for comparisons."""


def _solver_class(method: str) -> Any:
    import scipy.integrate  # here, since it takes longer to import than a small run takes

    return getattr(scipy.integrate, method)


def integrate(problem: Problem, method: str, monitor: Monitor) -> Outcome:
    """Integrates with scipy's `method`, landing on every stop; Ctrl-C ends it between steps."""
    began = time.perf_counter()
    outcome = Outcome(Status.FINISHED, 0.0)
    steps = 0
    try:
        with warnings.catch_warnings(), np.errstate(all="ignore"):
            warnings.simplefilter("ignore")  # trial states may leave the range of exp; they are rejected
            solver = _start(problem, method, 0.0, problem.start)
            for stop, corner in problem.landings:
                steps = _advance(solver, stop, monitor, outcome, steps, problem, began)
                if corner and outcome.time == stop:
                    _add_counts(outcome, solver)
                    solver = _start(problem, method, stop, solver.y)
    except KeyboardInterrupt:
        outcome.status, outcome.reason = Status.INTERRUPTED, f"interrupted at {outcome.time:.6g} s"
    outcome.counts |= {"steps": steps, "seconds": time.perf_counter() - began}
    if outcome.time > 0 or steps:
        _add_counts(outcome, solver)
    return outcome


def _start(problem: Problem, method: str, t: float, y: np.ndarray) -> Any:
    """A solver from t [s] on that asks f and J for what holds before the next corner, also when it lands on that."""
    corner = min((c for c in problem.corners if c > t), default=np.inf)
    before = np.nextafter(corner, t)
    return _solver_class(method)(lambda s, y: problem.f(min(s, before), y), t, y, problem.end, rtol=problem.rtol,
                                 atol=problem.atol, jac=lambda s, y: problem.J(min(s, before), y))


def _add_counts(outcome: Outcome, solver: Any) -> None:
    for name, count in (("f_evaluations", solver.nfev), ("J_evaluations", solver.njev), ("factorisations", solver.nlu)):
        outcome.counts[name] = outcome.counts.get(name, 0) + int(count)


def _advance(solver: Any, stop: float, monitor: Monitor, outcome: Outcome, steps: int, problem: Problem,
             began: float) -> int:
    """Steps until `stop`, unless the solver gave up before or may end."""
    solver.t_bound, until = stop, problem.until
    if outcome.status is not Status.FINISHED or (until is not None and until(outcome.time, solver.y)):
        return steps
    solver.status = "running"
    while solver.status == "running":
        solver.step()
        reason = _obstacle(solver, steps, problem, time.perf_counter() - began)
        if reason:
            outcome.status, outcome.reason = Status.GAVE_UP, f"at {outcome.time:.6g} s: {reason}"
            break
        steps += 1
        outcome.time = float(solver.t)
        monitor.accepted(outcome.time, solver.y.copy())
        if until is not None and until(outcome.time, solver.y):
            break
    return steps


def _obstacle(solver: Any, steps: int, problem: Problem, seconds: float) -> str:
    """Why it cannot go on after `steps` and this time [s], and what to do; empty if it can."""
    if solver.status == "failed":  # all that scipy's implicit methods fail of
        return STEP_TOO_SMALL
    limit = problem.most_steps or MOST_STEPS
    if steps >= limit:
        return NOT_ENOUGH.format(steps=limit)
    return OUT_OF_TIME.format(longest=problem.longest) if steps and seconds > problem.longest else ""
