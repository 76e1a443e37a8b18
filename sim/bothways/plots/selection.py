"""Which species a figure of the composition shows, and on which panel."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..errors import InputError, nearest
from ..trajectory import Trajectory
from .style import MOST_LINES

MOST_MAJOR, MOST_TRACE = 6, 7
"""The most species chosen for the linear and for the logarithmic panel, if the user names none."""
NOTABLE = 0.05
"""A species is major if its change is at least this share of the largest [-]."""
LARGE_INTERMEDIATE = 0.2
"""An intermediate is major only if it peaks above this share of the highest [-]."""
SMALLEST, SPAN = 1e-9, 1e-4
"""Traces below this mole fraction, or below this share of the largest trace, are left out [-]."""


@dataclass(frozen=True)
class Selection:
    """Indices of species: on the linear panel, on the logarithmic one, and diluents that are left out."""

    major: tuple[int, ...]
    trace: tuple[int, ...]
    diluents: tuple[int, ...] = ()


def selected(trajectory: Trajectory, species: Sequence[str] | None = None) -> Selection:
    """The species named, or those that matter."""
    return _named(trajectory, species) if species else _mattering(trajectory)


def _named(trajectory: Trajectory, species: Sequence[str]) -> Selection:
    chosen = [_index(trajectory, name) for name in dict.fromkeys(species)]
    if len(chosen) > MOST_LINES:
        raise InputError(f"{len(chosen)} species are too many for one figure", expected=f"at most {MOST_LINES}")
    top = trajectory.mole_fraction.max(axis=0)
    highest = max(top[k] for k in chosen)
    major = tuple(k for k in chosen if top[k] >= NOTABLE * highest)
    return Selection(major, tuple(k for k in chosen if k not in major and top[k] > 0))


def _index(trajectory: Trajectory, name: str) -> int:
    if name not in trajectory.species:
        raise InputError(f"unknown species '{name}'", remedy=nearest(name, trajectory.species))
    return trajectory.species.index(name)


def _mattering(trajectory: Trajectory) -> Selection:
    x = trajectory.mole_fraction
    top, change = x.max(axis=0), np.ptp(x, axis=0)
    diluent = is_diluent(trajectory.amount)
    active = ~diluent & (top > 0)
    if not active.any() or change[active].max() == 0:
        return Selection(largest(top, top > 0, MOST_MAJOR), ())
    passing = (x[0] < 0.5 * top) & (x[-1] < 0.9 * top)
    notable = active & (change >= NOTABLE * change[active].max())
    major = largest(change, notable & (~passing | (top > LARGE_INTERMEDIATE * top[active].max())), MOST_MAJOR)
    rest = active & (top >= SMALLEST)
    rest[list(major)] = False
    rest &= top >= SPAN * max(top[rest], default=0.0)
    return Selection(major, largest(top, rest, MOST_TRACE), largest(top, diluent, len(top)))


def is_diluent(amount: NDArray[np.float64]) -> NDArray[np.bool_]:
    """Charged, hardly reacting (by 5 % at most), and not what reacts most, as in a run of low conversion."""
    change = np.ptp(amount, axis=0)
    return (amount[0] > 0) & (change <= 0.05 * amount[0]) & (change < 0.2 * change.max())


def largest(values: NDArray[np.float64], allowed: NDArray[np.bool_], count: int) -> tuple[int, ...]:
    """Indices of the largest allowed values, the largest first."""
    order = np.argsort(-np.where(allowed, values, -np.inf), kind="stable")
    return tuple(int(k) for k in order[: min(count, int(allowed.sum()))])
