"""Numeric part of the sparse LU: compiled index loops on a static pattern, diagonal pivots, watched.

Row by row (I.S. Duff, A.M. Erisman, J.K. Reid, Direct Methods for Sparse Matrices, 2nd ed., 2017, ch. 10). Without
pivoting a pivot may lose its digits to cancellation, and what it divides then grows. That is watched: `factor` returns
False, and the caller takes the pivoted dense way.
"""

from ..compiled import compiled

CANCELLED = 1e-9
"""A pivot smaller than this part of what it was made from has lost its digits."""


@compiled
def factor(values, order, start, column, diagonal, target, lu, row):
    """L + U of the permuted matrix into lu (fill); row: (n) scratch of zeros, left zero. False if digits were lost.

    values: of the input, in compressed columns. L has a unit diagonal; the diagonal of lu holds 1/pivot.
    """
    lu[:] = 0.0
    for e in range(values.size):
        lu[target[e]] = values[e]
    sound = True
    for i in range(diagonal.size):
        first, middle, last = start[i], diagonal[i], start[i + 1]
        for p in range(first, last):
            row[column[p]] = lu[p]
        made_from = abs(row[i])
        for p in range(first, middle):
            k = column[p]
            multiplier = row[k] * lu[diagonal[k]]
            row[k] = multiplier
            if multiplier != 0.0:
                before = row[i]
                for q in range(diagonal[k] + 1, start[k + 1]):
                    row[column[q]] -= multiplier * lu[q]
                made_from = max(made_from, abs(row[i] - before))
        pivot = row[i]
        if not abs(pivot) > CANCELLED * made_from:
            sound = False
        for p in range(first, last):
            lu[p] = row[column[p]]
            row[column[p]] = 0.0
        lu[middle] = 1.0 / pivot
    return sound


@compiled
def solve(lu, order, start, column, diagonal, right, x):
    """Solves for one right-hand side (n) in the original order; x: (n) result in the permuted one, see `unpermute`."""
    n = diagonal.size
    for i in range(n):
        total = right[order[i]]
        for p in range(start[i], diagonal[i]):
            total -= lu[p] * x[column[p]]
        x[i] = total
    for k in range(n):
        i = n - 1 - k
        total = x[i]
        for p in range(diagonal[i] + 1, start[i + 1]):
            total -= lu[p] * x[column[p]]
        x[i] = total * lu[diagonal[i]]


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

