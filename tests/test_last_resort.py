"""The backward Euler step that is taken where the monitor refuses the method's own."""

import math

import numpy as np
import pytest
from numba import carray

import bothways.integrate.compiled_methods as driver
from bothways import build_case
from bothways.compiled import JIT, REFUSED, STAND, call, callback
from bothways.integrate import CompiledSystem, Problem, Status, integrate
from bothways.integrate.last_resort import backward_euler
from bothways.integrate.stepping import COUNTS_SIZE
from bothways.monitored import monitored

RATE = 3.0


@callback
def decay(z, out, context):
    """y' = -3 y."""
    carray(out, (1,))[0] = -3.0 * carray(z, (1,))[0]
    return 1


@callback
def decay_slope(z, out, context):
    """Its Jacobian."""
    carray(out, (1,))[0] = -3.0
    return 1


@callback
def every_fifth(exchange, verdict, context):
    """Refuses four of five: the method's own step at four lengths; the fifth is the backward Euler step."""
    asked = carray(context, (1,))
    asked[0] += 1
    return 1 if asked[0] % 5 == 0 else 0


class Kept:
    """A monitor that keeps the course."""

    def __init__(self) -> None:
        self.times, self.states = [0.0], [1.0]

    def accepted(self, t: float, y: np.ndarray) -> None:
        """Told of each step."""
        self.times.append(t)
        self.states.append(float(y[0]))


def problem(judge: int) -> Problem:
    """The decay to t = 1."""
    system = CompiledSystem(decay.address, decay_slope.address, judge, np.zeros(1, dtype=np.int64),
                            (np.zeros(1, dtype=np.int32), np.array([0, 1], dtype=np.int32)), np.ones(1), 0,
                            np.zeros(1, dtype=np.int64), np.ones(1), ())
    return Problem(lambda t, y: -RATE * y, lambda t, y: np.array([[-RATE]]), np.ones(1), 1.0, 1e-3, np.array([1e-6]), (), system)


@pytest.mark.skipif(not JIT, reason="callbacks have no address in interpreted kernels")
def test_where_the_methods_own_steps_are_refused_backward_euler_goes_on(monkeypatch: pytest.MonkeyPatch) -> None:
    """Every accepted step satisfies y₁ (1 + λh) = y₀ to its last digits, and the run comes to its end."""
    assert (STAND, REFUSED) == (1, 0)
    monkeypatch.setattr(driver, "MOST_REFUSED", 10**6)
    kept = Kept()
    outcome = integrate(problem(every_fifth.address), "Rosenbrock", kept)
    assert outcome.status is Status.FINISHED
    assert outcome.counts["backward_Euler_steps"] == outcome.counts["steps"] == len(kept.times) - 1
    t, y = np.array(kept.times), np.array(kept.states)
    assert np.all(np.abs(y[1:] * (1.0 + RATE * np.diff(t)) / y[:-1] - 1.0) < 1e-12)
    assert abs(y[-1] / math.exp(-RATE) - 1.0) <= 1e-3 * len(t)  # each step within rtol
    assert integrate(problem(0), "Rosenbrock", Kept()).counts["backward_Euler_steps"] == 0


@pytest.mark.skipif(not JIT, reason="callbacks have no address in interpreted kernels")
@pytest.mark.parametrize("holds", ["volume", "pressure"])
@pytest.mark.parametrize("heat, h", [*(("isothermal", 10.0**k) for k in (-9, -6, -3, 0, 3)),
                                     *(("adiabatic", 10.0**k) for k in (-9, -6, -3))])
def test_a_solved_step_passes_the_judge_at_any_length(holds: str, heat: str, h: float) -> None:
    """From burnt gas that was moved off its equilibrium, steps over many decades lower the potential.

    (Adiabatic steps of seconds from so far off are beyond Newton's method; it says so, and a shorter one is tried.)
    """
    case = build_case({
        "case": {"mechanism": "hydrogen-oxygen"}, "vessel": {"heat": heat, "holds": holds}, "until": {"time": 1.0},
        "start": {"temperature": 2500.0, "pressure": "1 atm",
                  "mole_ratio": {"H2O": 0.3, "H2": 0.05, "O2": 0.02, "H": 0.02, "OH": 0.02, "O": 0.01, "N2": 0.6}}})
    stepper = driver.RosenbrockStepper(monitored(case, case.equations()).problem)
    s, p, n = stepper.system, stepper.plan, stepper.z.size
    point, left, estimate, slope = stepper.z.copy(), np.empty(n), np.empty(n), np.empty(n)
    judged(s.f, stepper.z, slope, s.context)
    assert backward_euler(s.f, s.J, s.context, stepper.rows, stepper.starts, p.order, p.start, p.column, p.diagonal, p.target,
                          stepper.own, s.mass, stepper.z, slope, h, point, left, estimate, stepper.atol, 1e-6,
                          np.zeros(COUNTS_SIZE, dtype=np.int64))
    exchange, verdict = np.concatenate([stepper.z, point, left]), np.zeros(4)
    assert judged(s.judge, exchange, verdict, s.context) == STAND
    assert np.all(exchange[n : 2 * n] >= 0.0) and not np.array_equal(exchange[n : 2 * n], stepper.z)


def judged(address: int, exchange: np.ndarray, verdict: np.ndarray, context: np.ndarray) -> int:
    """What the callback at an address says."""
    return _judged(address, exchange, verdict, context)


if JIT:
    from numba import njit

    @njit
    def _judged(address, exchange, verdict, context):
        return call(address, exchange, verdict, context)
