"""Bases of reactions and of species in which rates and amounts of many decades do not drown one another.

Of the reactions, in falling order of their one-way rates, those are taken that do not depend on the ones before: every other
reaction is a combination of basis reactions that are no slower, so that the rate of change of a basis reaction's extent mixes
into its own rate only slower ones. Of the species, in rising order of their amounts, those are taken whose changes do not
depend on the ones before: what is conserved then gives the changes of all others, which are there in larger amounts, so that
no small amount is a difference of large ones. Both are greedy bases of largest (least) weight of a matroid (J. Edmonds,
Math. Program. 1 (1971) 127, doi:10.1007/BF01584082).
"""

import numpy as np

from ..compiled import compiled

NIL = 1e-10
"""Of combinations of small integers: below, an entry is zero [-]."""
LOOSE = 10.0
"""A basis is kept while nothing that it is mixed with is more than so many times out of order [-]."""


@compiled
def reduce_by(matrix, order, basis):
    """Gauss-Jordan's elimination of the rows, the columns asked in this order; returns the rank.

    basis: set to the columns taken, row after row. Row k of the matrix then holds each column's coefficient on basis[k]:
    column m was Σ_k matrix[k, m] · (column basis[k]).
    """
    rank = 0
    for place in range(order.size):
        if rank < matrix.shape[0] and _take(matrix, rank, order[place]):
            basis[rank] = order[place]
            rank += 1
    return rank


@compiled
def _take(matrix, rank, column):
    """Makes a column the unit vector of row `rank`; False, and nothing done, if it depends on those taken before."""
    best = rank
    for k in range(rank, matrix.shape[0]):
        if abs(matrix[k, column]) > abs(matrix[best, column]):
            best = k
    pivot = matrix[best, column]
    if not abs(pivot) > NIL:
        return False
    for m in range(matrix.shape[1]):
        kept = matrix[rank, m]
        matrix[rank, m] = matrix[best, m] / pivot
        if best != rank:
            matrix[best, m] = kept
    for k in range(matrix.shape[0]):
        if k != rank and matrix[k, column] != 0.0:
            _subtract(matrix[k], matrix[k, column], matrix[rank])
            matrix[k, column] = 0.0
    return True


@compiled
def _subtract(row, factor, other):
    """row - factor·other, with nothing left of what cancels."""
    for m in range(row.size):
        value = row[m] - factor * other[m]
        row[m] = value if abs(value) > NIL else 0.0


@compiled
def in_order(reduced, basis, rank, size, sign):
    """Whether what each basis member is mixed with is smaller (sign 1) or larger (-1) than itself, or nearly so."""
    for k in range(rank):
        own = size[basis[k]]
        for m in range(size.size):
            large, small = (size[m], own) if sign > 0 else (own, size[m])
            if reduced[k, m] != 0.0 and large > LOOSE * small:
                return False
    return True


@compiled
def grade_reactions(nu, speed, combined, basis):
    """combined: (N, R), its first rows set to Zᵀ, ν_m = Σ_k Z_mk ν_basis[k]; returns the rank."""
    combined[:, :] = nu
    return reduce_by(combined, np.argsort(-speed), basis)


@compiled
def grade_species(nu, basis, amount, spread, places):
    """spread: (rank, N + rank), row k set to (E | L): what one unit of species places[k] changes in all species by, and by
    which extents of the basis reactions, the other species among `places` at rest."""
    rank, n = spread.shape[0], nu.shape[0]
    spread[:, :] = 0.0
    for k in range(rank):
        spread[k, :n] = nu[:, basis[k]]
        spread[k, n + k] = 1.0
    reduce_by(spread, np.argsort(amount), places)
