"""Numeric part of the sparse LU: compiled index loops on a static pattern, diagonal pivots, watched.

Row by row (I.S. Duff, A.M. Erisman, J.K. Reid, Direct Methods for Sparse Matrices, 2nd ed., 2017, ch. 10). Without
pivoting a pivot may lose its digits to cancellation, and what it divides then grows. That is watched: `factor` returns
False, and the caller takes the pivoted dense way.
"""

from ..compiled import compiled, span
from ..sums import dot

CANCELLED = 1e-9
"""A pivot smaller than this part of what it was made from has lost its digits."""


@compiled
def factor(values, order, start, column, diagonal, target, lu, row):
    """L + U of the permuted matrix into lu (fill); row: (n) scratch of zeros, left zero. False if digits were lost.

    values: of the input, in compressed columns. L has a unit diagonal; the diagonal of lu holds 1/pivot. The loops of
    the full block at the end need no places.
    """
    dense = first_full_row(start, diagonal)
    lu[:] = 0.0
    for e in range(values.size):
        lu[target[e]] = values[e]
    sound = True
    for i in range(diagonal.size):
        middle = diagonal[i]
        own, places = span(lu, start[i], start[i + 1]), span(column, start[i], start[i + 1])
        for p in range(places.size):
            row[places[p]] = own[p]
        made_from = abs(row[i])
        below = span(column, start[i], middle if i < dense else start[i + 1] - (diagonal.size - dense))
        for p in range(below.size):
            k = below[p]
            multiplier = row[k] * lu[diagonal[k]]
            row[k] = multiplier
            if multiplier != 0.0:
                before = row[i]
                behind, end = diagonal[k] + 1, start[k + 1]
                _subtract_at(row, multiplier, span(lu, behind, end), span(column, behind, end))
                made_from = max(made_from, abs(row[i] - before))
        if i > dense:
            made_from = _eliminate_full(i, dense, start, diagonal, lu, row, made_from)
        pivot = row[i]
        if not abs(pivot) > CANCELLED * made_from:
            sound = False
        for p in range(places.size):
            own[p] = row[places[p]]
            row[places[p]] = 0.0
        lu[middle] = 1.0 / pivot
    return sound


@compiled
def first_full_row(start, diagonal):
    """Where the full block at the end begins: every row from there on reaches from its diagonal to the last column."""
    n = diagonal.size
    i = n
    while i > 0 and start[i] - diagonal[i - 1] == n - i + 1:
        i -= 1
    return i


@compiled
def _subtract_at(row, multiplier, values, places):
    """row - multiplier·values at these places."""
    for q in range(values.size):
        row[places[q]] -= multiplier * values[q]


@compiled
def _eliminate_full(i, dense, start, diagonal, lu, row, made_from):
    """Row i less its multiples of the full rows above it, two at a time; returns the largest part of its pivot."""
    size, at = diagonal.size - dense, i - dense
    own = span(row, dense, diagonal.size)
    for k in range(0, at - 1, 2):
        one, two = _full_row(lu, start, dense + k, size), _full_row(lu, start, dense + k + 1, size)
        m1 = own[k] * one[k]
        m2 = (own[k + 1] - m1 * one[k + 1]) * two[k + 1]
        _subtract_two(span(own, k + 2, size), m1, span(one, k + 2, size), m2, span(two, k + 2, size))
        own[k], own[k + 1] = m1, m2
        made_from = max(made_from, abs(m1 * one[at]), abs(m2 * two[at]))
    if at % 2 == 1:
        one = _full_row(lu, start, i - 1, size)
        m1 = own[at - 1] * one[at - 1]
        _subtract_two(span(own, at, size), m1, span(one, at, size), 0.0, span(one, at, size))
        own[at - 1] = m1
        made_from = max(made_from, abs(m1 * one[at]))
    return made_from


@compiled
def _subtract_two(row, m1, one, m2, two):
    """row - m1·one - m2·two. Loops that start at 0 become vector instructions; from elsewhere on they do not."""
    for q in range(row.size):
        row[q] -= m1 * one[q] + m2 * two[q]


@compiled
def _full_row(lu, start, i, size):
    """The part of row i in the full block."""
    return span(lu, start[i + 1] - size, start[i + 1])


@compiled
def _product_at(lu, x, column, first, last):
    """Σ lu_p x at the columns of places first to last: rows are short, so that one sum is faster than four."""
    values, places = span(lu, first, last), span(column, first, last)
    total = 0.0
    for p in range(values.size):
        total += values[p] * x[places[p]]
    return total


@compiled
def solve(lu, order, start, column, diagonal, right, x):
    """Solves for one right-hand side (n) in the original order; x: (n) result in the permuted one, see `unpermute`."""
    n, dense = diagonal.size, first_full_row(start, diagonal)
    size = n - dense
    full = span(x, dense, n)
    for i in range(dense):
        x[i] = right[order[i]] - _product_at(lu, x, column, start[i], diagonal[i])
    for i in range(dense, n):
        own = _full_row(lu, start, i, size)
        x[i] = (right[order[i]] - _product_at(lu, x, column, start[i], start[i + 1] - size)
                - dot(span(own, 0, i - dense), full))
    for k in range(size):
        at = size - 1 - k
        own = _full_row(lu, start, dense + at, size)
        full[at] = (full[at] - dot(span(own, at + 1, size), span(full, at + 1, size))) * own[at]
    for k in range(dense):
        i = dense - 1 - k
        x[i] = (x[i] - _product_at(lu, x, column, diagonal[i] + 1, start[i + 1])) * lu[diagonal[i]]


@compiled
def unpermute(x, order, out):
    """x in the original order."""
    for i in range(x.size):
        out[order[i]] = x[i]


@compiled
def dense_factor(values, rows, starts, matrix, pivots):
    """Pivoted dense LU (rows exchanged) of the same input, the fallback. False if singular.

    matrix: (n, n) result; pivots: (n).
    """
    n = pivots.size
    matrix[:, :] = 0.0
    for j in range(n):
        for e in range(starts[j], starts[j + 1]):
            matrix[rows[e], j] = values[e]
    for k in range(n):
        best = k
        for i in range(k + 1, n):
            if abs(matrix[i, k]) > abs(matrix[best, k]):
                best = i
        pivots[k] = best
        if not abs(matrix[best, k]) > 0.0:
            return False
        if best != k:
            for j in range(n):
                matrix[k, j], matrix[best, j] = matrix[best, j], matrix[k, j]
        for i in range(k + 1, n):
            m = matrix[i, k] / matrix[k, k]
            matrix[i, k] = m
            if m != 0.0:
                for j in range(k + 1, n):
                    matrix[i, j] -= m * matrix[k, j]
    return True


@compiled
def dense_solve(matrix, pivots, right, x):
    """Solves with the factors of `dense_factor`."""
    n = pivots.size
    x[:] = right
    for k in range(n):
        p = pivots[k]
        x[k], x[p] = x[p], x[k]
    for i in range(n):
        total = x[i]
        for j in range(i):
            total -= matrix[i, j] * x[j]
        x[i] = total
    for k in range(n):
        i = n - 1 - k
        total = x[i]
        for j in range(i + 1, n):
            total -= matrix[i, j] * x[j]
        x[i] = total / matrix[i, i]

