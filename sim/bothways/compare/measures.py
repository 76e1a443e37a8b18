"""What is measured between a run with the parent and the same run with a reduced mechanism.

`MEASURES` says what there is, `Pair` works it out, each when it is first asked for. Where a measure has no meaning (no
ignition with either, no peak) it is NaN; where the reduced run lacks what the parent's has, it is infinite.
"""

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from .correspondence import Correspondence
from .profiles import Profiles, profiles
from .runs import Run

MAJOR = 0.01
"""A species is major in a condition if its mole fraction reaches this with the parent [-] (our own threshold)."""
SEEN = 1e-7
"""Species whose mole fraction stays below this have no profile worth a relative error [-] (our own threshold)."""


@dataclass(frozen=True)
class Measure:
    """One number per condition: name, units ("1" or "K"), what it is, and whether `--limit` takes it."""

    name: str
    units: str
    text: str
    limited: bool = True


MEASURES = (
    Measure("ignition", "1", "ignition delay (steepest rise of T, or of p at held T): relative error"),
    Measure("half-conversion", "1", "half-conversion time of the charged species that the parent halves first: relative error"),
    Measure("temperature", "K", "largest difference of T at equal times"),
    Measure("temperature-shifted", "K", "largest difference of T at equal times from each one's ignition (else half-conversion)"),
    Measure("profiles", "1", "largest ∫|x - x_parent|dt / ∫x_parent dt of the named and the major species, at equal times"),
    Measure("profiles-shifted", "1", "the same at equal times from each one's ignition (else half-conversion)"),
    Measure("peaks", "1", "largest relative error of the highest mole fraction of the named and the major species"),
    Measure("peak-temperature", "K", "highest T: difference"),
    Measure("end-temperature", "K", "T at the end: difference"),
    Measure("end-composition", "1", "half the sum of |x - x_parent| over all species at the end"),
    Measure("equilibrium-temperature", "K", "T of each one's own equilibrium: difference"),
    Measure("equilibrium-composition", "1", "half the sum of |x - x_parent| between each one's own equilibrium"),
    Measure("full-equilibrium-temperature", "K", "own equilibrium's T less that of all the parent's species by elements alone"),
    Measure("full-equilibrium-composition", "1", "half the sum of |x - x_full| between these two"),
    Measure("landing", "1", "end of the reduced run: largest relative deviation from its own equilibrium"),
    Measure("parent-landing", "1", "the same of the parent's run", limited=False),
    Measure("steps", "1", "accepted steps, as a multiple of the parent's", limited=False),
)
"""Every measure. Differences are reduced less parent."""
BY_NAME = {measure.name: measure for measure in MEASURES}


def method_name(measure: str) -> str:
    """The attribute of `Pair` that works a measure out."""
    return measure.replace("-", "_")


@dataclass(frozen=True, eq=False)
class Pair:
    """Two runs of one condition; species : places in the parent of those asked for by name."""

    parent: Run
    reduced: Run
    same: Correspondence
    species: tuple[int, ...] = ()

    def measured(self, names: Iterable[str]) -> dict[str, float]:
        """The measures of these names; all infinite but the costs where the reduced run failed."""
        if self.parent.failure:
            return dict.fromkeys(names, np.nan)
        return {name: float(getattr(self, method_name(name))) if not self.reduced.failure else np.inf for name in names}

    @property
    def ignition(self) -> float:
        return relative(self.reduced.ignition, self.parent.ignition)

    @cached_property
    def _half(self) -> tuple[float, float]:
        """Half-conversion [s] with parent and reduced, of the species that the parent halves first."""
        theirs = self.parent.half_conversions
        if not theirs:
            return np.nan, min(self.reduced.half_conversions.values(), default=np.nan)
        first = min(theirs, key=theirs.__getitem__)
        place = self.same.group[self.parent.case.mechanism.index(first)]
        own = self.reduced.case.mechanism.names[place]
        return theirs[first], self.reduced.half_conversions.get(own, np.nan)

    @property
    def half_conversion(self) -> float:
        return relative(self._half[1], self._half[0])

    @cached_property
    def shift(self) -> float:
        """How much later the event comes with the reduced mechanism [s]; NaN where either lacks it."""
        later = self.reduced.ignition - self.parent.ignition
        return later if np.isfinite(later) else self._half[1] - self._half[0]

    @property
    def _shiftable(self) -> float:
        """What a shifted measure is where there is no shift: infinite if one run lacks the event, NaN if both do."""
        lacks = [np.isnan(run.ignition) and not run.half_conversions for run in (self.parent, self.reduced)]
        return np.nan if all(lacks) else np.inf

    @cached_property
    def plain(self) -> Profiles:
        """Both runs at equal times."""
        return profiles(self.parent, self.reduced, self.same, 0.0)

    @cached_property
    def shifted(self) -> Profiles | None:
        """Both runs at equal times from their event; None where either lacks it."""
        return profiles(self.parent, self.reduced, self.same, self.shift) if np.isfinite(self.shift) else None

    @property
    def temperature(self) -> float:
        return self.plain.temperature

    @property
    def temperature_shifted(self) -> float:
        return self.shifted.temperature if self.shifted else self._shiftable

    @cached_property
    def _judged(self) -> np.ndarray:
        """Places (parent) of the named and the major species."""
        major = self.plain.parent_peak >= MAJOR
        major[list(self.species)] = True
        return np.flatnonzero(major & (self.plain.parent_peak > SEEN))

    @property
    def profiles(self) -> float:
        return _largest(self.plain.mean[self._judged])

    @property
    def profiles_shifted(self) -> float:
        return _largest(self.shifted.mean[self._judged]) if self.shifted else self._shiftable

    @property
    def peaks(self) -> float:
        return _largest(self.plain.peak[self._judged])

    @property
    def peak_temperature(self) -> float:
        return float(np.max(self.reduced.columns["temperature"]) - np.max(self.parent.columns["temperature"]))

    @property
    def end_temperature(self) -> float:
        return float(self.reduced.columns["temperature"][-1] - self.parent.columns["temperature"][-1])

    @property
    def end_composition(self) -> float:
        theirs, own = (_fractions(run.columns["amount"][-1]) for run in (self.parent, self.reduced))
        return self._distance(own, theirs)

    def _distance(self, own: np.ndarray, theirs: np.ndarray) -> float:
        """Half the sum of the differences of mole fractions; species that nothing stands for count whole."""
        return 0.5 * float(np.sum(np.abs(own - self.same.lumped(theirs))) + np.sum(theirs[self.same.missing()]))

    @property
    def equilibrium_temperature(self) -> float:
        return self.reduced.target.own.temperature - self.parent.target.own.temperature

    @property
    def equilibrium_composition(self) -> float:
        return self._distance(self.reduced.target.own.mole_fraction, self.parent.target.own.mole_fraction)

    @property
    def full_equilibrium_temperature(self) -> float:
        return self.reduced.target.own.temperature - self.parent.target.full.temperature

    @property
    def full_equilibrium_composition(self) -> float:
        return self._distance(self.reduced.target.own.mole_fraction, self.parent.target.full.mole_fraction)

    @property
    def landing(self) -> float:
        return _landing(self.reduced)

    @property
    def parent_landing(self) -> float:
        return _landing(self.parent)

    @property
    def steps(self) -> float:
        return self.reduced.steps / self.parent.steps


def relative(value: float, reference: float) -> float:
    """value/reference - 1; NaN where both are lacking (NaN), infinite where one is."""
    if np.isnan(value) and np.isnan(reference):
        return np.nan
    return value / reference - 1.0 if np.isfinite(value) and np.isfinite(reference) else np.inf


def _largest(values: np.ndarray) -> float:
    """The value of largest size, with its sign; NaN of none."""
    known = values[~np.isnan(values)]
    return float(known[np.argmax(np.abs(known))]) if known.size else np.nan


def _fractions(amount: np.ndarray) -> np.ndarray:
    return amount / np.sum(amount)


def _landing(run: Run) -> float:
    return run.target.distance(_fractions(run.columns["amount"][-1]), float(run.columns["temperature"][-1]))
