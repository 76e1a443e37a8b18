"""The integrators on problems of the literature, and their parts on problems with known answers."""

import numpy as np
import pytest

from bothways.integrate import METHODS, OWN_METHODS, Status, integrate, stepping
from bothways.integrate.compiled_methods import RosenbrockStepper
from bothways.integrate.pattern import plan
from bothways.integrate.rosenbrock_tables import RODAS5P
from bothways.integrate.sparse_lu import dense_factor, dense_solve, factor, solve, unpermute
from stiff_problems import PROBLEMS, Course, problem, smooth_f, smooth_J


def worst(name, method, rtol):
    """Largest relative error over the reference values of a problem."""
    f, J, start, atol, references = PROBLEMS[name]
    *stops, end = references
    course = Course()
    outcome = integrate(problem(f, J, start, end, rtol, atol, stops), method, course)
    assert outcome.status is Status.FINISHED, outcome.reason
    return max(np.max(np.abs(course.at(t) / np.array(values) - 1)) for t, values in references.items())


@pytest.mark.parametrize("name", PROBLEMS)
@pytest.mark.parametrize("method", METHODS)
def test_reference_values_of_the_literature(name, method):
    """Within 30 rtol at rtol 1e-8; the references carry 10 digits or more."""
    assert worst(name, method, 1e-8) < 3e-7 * (30 if name == "E5" else 1)


@pytest.mark.parametrize("name", PROBLEMS)
@pytest.mark.parametrize("method", OWN_METHODS)
def test_achieved_error_follows_the_tolerance(name, method):
    """Within a factor 30 above rtol over six decades, and falling with it."""
    errors = [worst(name, method, 10.0**-k) for k in range(3, 10)]
    for k, error in enumerate(errors, 3):
        assert error < 30 * 10.0**-k + 2e-10, (k, error)
    assert errors[-1] < 1e-4 * errors[0]


def test_order_of_convergence():
    """Fixed steps on a smooth problem: slope 5 within 0.15."""
    steps, exact = (1 / 8, 1 / 16, 1 / 32), fixed(1 / 512)
    errors = [np.max(np.abs(fixed(h) - exact)) for h in steps]
    slope = np.polyfit(np.log(steps), np.log(errors), 1)[0]
    assert abs(slope - 5) < 0.15 and errors[-1] < 1e-7


def fixed(h, end=2.0):
    """Euler's rigid body to `end` with fixed steps."""
    stepper = RosenbrockStepper(problem(smooth_f, smooth_J, (1.0, 0.5, 0.9), end, 1e30, 1e30))
    for k in range(round(end / h)):
        stepper.memory[:] = 0.0
        stepper.memory[stepping.TIME], stepper.memory[stepping.STEP] = k * h, h
        status, written = stepper.advance((k + 1) * h)
        assert status == stepping.REACHED and written == 1
    return stepper.z.copy()


def test_table_is_of_its_order():
    """Row sums and the order conditions to order 3 of the transformed table, and what stiff accuracy asks."""
    t = RODAS5P
    assert t.a[-1] == t.m[:-1] and t.m[-1] == 1.0 and t.e == (0.0,) * 7 + (1.0,)
    # linear test equation: one step of y' = y agrees with exp(h) to order 5
    hs = np.array([0.2, 0.1])
    errors = [abs(linear_step(h) - np.exp(h)) for h in hs]
    assert np.log2(errors[0] / errors[1]) > 5.8  # local error; linear problems meet it with room
    assert abs(linear_step(-1e8)) < 1e-6  # R(infinity) = 0


def linear_step(z):
    """One step of y' = λy with z = λh and h = 1."""
    t, u = RODAS5P, []
    for i in range(len(t.m)):
        y = 1.0 + sum(a * w for a, w in zip(t.a[i], u, strict=False))
        u.append((z * y + sum(c * w for c, w in zip(t.c[i], u, strict=False))) / (1.0 / t.gamma - z))
    return 1.0 + sum(m * w for m, w in zip(t.m, u, strict=True))


def random_matrix(n, density, tail, seed):
    """A diagonally heavy matrix with full last rows and columns, compressed columns."""
    rng = np.random.default_rng(seed)
    mask = rng.random((n, n)) < density
    mask |= mask.T | np.eye(n, dtype=bool)
    mask[n - tail :, :] = True
    mask[:, n - tail :] = True
    matrix = np.where(mask, rng.normal(size=(n, n)), 0.0) + 3 * n**0.5 * np.eye(n)
    rows = np.concatenate([np.flatnonzero(mask[:, j]) for j in range(n)])
    starts = np.concatenate([[0], np.cumsum(mask.sum(axis=0))])
    return matrix, rows, starts, np.concatenate([matrix[mask[:, j], j] for j in range(n)])


@pytest.mark.parametrize("n, density", [(3, 1.0), (20, 0.2), (150, 0.02)])
def test_sparse_lu_solves(n, density):
    matrix, rows, starts, values = random_matrix(n, density, 2 if n > 3 else 0, n)
    p = plan(rows, starts, 2 if n > 3 else 0)
    lu, scratch = np.zeros(p.fill), np.zeros(n)
    assert factor(values, p.order, p.start, p.column, p.diagonal, p.target, lu, scratch)
    right, x, out = np.arange(1.0, n + 1), np.empty(n), np.empty(n)
    solve(lu, p.order, p.start, p.column, p.diagonal, right, x)
    unpermute(x, p.order, out)
    assert np.allclose(matrix @ out, right, rtol=1e-12) and np.all(scratch == 0)
    dense, pivots, also = np.empty((n, n)), np.empty(n, dtype=np.int64), np.empty(n)
    assert dense_factor(values, rows, starts, dense, pivots)
    dense_solve(dense, pivots, right, also)
    assert np.allclose(also, out, rtol=1e-11)


def test_a_cancelled_pivot_is_noticed():
    """[[1, 1], [1, 1 + 1e-12]]: the second pivot keeps no digit worth having, and the factorisation says so."""
    rows, starts = np.array([0, 1, 0, 1]), np.array([0, 2, 4])
    p = plan(rows, starts, 0)
    lu, scratch = np.zeros(p.fill), np.zeros(2)
    assert not factor(np.array([1.0, 1.0, 1.0, 1.0 + 1e-12]), p.order, p.start, p.column, p.diagonal, p.target, lu, scratch)
    assert factor(np.array([1.0, 1.0, 1.0, 1.1]), p.order, p.start, p.column, p.diagonal, p.target, lu, scratch)


def test_a_wrong_coefficient_is_seen():
    """Negative control: a table off by 1e-4 in one place loses its order."""
    from dataclasses import replace

    c = [list(row) for row in RODAS5P.c]
    c[4][2] *= 1 + 1e-4
    task = problem(*PROBLEMS["OREGO"][:3], 30.0, 1e-8, 1e-14)
    good, bad = RosenbrockStepper(task), RosenbrockStepper(task, replace(RODAS5P, c=tuple(map(tuple, c))))
    for stepper in (good, bad):
        assert stepper.begin()
        while stepper.advance(30.0)[0] == stepping.BUFFER_FULL:
            pass
    assert bad.counts[stepping.STEPS] > 3 * good.counts[stepping.STEPS] or np.max(np.abs(bad.z / good.z - 1)) > 1e-5
