"""Operations on eight numbers at a time against plain NumPy, and the factors that are made of them."""

import numpy as np
import pytest

import bothways.integrate.pattern as pattern
from bothways import lanes
from bothways.compiled import compiled
from bothways.integrate.sparse_lu import factor, solve, unpermute
from test_integrate import random_matrix

WIDE, ROWS = 24, 7


@compiled
def every_operation(x, u, factors, rows, out):
    """One after another, a row of `out` for each."""
    for k in range(5):
        out[k * 24 : (k + 1) * 24] = x[:24]
    lanes.take(out, 8, factors[0], u, 16)
    lanes.take_two(out, 24, factors[0], factors[1], u, 0, 48)
    lanes.take_four(out, 48, factors[0], factors[1], factors[2], factors[3], u, 8, 24)
    lanes.take_list(out, 72, factors, rows, 24, 0)
    lanes.widen(out, 96, u, 0, 24)
    return lanes.product(x, 0, u, 24, 3)


def expected(x, u, f, rows):
    """The same in plain NumPy."""
    out = np.tile(x[:24], 5)
    out[8:16] -= f[0] * u[16:24]
    out[24:32] -= f[0] * u[:8] + f[1] * u[48:56]
    out[48:56] -= sum(f[k] * u[8 + 24 * k : 16 + 24 * k] for k in range(4))
    for k, row in zip(f, rows, strict=True):
        out[72:80] -= k * out[24 * row : 24 * row + 8]
    out[96:104] = np.maximum(out[96:104], np.abs(u[:8] * u[24:32]))
    return out, x[:24] @ u[24:48]


def test_operations_agree_with_numpy():
    rng = np.random.default_rng(7)
    x, u, f = rng.normal(size=WIDE), rng.normal(size=ROWS * WIDE), rng.normal(size=4)
    rows, out = np.array([0, 1, 2, 4], dtype=np.uint32), np.zeros(5 * WIDE)
    total = every_operation(x, u, f, rows, out)
    wanted, dot = expected(x, u, f, rows)
    assert np.allclose(out, wanted, rtol=1e-14, atol=1e-15) and total == pytest.approx(dot, rel=1e-14)


def test_rows_are_an_odd_number_of_eights():
    widths = [int(lanes.padded(size)) for size in range(1, 100)]
    assert all(w >= size and w % 16 == 8 and w < size + 16 for size, w in enumerate(widths, 1))


@pytest.mark.parametrize("size", [2, 3, 7, 8, 9, 15, 16, 17, 23, 40, 60])
def test_factors_with_a_full_block_of_any_size(size, monkeypatch):
    """A block that is larger than need be only costs time; odd and even numbers of pivots, whole and broken eights."""
    matrix, rows, starts, values = random_matrix(60, 0.05, 2, size)
    monkeypatch.setattr(pattern, "_first_full_row", lambda filled: len(filled) - size)
    p = pattern.plan(rows, starts, 2)
    assert len(p.order) - len(p.diagonal) == size
    lu, scratch, x, out = np.zeros(p.fill), np.zeros(60), np.empty(60), np.empty(60)
    for turn in (1.0, 2.0):  # a second factorisation finds what the first left behind
        assert factor(turn * values, p.order, p.start, p.column, p.diagonal, p.target, lu, scratch)
        solve(lu, p.order, p.start, p.column, p.diagonal, np.full(60, np.nan), x)  # is forgotten
        solve(lu, p.order, p.start, p.column, p.diagonal, np.arange(1.0, 61.0), x)
        unpermute(x, p.order, out)
        assert np.allclose(turn * matrix @ out, np.arange(1.0, 61.0), rtol=1e-12) and not scratch.any()


def test_a_cancelled_pivot_within_the_block_is_noticed():
    """The last two of five unknowns as good as dependent."""
    matrix = np.eye(5) + 0.1
    matrix[4] = matrix[3] * (1.0 + 1e-12)
    rows, starts = np.tile(np.arange(5), 5), np.arange(0, 26, 5)
    p = pattern.plan(rows, starts, 2)
    lu, scratch = np.zeros(p.fill), np.zeros(5)
    assert not factor(matrix.T.ravel().copy(), p.order, p.start, p.column, p.diagonal, p.target, lu, scratch)
    matrix[4, 4] += 1.0
    assert factor(matrix.T.ravel().copy(), p.order, p.start, p.column, p.diagonal, p.target, lu, scratch)
