"""Backward differentiation: order and error constant of each formula, history, restarts, refusals, behaviour at rest."""

import math
from itertools import pairwise

import numpy as np
import pytest
from numba import carray
from scipy.integrate import solve_ivp

from bothways.compiled import callback
from bothways.integrate import Status, bdf, integrate, stepping
from bothways.integrate.compiled_methods import BDFStepper, Stepper
from bothways.integrate.differences import LEADING
from stiff_problems import PROBLEMS, Course, problem, smooth_f, smooth_J

ORDERS = (1, 2, 3, 4, 5)


@callback
def decay_f(y, out, context):
    out[0] = -y[0]
    return 1


@callback
def decay_J(y, out, context):
    out[0] = -1.0
    return 1


def seeded(task, order, h, exact, **arguments):
    """A stepper at time 0 held at step and order, its history the exact values at 0, -h, … -order·h."""
    stepper = BDFStepper(task, **arguments)
    assert stepper.begin()
    differences = [exact(-j * h) for j in range(order + 1)]
    for j in range(order + 1):  # modified divided differences on equal steps are backward differences
        stepper.history[j] = differences[0]
        differences = [a - b for a, b in pairwise(differences)]
    stepper.spacing[:] = h * np.arange(len(stepper.spacing))
    stepper.memory[[bdf.ORDER, bdf.DEPTH, bdf.FIXED, stepping.STEP]] = order, order, 1.0, h
    return stepper


def at_end(stepper, h, end, spoil=0.0):
    for k in range(round(end / h)):
        stepper.spacing[1:] *= 1.0 + spoil
        status, written = stepper.advance((k + 1) * h)
        assert status == stepping.REACHED and written == 1
    assert stepper.counts[stepping.REJECTED] == 0
    return stepper.z.copy()


@pytest.fixture(scope="module")
def rigid():
    """Euler's rigid body around (1, 0.5, 0.9), by an explicit method of order 8 to round-off."""
    def f(t, y):
        return [-2.0 * y[1] * y[2], 1.25 * y[0] * y[2], -0.5 * y[0] * y[1]]

    pieces = [solve_ivp(f, (0, end), [1.0, 0.5, 0.9], "DOP853", rtol=2.3e-14, atol=1e-16, dense_output=True).sol
              for end in (-1, 2)]
    return lambda t: pieces[int(t > 0)](t)


def slope_of(order, rigid, spoil=0.0):
    steps = np.array([1 / 64, 1 / 96, 1 / 128])
    task = problem(smooth_f, smooth_J, (1.0, 0.5, 0.9), 2.0, 1e-11, 1e-11)
    errors = [np.max(np.abs(at_end(seeded(task, order, h, rigid), h, 2.0, spoil) - rigid(2.0))) for h in steps]
    return np.polyfit(np.log(steps), np.log(errors), 1)[0]


@pytest.mark.parametrize("order", ORDERS)
def test_order_of_convergence(order, rigid):
    """Fixed steps on a smooth problem: the slope is the order within 0.15."""
    assert abs(slope_of(order, rigid) - order) < 0.15


@pytest.mark.parametrize("order", (2, 3, 4, 5))
def test_a_wrong_history_loses_the_order(order, rigid):
    """Negative control: distances of the past off by one in a hundred."""
    assert slope_of(order, rigid, spoil=1e-2) < order - 0.5


def constant_of(order, leading=LEADING):
    """Error of y' = -y at t = 1 in units of h^order t exp(-t), extrapolated from h and h/2."""
    task, found = problem(decay_f, decay_J, (1.0,), 1.0, 1e-13, 1e-13), []
    for h in (1 / 40, 1 / 80):
        stepper = seeded(task, order, h, lambda t: np.array([math.exp(-t)]), leading=leading)
        found.append((at_end(stepper, h, 1.0)[0] * math.e - 1.0) / h**order)
    return 2 * found[1] - found[0]


@pytest.mark.parametrize("order", ORDERS)
def test_error_constant(order):
    """1/(k + 1) for the formula of order k (Hairer, Nørsett, Wanner, vol. I, III.2); a wrong coefficient changes it."""
    sign = -1.0 if order % 2 == 0 else 1.0
    assert abs(sign * constant_of(order) * (order + 1) - 1) < 0.03
    wrong = tuple(a * 1.05 if k == order else a for k, a in enumerate(LEADING))
    assert abs(sign * constant_of(order, wrong) * (order + 1) - 1) > 0.1


def test_steps_of_any_length_keep_the_order(rigid):
    """Steps alternating between h and 2 h at order 3: error falls as h³."""
    task, errors = problem(smooth_f, smooth_J, (1.0, 0.5, 0.9), 1.5, 1e-12, 1e-12), []
    for h in (1 / 64, 1 / 128):
        stepper, t = seeded(task, 3, h, rigid), 0.0
        for k in range(round(1.5 / (3 * h))):
            for length in (h, 2 * h):
                t = 3 * h * k + (3 * h if length > h else h)
                stepper.memory[stepping.STEP] = length
                assert stepper.advance(t) == (stepping.REACHED, 1)
        errors.append(np.max(np.abs(stepper.z - rigid(1.5))))
    assert abs(np.log2(errors[0] / errors[1]) - 3) < 0.2


def finish(stepper: Stepper, end: float) -> np.ndarray:
    status = stepping.BUFFER_FULL
    while status == stepping.BUFFER_FULL:
        status, _ = stepper.advance(end)
    assert status == stepping.REACHED
    return stepper.z.copy()


def test_chunks_change_nothing():
    """Steps do not know where the buffer ends."""
    f, J, start, atol, _ = PROBLEMS["OREGO"]
    task = problem(f, J, start, 30.0, 1e-6, atol)
    whole, pieces = BDFStepper(task), BDFStepper(task)
    pieces.times, pieces.states = np.empty(3), np.empty((3, 3))
    assert whole.begin() and pieces.begin()
    assert np.array_equal(finish(whole, 30.0), finish(pieces, 30.0)) and np.array_equal(whole.counts, pieces.counts)


def test_restart_begins_at_order_one_and_goes_on():
    """As after a corner of the right-hand side: no memory of what was before, the same answer."""
    f, J, start, atol, references = PROBLEMS["HIRES"]
    end = min(references)
    stepper = BDFStepper(problem(f, J, start, end, 1e-7, atol))
    assert stepper.begin()
    finish(stepper, 5.0)
    assert stepper.memory[bdf.ORDER] > 1
    stepper.history[1:] = 1e3  # of no use any more
    assert stepper.begin()
    assert stepper.memory[bdf.ORDER] == 1 and 0 < stepper.memory[stepping.STEP] < 1.0
    assert np.max(np.abs(finish(stepper, end) / references[end] - 1)) < 1e-5


@callback
def refusing(exchange, verdict, context):
    """Refuses the calls number context[1] to context[2]."""
    c = carray(context, (3,))
    c[0] += 1
    return 0 if c[1] <= c[0] <= c[2] else 1


@pytest.mark.parametrize("first, refusals", [(1, 1), (20, 1), (20, 7)])
def test_refusals_are_counted_and_survived(first, refusals):
    f, J, start, atol, references = PROBLEMS["ROBER"]
    context = np.array([0, first, first + refusals - 1], dtype=np.int64)
    course = Course()
    task = problem(f, J, start, 40.0, 1e-6, atol, (0.4,), refusing.address, context)
    outcome = integrate(task, "BDF", course)
    assert outcome.status is Status.FINISHED and outcome.counts["rejected_by_second_law"] == refusals
    assert np.max(np.abs(course.at(40.0) / np.array(references[40.0]) - 1)) < 1e-5


def test_endless_refusals_end_with_a_sentence():
    f, J, start, atol, _ = PROBLEMS["ROBER"]
    context = np.array([0, 30, 10**9], dtype=np.int64)
    outcome = integrate(problem(f, J, start, 40.0, 1e-6, atol, (), refusing.address, context), "BDF", Course())
    assert outcome.status is Status.GAVE_UP and outcome.time > 0
    assert "refused" in outcome.reason or "step became too small" in outcome.reason


@callback
def poisoned_f(y, out, context):
    out[0] = -y[0] if y[0] > 0.5 else math.nan
    return 1


def test_where_f_has_no_value_it_stops():
    """The border of where f exists is approached and not crossed, with a sentence."""
    course = Course()
    outcome = integrate(problem(poisoned_f, decay_J, (1.0,), 2.0, 1e-6, 1e-12), "BDF", course)
    assert outcome.status is Status.GAVE_UP and "step became too small" in outcome.reason
    assert outcome.counts["Newton_failures"] > 3 and abs(outcome.time / math.log(2) - 1) < 1e-4
    begun = integrate(problem(poisoned_f, decay_J, (0.4,), 2.0, 1e-6, 1e-12), "BDF", course)
    assert begun.status is Status.GAVE_UP and "not finite at the start" in begun.reason


def test_it_lands_on_stops_without_crumbs():
    """A thousand stops among long steps: at most three steps each, and the answer stays."""
    f, J, start, atol, references = PROBLEMS["ROBER"]
    course, stops = Course(), tuple(np.linspace(0, 40, 1001)[1:-1])
    outcome = integrate(problem(f, J, start, 40.0, 1e-6, atol, stops), "BDF", course)
    assert set(stops) <= set(course.times) and outcome.counts["steps"] < 3300
    assert np.max(np.abs(course.at(40.0) / np.array(references[40.0]) - 1)) < 1e-5


def test_work_stays_what_it_should_be():
    """J and factors serve many steps: POLLU at 1e-6 takes fewer than 1.5 f a step, a J every 10 and an LU every 4 steps."""
    f, J, start, atol, _ = PROBLEMS["POLLU"]
    counts = integrate(problem(f, J, start, 60.0, 1e-6, atol), "BDF", Course()).counts
    assert counts["f_evaluations"] < 1.5 * counts["steps"] and counts["factorisations"] < counts["steps"] / 4
    assert counts["J_evaluations"] < counts["steps"] / 10 and counts["rejected"] < counts["steps"] / 20
    assert counts["solves"] <= counts["f_evaluations"]


def test_tolerances_that_double_precision_cannot_meet():
    """Asked for 1e-15, it works to what round-off lets it, and does not fight that with ever shorter steps."""
    f, J, start, atol, references = PROBLEMS["HIRES"]
    end = min(references)
    course = Course()
    tight = integrate(problem(f, J, start, end, 1e-15, atol), "BDF", course)
    assert tight.status is Status.FINISHED and tight.counts["rejected"] < 0.05 * tight.counts["steps"]
    assert np.max(np.abs(course.at(end) / np.array(references[end]) - 1)) < 1e-9
