"""Numeric part of the sparse LU: compiled index loops on a static pattern, diagonal pivots, watched.

Row by row (I.S. Duff, A.M. Erisman, J.K. Reid, Direct Methods for Sparse Matrices, 2nd ed., 2017, ch. 10). Without
pivoting a pivot may lose its digits to cancellation, and what it divides then grows. That is watched: `factor` returns
False, and the caller takes the pivoted dense way.
"""

from ..compiled import compiled, span
from ..lanes import padded
from .full_block import block_size, eliminate, places, solve_block, subtract_right, subtract_rows, widen_parts

CANCELLED = 1e-9
"""A pivot smaller than this part of what it was made from has lost its digits."""


@compiled
def fill(start, order, diagonal):
    """How many numbers `factor` sets."""
    return start[order.size] + block_size(order.size, order.size - diagonal.size)


@compiled
def factor(values, order, start, column, diagonal, target, lu, row):
    """L + U of the permuted matrix into lu (`fill`, zeros at first); row: (n) scratch of zeros, left zero.

    values: of the input, in compressed columns. False if digits were lost. L has a unit diagonal; the diagonal of lu
    holds 1/pivot. The columns of the full block at the end are what full_block.py says.
    """
    n, dense = order.size, diagonal.size
    size = n - dense
    wide = padded(size)
    block = span(lu, start[n], lu.size)
    lower, _, inverse, made_from, _ = places(n, size)
    _spread(values, target, span(lu, 0, start[n] + n * wide))
    sound = True
    for i in range(dense):
        own, names = span(lu, start[i], start[i + 1]), span(column, start[i], start[i + 1])
        above = span(names, 0, diagonal[i] - start[i])
        largest = _eliminate_left(own, names, above, start, column, diagonal, lu, row, i)
        for q in range(0, wide, 16):
            subtract_rows(block, i, own, above, wide, q)
        pivot = lu[diagonal[i]]
        sound = sound and abs(pivot) > CANCELLED * largest
        lu[diagonal[i]] = 1.0 / pivot
    for k in range(size):
        i = dense + k
        own, above = span(lu, start[i], start[i + 1]), span(column, start[i], start[i + 1])
        _eliminate_left(own, above, above, start, column, diagonal, lu, row, i)
        for p in range(above.size):
            block[lower + above[p] * wide + k] = own[p]
        block[made_from + k] = abs(block[i * wide + k])
    widen_parts(block, n, size)
    for q in range(0, wide, 16):  # a few columns at a time: what is taken off many rows stays near
        for i in range(dense, n):
            subtract_rows(block, i, span(lu, start[i], start[i + 1]), span(column, start[i], start[i + 1]), wide, q)
    eliminate(block, n, size)
    for k in range(size):
        sound = sound and abs(1.0 / block[inverse + k]) > CANCELLED * block[made_from + k]
    return sound


@compiled
def _eliminate_left(own, names, above, start, column, diagonal, lu, row, i):
    """A row's part left of the block less its multiples of the rows above; returns the largest part of its diagonal (i).

    own, names: the row and its columns; above: those of them that stand above it, where the multipliers are left.
    """
    for p in range(names.size):
        row[names[p]] = own[p]
    made_from = abs(row[i])
    for p in range(above.size):
        k = above[p]
        m = row[k] * lu[diagonal[k]]
        row[k] = m
        behind, last = diagonal[k] + 1, start[k + 1]
        if last > behind:
            before = row[i]
            _subtract_at(row, m, span(lu, behind, last), span(column, behind, last))
            made_from = max(made_from, abs(row[i] - before))
    for p in range(names.size):
        own[p] = row[names[p]]
        row[names[p]] = 0.0
    return made_from


@compiled
def _spread(values, target, lu):
    lu[:] = 0.0
    for e in range(values.size):
        lu[target[e]] = values[e]


@compiled
def _subtract_at(row, multiplier, values, places):
    """row - multiplier·values at these places."""
    for q in range(values.size):
        row[places[q]] -= multiplier * values[q]


@compiled
def _product_at(lu, x, column, first, last):
    """Σ lu_p x at the columns of places first to last: rows are short, so that one sum is faster than four."""
    values, names = span(lu, first, last), span(column, first, last)
    total = 0.0
    for p in range(values.size):
        total += values[p] * x[names[p]]
    return total


@compiled
def solve(lu, order, start, column, diagonal, right, x):
    """Solves for one right-hand side (n) in the original order; x: (n) result in the permuted one, see `unpermute`."""
    n, dense = order.size, diagonal.size
    size, block = n - dense, span(lu, start[n], lu.size)
    for i in range(n):
        x[i] = right[order[i]]
    for i in range(dense):
        if diagonal[i] > start[i]:
            x[i] -= _product_at(lu, x, column, start[i], diagonal[i])
    solve_block(block, n, size, x)
    subtract_right(block, n, size, x)
    for k in range(dense):
        i = dense - 1 - k
        behind, last = diagonal[i] + 1, start[i + 1]
        if last > behind:
            x[i] -= _product_at(lu, x, column, behind, last)
        x[i] *= lu[diagonal[i]]


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

