"""What a reduced mechanism conserves and its parent does not, and the other way round."""

from dataclasses import dataclass

import numpy as np

from ..equilibrium import combination_text, conserved_by_reactions
from ..equilibrium.conserved import Span
from ..mechanism import Mechanism
from .correspondence import Correspondence


@dataclass(frozen=True)
class Conserved:
    """Combinations as chemistry ("N2", "2 CH4 + C2H6"): gained, held by the reduced mechanism alone; lost, by the parent
    alone."""

    gained: tuple[str, ...]
    lost: tuple[str, ...]


def conserved_changes(parent: Mechanism, reduced: Mechanism, same: Correspondence) -> Conserved:
    """Both sets of combinations compared over the species that both have, in exact integers."""
    theirs, own = _restricted(conserved_by_reactions(parent), same), conserved_by_reactions(reduced)
    return Conserved(_beyond(reduced, own, theirs), _beyond(reduced, theirs, own))


def _restricted(rows: np.ndarray, same: Correspondence) -> np.ndarray:
    """The parent's combinations as the reduced mechanism's species express them; one that tells lumped species apart has
    no such form and is left out."""
    found = np.zeros((len(rows), len(same.size)), dtype=np.int64)
    for k in np.flatnonzero(same.group >= 0):
        found[:, same.group[k]] = rows[:, k]
    members = np.flatnonzero(same.group >= 0)
    sound = np.all(found[:, same.group[members]] == rows[:, members], axis=1)
    return found[sound]


def _beyond(mechanism: Mechanism, rows: np.ndarray, known: np.ndarray) -> tuple[str, ...]:
    """The rows that do not follow from the known ones and from each other."""
    span = Span()
    for row in known:
        span.grows(row)
    return tuple(combination_text(mechanism, row) for row in rows if span.grows(row))
