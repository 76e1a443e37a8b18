"""The course between steps: sixth order where it is smooth, untouched by fast modes where it is stiff."""

import numpy as np
import pytest

from bothways import Equations, build_case, read_case, read_mechanism, run
from bothways.course import Course, settled
from bothways.integrate import Resolvent

FAST = 1e9


def smooth(t):
    """y' = -y, z' = y z: y = exp(-t), z = exp(1 - exp(-t))."""
    return np.array([np.exp(-t), np.exp(1 - np.exp(-t))])


def smooth_f(t, y):
    return np.array([-y[0], y[0] * y[1]])


def smooth_J(t, y):
    return np.array([[-1.0, 0.0], [y[1], y[0]]])


def largest_error(h):
    times = np.arange(0.0, 2.0 + h / 2, h)
    course = Course(times, np.array([smooth(t) for t in times]), smooth_f, smooth_J)
    return max(np.max(np.abs(course.between(k)(t) - smooth(t))) for k in range(len(times) - 1)
               for t in times[k] + h * np.array([0.2, 0.5, 0.8]))


def test_order():
    """Slope 6 within 0.15 on exact states."""
    steps = np.array([0.2, 0.1, 0.05])
    slope = np.polyfit(np.log(steps), np.log([largest_error(h) for h in steps]), 1)[0]
    assert abs(slope - 6) < 0.15


def slow_and_fast(t, y):
    """A slow decay fed on by a fast radical: x' = -r, r' = FAST (x - r); on the slow manifold r ≈ x."""
    return np.array([-y[1], FAST * (y[0] - y[1])])


def their_J(t, y):
    return np.array([[0.0, -1.0], [FAST, -FAST]])


def stiff_course(delta):
    """Exact states of the slow manifold, the radical off by δ of it, with alternating sign."""
    rate = 1 + 1 / FAST + 2 / FAST**2  # of rate² = FAST (rate - 1)
    times = np.array([0.0, 0.5, 1.0])
    x = np.exp(-rate * times)
    r = rate * x * (1 + delta * np.array([1, -1, 1]))
    return Course(times, np.column_stack([x, r]), slow_and_fast, their_J), rate


def stiff_error(delta):
    course, rate = stiff_course(delta)
    return max(abs(course.between(k)(t)[i] / np.exp(-rate * t) - 1) for k in (0, 1) for i in (0, 1)
               for t in course.times[k] + 0.5 * np.array([0.25, 0.5, 0.75]))


def test_fast_modes_do_not_swamp_the_course(monkeypatch):
    """A radical off by 1e-6 of it leaves the course off by some 1e-5; by f and J f as they come it would be off the map."""
    assert stiff_error(0.0) < 1e-6 and stiff_error(1e-6) < 1e-4
    monkeypatch.setattr("bothways.course.settled", lambda v, solve: v)
    assert stiff_error(1e-6) > 1.0


def test_half_conversion_in_a_stiff_course():
    """Peroxide in a bath, its radicals 1e4 times as fast: at rtol 1e-4, in steps of seconds, within 1e-4 of a tight run."""
    case, found = read_case("wet-peroxide"), []
    for rtol in (1e-4, 1e-9):
        changed = build_case({**case.document, "solver": {"rtol": rtol, "atol": 1e-17}}, mechanism=case.mechanism)
        found.append(run(changed).milestones["half-conversion of H2O2"])
    assert abs(found[0] / found[1] - 1) < 1e-4


@pytest.mark.parametrize("holds, heat", [("volume", "adiabatic"), ("pressure", "adiabatic"), ("pressure", "isothermal")])
@pytest.mark.parametrize("step", [1e-9, 1e-3, 1e6])
def test_resolvent(holds, heat, step):
    """(I - a J) x = v by the sparse bordered factors agrees with the dense J."""
    equations = Equations(read_mechanism("hydrogen-oxygen"), holds, heat, pressure=1e5)
    y = np.append(np.random.default_rng(3).uniform(0.1, 2.0, equations.size - 1), 1500.0)
    v = equations.f(0.0, y)
    x = equations.resolvent(0.0, y, step)(v)
    matrix = np.eye(y.size) - step * equations.J(0.0, y)
    assert np.linalg.norm(matrix @ x - v) < 1e-12 * np.linalg.norm(np.abs(matrix) @ np.abs(x) + np.abs(v))


def test_settled_keeps_what_the_step_resolves():
    """A mode of rate λ keeps 1 - (x/(1 + x))⁵ of itself, x = -hλ/20."""
    rates = np.array([-0.1, -1.0, -10.0, -1e3, -1e9])
    kept = settled(np.ones(5), lambda v: v / (1 - 0.05 * rates))
    x = -0.05 * rates
    assert np.allclose(kept, 1 - (x / (1 + x))**5, rtol=1e-9, atol=1e-15)


def test_a_resolvent_without_a_digit_left_takes_all_as_fast():
    """(I - h J) that is zero, or holds no number: what is left of any vector is nothing."""
    pattern = np.array([0, 1, 0, 1]), np.array([0, 2, 4])
    for values in (np.array([2.0, 0.0, 0.0, 2.0]), np.full(4, np.nan)):
        solve = Resolvent(pattern, np.ones(2), 0).of(values, 0.5)
        assert np.array_equal(solve(np.array([1.0, 2.0])), np.zeros(2))
