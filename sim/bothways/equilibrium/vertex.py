"""A start for Newton's method: the components whose Gibbs energy alone is least, by the simplex method."""

import numpy as np

from ..components import Components

_MOST_EXCHANGES = 200
_AFTER_BLAND = 60
_NEGLIGIBLE = 1e-9


def leave_mixing_out(components: Components, g: np.ndarray, charge: np.ndarray) -> np.ndarray:
    """Exchanges components until Σ n_i g_i is least over n >= 0 with the charge's totals; their amounts, (r).

    g (n) [-], charge (n). Only a start: round-off may leave it a little beside the vertex.
    """
    amount = charge.copy()
    _gather(components, g, amount)
    for count in range(_MOST_EXCHANGES):
        change = g - g[components.basis] @ components.formation
        change[components.basis] = 0.0
        # the steepest descent first; Bland's rule later, which cannot go round in circles
        j = int(np.argmin(change)) if count < _AFTER_BLAND else int(np.argmax(change < -_NEGLIGIBLE))
        if change[j] >= -_NEGLIGIBLE or not _raise(components, amount, j):
            break
    return np.maximum(components.totals(charge), 0.0)


def _gather(components: Components, g: np.ndarray, amount: np.ndarray) -> None:
    """Moves what species other than components hold into components, along falling Σ n g; overwrites `amount`."""
    for j in np.flatnonzero(amount).tolist():
        if j in components.basis:
            continue
        column = components.formation[:, j]
        if g[j] > column @ g[components.basis]:
            k, extent = _first_used_up(-column, amount[components.basis])
            if extent >= amount[j]:
                amount[components.basis] += column * amount[j]
                amount[j] = 0.0
            else:
                _shift(components, amount, j, k, -extent)
        else:
            _raise(components, amount, j)


def _raise(components: Components, amount: np.ndarray, j: int) -> bool:
    """Makes j from the components until one is used up, whose place it takes; False if none is ever used up."""
    k, extent = _first_used_up(components.formation[:, j], amount[components.basis])
    if k < 0:
        return False
    _shift(components, amount, j, k, extent)
    return True


def _shift(components: Components, amount: np.ndarray, j: int, k: int, extent: float) -> None:
    amount[components.basis] -= components.formation[:, j] * extent
    amount[components.basis[k]] = 0.0
    amount[j] += extent
    components.exchange(k, j)


def _first_used_up(uptake: np.ndarray, amount: np.ndarray) -> tuple[int, float]:
    """The component that is used up first, and the extent at which it is; -1 and infinity if none is."""
    extents = np.full(uptake.size, np.inf)
    np.divide(np.maximum(amount, 0.0), uptake, out=extents, where=uptake > 0)
    first = int(np.argmin(extents))
    return (first, float(extents[first])) if np.isfinite(extents[first]) else (-1, np.inf)
