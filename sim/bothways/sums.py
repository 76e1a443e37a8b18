"""Sums whose additions need not wait for one another: the compiler may not reorder a sum, so four are written out.

Loops run over whole fours, by rows of a view, since an index that starts at zero and is not added to needs no test for
a negative one.
"""

from .compiled import compiled, fours, span


@compiled
def total_of(x):
    """Σ x_i."""
    x4 = fours(x, 0, x.size)
    s0, s1, s2, s3 = 0.0, 0.0, 0.0, 0.0
    for i in range(x4.shape[0]):
        s0 += x4[i, 0]
        s1 += x4[i, 1]
        s2 += x4[i, 2]
        s3 += x4[i, 3]
    rest = span(x, 4 * x4.shape[0], x.size)
    for i in range(rest.size):
        s0 += rest[i]
    return (s0 + s1) + (s2 + s3)


@compiled
def dot(x, y):
    """Σ x_i y_i."""
    x4, y4 = fours(x, 0, x.size), fours(y, 0, x.size)
    s0, s1, s2, s3 = 0.0, 0.0, 0.0, 0.0
    for i in range(x4.shape[0]):
        s0 += x4[i, 0] * y4[i, 0]
        s1 += x4[i, 1] * y4[i, 1]
        s2 += x4[i, 2] * y4[i, 2]
        s3 += x4[i, 3] * y4[i, 3]
    done = 4 * x4.shape[0]
    x1, y1 = span(x, done, x.size), span(y, done, x.size)
    for i in range(x1.size):
        s0 += x1[i] * y1[i]
    return (s0 + s1) + (s2 + s3)


@compiled
def sum_at(values, places, first, last):
    """Σ values[places[first:last]]; the number of places is a multiple of four."""
    own = fours(places, first, last)
    s0, s1, s2, s3 = 0.0, 0.0, 0.0, 0.0
    for e in range(own.shape[0]):
        s0 += values[own[e, 0]]
        s1 += values[own[e, 1]]
        s2 += values[own[e, 2]]
        s3 += values[own[e, 3]]
    return (s0 + s1) + (s2 + s3)
