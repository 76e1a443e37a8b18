"""The multistep formula: history as modified divided differences, on steps of any lengths.

For a step to t₊ = t + h at order k, with the distances ψ_j = t₊ - t_{n+1-j} to the last values (ψ_1 = h), the
predictor is the polynomial through the last k + 1 values, and the corrector asks of y at t₊

    (α_k/h) (y - predicted) + predicted slope = f(y),   α_k = 1 + 1/2 + … + 1/k,

the backward differentiation formula with fixed leading coefficient (K.R. Jackson, R. Sacks-Davis, ACM Trans. Math. Softw.
6 (1980) 295, doi:10.1145/355900.355903; K.E. Brenan, S.L. Campbell, L.R. Petzold, Numerical Solution of
Initial-Value Problems in DAEs, SIAM 1996, ch. 5, doi:10.1137/1.9781611971224): on equal steps the classical formula. The
differences φ_j = ψ_1…ψ_j·y[t_n, …, t_{n-j}] are made of the values as they were accepted, mended ones
included, so whatever all values conserve the differences of order 1 and up have none of. Everything here is linear in the
values; a step of any length needs no interpolation of the history.

Rows of history and ahead: 0 the value, j the j-th difference; spacing and ahead[j] = ψ_j for the last and this step.
"""

from ..compiled import compiled

MOST_ORDER = 5
ROWS = MOST_ORDER + 3
LEADING = (0.0, 1.0, 3.0 / 2.0, 11.0 / 6.0, 25.0 / 12.0, 137.0 / 60.0)
"""α_k by order."""


@compiled
def begin_history(z, slope, h, history, spacing):
    """A history of order 1 from value and slope: as if a value stood a thousandth of a step before.

    So near that error estimates see value and slope at the start as they are.
    """
    spacing[1] = 1e-3 * h
    for i in range(z.size):
        history[0, i] = z[i]
        history[1, i] = spacing[1] * slope[i]


@compiled
def predict(h, order, depth, history, spacing, ahead, extended, predicted, slope):
    """Sets ahead, predicted value and slope, and extended: the differences as the new step scales them, to depth."""
    n = predicted.size
    ahead[1] = h
    for j in range(2, ROWS):
        ahead[j] = h + spacing[j - 1]
    for i in range(n):
        extended[0, i] = predicted[i] = history[0, i]
        slope[i] = 0.0
    ratio, rate = 1.0, 0.0
    for j in range(1, min(order + 1, depth) + 1):
        ratio *= ahead[j] / spacing[j]
        rate += 1.0 / ahead[j]
        for i in range(n):
            extended[j, i] = ratio * history[j, i]
        if j <= order:
            for i in range(n):
                predicted[i] += extended[j, i]
                slope[i] += rate * extended[j, i]


@compiled
def error_constant(order, h, ahead, leading):
    """The error of a step, per h·(y' residual), of the difference y - predicted at that order.

    The larger of the formula's error, |Σ h/ψ_j (j to k + 1) - α_k| (1/(k + 1) on equal steps), and the predictor's share
    h/ψ_{k+1}, which keeps the history good for going on where the first happens to vanish.
    """
    total = 0.0
    for j in range(1, order + 2):
        total += h / ahead[j]
    return max(abs(total - leading[order]), h / ahead[order + 1])


@compiled
def extend_history(z, correction, order, depth, history, spacing, ahead, extended):
    """Takes the accepted value into the history; correction = z - predicted. Returns the new depth."""
    n, top = z.size, order + 1
    if depth > order and order < MOST_ORDER:
        top = order + 2
        for i in range(n):
            history[top, i] = correction[i] - extended[order + 1, i]
    for i in range(n):
        history[order + 1, i] = correction[i]
    for j in range(order, 0, -1):
        for i in range(n):
            history[j, i] = history[j + 1, i] + extended[j, i]
    for i in range(n):
        history[0, i] = z[i]
    for j in range(1, ROWS):
        spacing[j] = ahead[j]
    return top
