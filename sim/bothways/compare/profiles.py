"""Courses of two runs held against each other: temperature, and every species of the parent.

Between accepted steps both are interpolated (`Course.at`); integrals are trapezoidal over the steps of both and the middles
between them.
"""

from dataclasses import dataclass

import numpy as np

from .correspondence import Correspondence
from .runs import Run


@dataclass(frozen=True, eq=False)
class Profiles:
    """Errors of the reduced run, N the number of the parent's species; a lumped species' error stands at each member.

    temperature : largest |ΔT| [K].
    mean : (N) ∫|x - x_parent|dt / ∫x_parent dt [-]; 1 where nothing stands for the species, NaN where it is absent.
    largest : (N) largest |x - x_parent| / largest x_parent [-].
    peak : (N) largest x / largest x_parent - 1 [-].
    parent_peak : (N) largest x_parent (of a lump: of its sum) [-].
    """

    temperature: float
    mean: np.ndarray
    largest: np.ndarray
    peak: np.ndarray
    parent_peak: np.ndarray


def profiles(parent: Run, reduced: Run, same: Correspondence, shift: float) -> Profiles:
    """The errors with the reduced run taken `shift` seconds later, over the time that both then span."""
    times = _common_times(parent.time, reduced.time, shift)
    theirs = parent.mole_fractions(times)
    own = reduced.mole_fractions(times + shift)[:, same.group]  # group -1 takes some column, set to 0 below
    lumped = same.lumped(theirs)[:, same.group]
    own[:, same.missing()] = 0.0
    lumped[:, same.missing()] = theirs[:, same.missing()]
    gap = np.abs(own - lumped)
    difference = np.abs(reduced.temperatures(times + shift) - parent.temperatures(times))
    with np.errstate(invalid="ignore", divide="ignore"):
        top = lumped.max(axis=0)
        mean = _integral(gap, times) / _integral(lumped, times)
        shares = np.where(top > 0, [mean, gap.max(axis=0) / top, own.max(axis=0) / top - 1.0], np.nan)
    return Profiles(float(difference.max()), shares[0], shares[1], shares[2], top)


def _integral(values: np.ndarray, times: np.ndarray) -> np.ndarray:
    """∫ values dt by trapezia; values (nt, N)."""
    return 0.5 * np.sum((values[1:] + values[:-1]) * np.diff(times)[:, None], axis=0)


def _common_times(parent: np.ndarray, reduced: np.ndarray, shift: float) -> np.ndarray:
    """The steps of both and the middles between them, on the parent's clock, within what both span [s]."""
    start, end = max(parent[0], reduced[0] - shift), min(parent[-1], reduced[-1] - shift)
    steps = np.unique(np.concatenate([parent, reduced - shift]))
    steps = np.unique(np.clip(steps, start, end))
    return np.sort(np.concatenate([steps, 0.5 * (steps[1:] + steps[:-1])]))
