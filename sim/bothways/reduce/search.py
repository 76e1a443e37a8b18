"""Which species stay: the threshold by bisection, then a pass that tries the undecided ones one by one."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..errors import InputError
from .trials import Trials

ROUNDS = 3
"""Most passes over the undecided species."""


@dataclass(frozen=True)
class Found:
    """kept : names. threshold : importance from which on the graph keeps a species [-]. removed : names that the last pass
    took out, in order."""

    kept: frozenset[str]
    threshold: float
    removed: tuple[str, ...] = ()


def by_threshold(trials: Trials, importance: np.ndarray, always: frozenset[str]) -> Found:
    """The highest threshold whose species keep the limits, by bisection over the importances that there are.

    The error need not fall steadily as species are added; then a good set is found, though perhaps not the smallest.
    """
    levels = np.unique(importance)  # rising; a level keeps the species of at least that importance
    low, high = 0, len(levels)  # levels[low] is good, levels[high] (beyond: `always` alone) is not, or not known
    if not trials.excess(_kept(trials, importance, levels[0], always)) <= 1.0:
        raise InputError("even all species that can matter do not keep the limits", expected="limits wider than round-off",
                         entry="--limit", remedy="widen them")
    while high - low > 1:
        middle = (low + high) // 2
        good = trials.excess(_kept(trials, importance, levels[middle], always), enough=1.0) <= 1.0
        low, high = (middle, high) if good else (low, middle)
    return Found(_kept(trials, importance, levels[low], always), float(levels[low]))


def _kept(trials: Trials, importance: np.ndarray, level: float, always: frozenset[str]) -> frozenset[str]:
    names = trials.parent.names
    return always | {names[k] for k in np.flatnonzero(importance >= level)}


def by_sensitivity(trials: Trials, found: Found, importance: np.ndarray, always: frozenset[str], certain: float) -> Found:
    """Takes out undecided species as far as the limits allow.

    Undecided are those of the graph's that are less important than `certain`. Each is taken out alone, which tells its
    induced error (X.L. Zheng, T.F. Lu, C.K. Law, Proc. Combust. Inst. 31 (2007) 367, doi:10.1016/j.proci.2006.07.182);
    then they go for good in the order of how little their absence changes the error (K.E. Niemeyer, C.J. Sung, M.P. Raju,
    Combust. Flame 157 (2010) 1760, doi:10.1016/j.combustflame.2009.12.022). Unlike there, one that cannot go does not
    end the pass, and passes repeat until nothing goes, ROUNDS at most.
    """
    kept, removed = found.kept, list(found.removed)
    for _ in range(ROUNDS):
        gone = _one_pass(trials, kept, _undecided(trials, kept - always, importance, certain))
        kept, removed = kept - set(gone), removed + gone
        if not gone:
            break
    return Found(kept, found.threshold, tuple(removed))


def _undecided(trials: Trials, names: frozenset[str], importance: np.ndarray, certain: float) -> Sequence[str]:
    return sorted(name for name in names if importance[trials.parent.index(name)] < certain)


def _one_pass(trials: Trials, kept: frozenset[str], undecided: Sequence[str]) -> list[str]:
    now = trials.excess(kept)
    alone = {name: trials.excess(kept - {name}, enough=1.0) for name in undecided}
    gone: list[str] = []
    for name in sorted(undecided, key=lambda name: (abs(alone[name] - now), name)):
        if alone[name] <= 1.0 and trials.excess(kept - {name, *gone}, enough=1.0) <= 1.0:
            gone.append(name)
    return gone
