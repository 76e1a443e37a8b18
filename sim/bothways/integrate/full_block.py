"""LU of the full block at the end of the sparse matrix, in padded rows of whole eights, and its triangular solves.

Behind the sparse factors of a matrix of n rows, the last `size` of them the block, stand in one array: its last columns,
row by row (`rows`: of the sparse rows U; the block's are turned into U as it is factorised); n rows with the multipliers
of each pivot by the block's rows (`lower`: L by columns); for each column of the block what stands above its pivot
(`upper`: U by columns); 1/pivots; the largest part each pivot was made from; and a right-hand side. Every row is
`padded(size)` wide, and zero where nothing belongs.
"""

from ..compiled import compiled
from ..lanes import padded, product, take, take_four, take_list, take_list_of_two, take_two, widen


@compiled
def block_size(n, size):
    """Numbers that all this takes."""
    return (2 * n + size + 3) * padded(size)


@compiled
def places(n, size):
    """Where `lower`, `upper`, the inverse pivots, their largest parts and the right-hand side begin."""
    wide = padded(size)
    upper = 2 * n * wide
    inverse = upper + size * wide
    return n * wide, upper, inverse, inverse + wide, inverse + 2 * wide


@compiled
def eliminate(block, n, size):
    """Turns the rows of the block into L, U and 1/pivots, two pivots at a time (the outer-product form of Gauss's
    elimination: rows do not wait for one another); the largest parts of the pivots must stand in place and are widened."""
    wide = padded(size)
    lower, upper, inverse, made_from, _ = places(n, size)
    top = (n - size) * wide
    for k in range(0, size - 1, 2):
        one, two = top + k * wide, top + (k + 1) * wide
        lower_one, lower_two = lower + one, lower + two
        first = 1.0 / block[one + k]
        m = block[two + k] * first
        block[lower_one + k + 1] = m
        start = k // 8 * 8
        for q in range(start, wide, 8):
            take(block, two + q, m, block, one + q)
        second = 1.0 / block[two + k + 1]
        corner = block[one + k + 1]
        block[inverse + k], block[inverse + k + 1] = first, second
        start = (k + 2) // 8 * 8
        for i in range(k + 2, size):
            row = top + i * wide
            m1 = block[row + k] * first
            m2 = (block[row + k + 1] - m1 * corner) * second
            block[lower_one + i], block[lower_two + i] = m1, m2
            for q in range(start, wide, 8):
                take_two(block, row + q, m1, m2, block, one + q, two + q)
        for q in range(k // 8 * 8, wide, 8):
            widen(block, made_from + q, block, one + q, lower_one + q)
            widen(block, made_from + q, block, two + q, lower_two + q)
        for j in range(k + 1, size):
            block[upper + j * wide + k] = block[one + j]
        for j in range(k + 2, size):
            block[upper + j * wide + k + 1] = block[two + j]
    if size % 2 == 1:
        block[inverse + size - 1] = 1.0 / block[top + (size - 1) * wide + size - 1]


@compiled
def subtract_rows(block, i, multipliers, rows, wide, first):
    """Row i less multiples of others (rows: their numbers) from column `first` on, sixteen columns or what is left."""
    if first + 16 <= wide:
        take_list_of_two(block, i * wide + first, multipliers, rows, wide, first)
    else:
        take_list(block, i * wide + first, multipliers, rows, wide, first)


@compiled
def widen_parts(block, n, size):
    """Widens the largest parts of the block's pivots by what the sparse pivots took off them."""
    wide = padded(size)
    lower, _, _, made_from, _ = places(n, size)
    for k in range(n - size):
        for q in range(0, wide, 8):
            widen(block, made_from + q, block, k * wide + q, lower + k * wide + q)


@compiled
def solve_block(block, n, size, x):
    """Solves for the block's unknowns, in place; x: (n) right-hand side, those before the block solved forwards."""
    wide, above = padded(size), n - size
    lower, upper, inverse, _, own = places(n, size)
    for i in range(size):
        block[own + i] = x[above + i]
    for i in range(size, wide):  # a right-hand side that was not finite leaves NaN there
        block[own + i] = 0.0
    _subtract_all(block, own, x, lower, above, wide)
    for k in range(size - 1):
        value, column = block[own + k], lower + (above + k) * wide
        for q in range(k // 8 * 8, wide, 8):
            take(block, own + q, value, block, column + q)
    for j in range(size):
        k = size - 1 - j
        value, column = block[own + k] * block[inverse + k], upper + k * wide
        x[above + k] = value
        for q in range(0, k, 8):
            take(block, own + q, value, block, column + q)
    for k in range(size):
        block[own + k] = x[above + k]


@compiled
def _subtract_all(block, own, x, first, count, wide):
    """Row `own` less x_k of each of so many rows from place `first` on."""
    whole = count // 4 * 4
    for k in range(0, whole, 4):
        j = first + k * wide
        for q in range(0, wide, 8):
            take_four(block, own + q, x[k], x[k + 1], x[k + 2], x[k + 3], block, j + q, wide)
    for k in range(whole, count):
        for q in range(0, wide, 8):
            take(block, own + q, x[k], block, first + k * wide + q)


@compiled
def subtract_right(block, n, size, x):
    """Takes off the sparse rows of x what they have in the block's columns times their solution."""
    wide, own = padded(size), places(n, size)[4]
    for i in range(n - size):
        x[i] -= product(block, i * wide, block, own, wide // 8)
