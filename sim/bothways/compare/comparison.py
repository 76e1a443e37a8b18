"""Reduced mechanisms held against their parent over many conditions."""

import hashlib
from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import Executor, ThreadPoolExecutor
from dataclasses import dataclass, field
from functools import cached_property, partial

import numpy as np

from ..case import Case
from ..errors import BothwaysError, InputError
from ..mechanism import Mechanism
from ..mechanism.toml_writer import to_toml
from .conserved import Conserved, conserved_changes
from .correspondence import Correspondence, Names, check_mapping_used, correspondence
from .limits import Limit
from .measures import MEASURES, Pair
from .runs import Run, case_with, run_once, warm

Told = Callable[[int], None]
TIMED, REPEATS = 6, 3
"""Conditions whose runs are timed for the ratio of costs, and how often each."""
NAMES = tuple(measure.name for measure in MEASURES)


def digest(mechanism: Mechanism) -> str:
    """SHA-256 of the mechanism's text, as trajectories carry it."""
    return hashlib.sha256(to_toml(mechanism.document).encode()).hexdigest()


@dataclass(frozen=True, eq=False)
class Condition:
    """Where both were run, and what the parent did there.

    temperature [K], pressure [Pa] at the start; equivalence_ratio [-], NaN where none is stated.
    ignition, half_conversion [s] with the parent, NaN where there is none. failure : why the parent's run failed.
    """

    temperature: float
    pressure: float
    equivalence_ratio: float
    ignition: float
    half_conversion: float
    steps: int
    failure: str = ""


@dataclass(frozen=True, eq=False)
class Outcome:
    """What one reduced mechanism did in one condition.

    ignition [s]. measures : by name (`measures.MEASURES`). mean, mean_shifted, largest, peak : (N) of the parent's
    species, see `profiles.Profiles`. failure : why its run failed, empty if it did not.
    """

    ignition: float
    measures: Mapping[str, float]
    mean: np.ndarray
    mean_shifted: np.ndarray
    largest: np.ndarray
    peak: np.ndarray
    failure: str = ""


@dataclass(frozen=True, eq=False)
class Judged:
    """One reduced mechanism over all conditions. cost : time of a run, of the parent's [-]."""

    mechanism: Mechanism
    same: Correspondence
    conserved: Conserved
    outcomes: tuple[Outcome, ...]
    cost: float

    def values(self, measure: str) -> np.ndarray:
        """A measure in every condition, (conditions)."""
        return np.array([outcome.measures[measure] for outcome in self.outcomes])

    def worst(self, measure: str) -> tuple[float, int]:
        """The value of largest size and its condition; NaN and -1 where the measure has no meaning anywhere."""
        size = np.abs(self.values(measure))
        if np.all(np.isnan(size)):
            return np.nan, -1
        k = int(np.nanargmax(size))
        return float(self.values(measure)[k]), k

    def typical(self, measure: str) -> float:
        """Root of the mean square over the conditions in which the measure has a meaning; NaN of none."""
        values = self.values(measure)
        known = values[~np.isnan(values)]
        return float(np.sqrt(np.mean(known**2))) if known.size else np.nan

    @property
    def failures(self) -> dict[int, str]:
        """Conditions in which its run failed, and why."""
        return {k: outcome.failure for k, outcome in enumerate(self.outcomes) if outcome.failure}


@dataclass(frozen=True, eq=False)
class Comparison:
    """A parent, its reductions, and how far each departs from it.

    species : those asked for by name. limits : what was asked of every reduction.
    """

    parent: Mechanism
    cases: tuple[Case, ...] = field(repr=False)
    conditions: tuple[Condition, ...]
    judged: tuple[Judged, ...]
    species: tuple[str, ...] = ()
    limits: tuple[Limit, ...] = ()

    @cached_property
    def beyond(self) -> list[tuple[Judged, Limit, float, int]]:
        """Every limit that is not kept: by which mechanism, its worst value, in which condition."""
        found = [(judged, limit, *judged.worst(limit.measure)) for judged in self.judged for limit in self.limits]
        return [row for row in found if not row[1].keeps(row[2])]

    def pair(self, judged: Judged, k: int) -> Pair:
        """Both runs of condition k, made anew."""
        return _pair(run_once(self.cases[k]), judged.mechanism, judged.same, self._places)

    @property
    def _places(self) -> tuple[int, ...]:
        return tuple(self.parent.index(name) for name in self.species)


def compare_cases(parent: Mechanism, reduced: Sequence[Mechanism], cases: Sequence[Case], species: Sequence[str] = (),
                  limits: Sequence[Limit] = (), mapping: Names | None = None, mapping_file: object = None,
                  executor: Executor | None = None, told: Told | None = None) -> Comparison:
    """Holds reduced mechanisms against their parent in the conditions of `cases`, which are the parent's.

    species : names (of the parent) whose profiles and peaks count besides those of the major species.
    mapping : by a reduced mechanism's name of a species, the parent's name or names; see `correspondence`.
    executor : runs conditions side by side; a thread for each core if none is given. told : called with the conditions done.
    Raises InputError: no conditions, mechanisms that do not belong together, a charged species that one lacks.
    """
    if not cases:
        raise InputError("no conditions", expected="one at least", remedy="state some in the grid")
    check_mapping_used(mapping or {}, reduced, mapping_file)
    same = [correspondence(parent, m, mapping, mapping_file) for m in reduced]
    places = tuple(parent.index(name) for name in species)
    for mechanism, group in zip(reduced, same, strict=True):
        for case in cases:
            own = case_with(case, mechanism, group)
        warm(own)
    warm(cases[0])
    work = partial(_condition, reduced=tuple(reduced), same=same, places=places)
    found = _all(work, cases, executor, told)
    costs = _costs(cases, reduced, same)
    judged = tuple(Judged(m, s, conserved_changes(parent, m, s), tuple(row[1][j] for row in found), costs[j])
                   for j, (m, s) in enumerate(zip(reduced, same, strict=True)))
    return Comparison(parent, tuple(cases), tuple(row[0] for row in found), judged, tuple(species), tuple(limits))


def _all(work: Callable, cases: Sequence[Case], executor: Executor | None, told: Told | None) -> list:
    """The work on every case, in order; with threads of our own where there is no executor."""
    if executor is None:
        with ThreadPoolExecutor() as own:
            return _all(work, cases, own, told)
    found = []
    for k, row in enumerate(executor.map(work, cases), 1):
        found.append(row)
        if told:
            told(k)
    return found


def _costs(cases: Sequence[Case], reduced: Sequence[Mechanism], same: Sequence[Correspondence]) -> list[float]:
    """Time of the integrations with each mechanism over that with the parent: one after another and by turns, the sum over
    some conditions of the shortest of several runs."""
    some = [cases[k] for k in np.unique(np.linspace(0, len(cases) - 1, TIMED).astype(int))]
    sets = [some, *([case_with(case, m, s) for case in some] for m, s in zip(reduced, same, strict=True))]
    spent = np.array([[[run_once(case).seconds for case in own] for own in sets] for _ in range(REPEATS)])
    total = spent.min(axis=0).sum(axis=1)
    return list(total[1:] / total[0])


def _condition(case: Case, reduced: Sequence[Mechanism], same: Sequence[Correspondence],
               places: tuple[int, ...]) -> tuple[Condition, list[Outcome]]:
    """One condition: the parent's run, and every reduced one held against it."""
    parent = run_once(case)
    start = case.document.get("start", {})
    ratio = float(start.get("equivalence_ratio", np.nan))
    half = min(parent.half_conversions.values(), default=np.nan) if not parent.failure else np.nan
    condition = Condition(case.charge.temperature, case.charge.pressure, ratio, np.nan if parent.failure else parent.ignition,
                          half, parent.steps, parent.failure)
    return condition, [_outcome(_pair(parent, m, s, places)) for m, s in zip(reduced, same, strict=True)]


def _pair(parent: Run, reduced: Mechanism, same: Correspondence, places: tuple[int, ...]) -> Pair:
    return Pair(parent, run_once(case_with(parent.case, reduced, same)), same, places)


def _outcome(pair: Pair) -> Outcome:
    failure = pair.parent.failure or pair.reduced.failure
    nothing = np.full(len(pair.same.group), np.nan)
    try:
        measures = pair.measured(NAMES)
    except BothwaysError as err:  # no equilibrium can be worked out there: a row with its reason, not the end of all
        failure, measures = str(err), dict.fromkeys(NAMES, np.inf)
    if failure:
        return Outcome(np.nan, measures, nothing, nothing, nothing, nothing, failure)
    plain, shifted = pair.plain, pair.shifted
    return Outcome(pair.reduced.ignition, measures, plain.mean, shifted.mean if shifted else nothing,
                   plain.largest, plain.peak)


__all__ = ["Comparison", "Condition", "Judged", "Outcome", "compare_cases", "digest"]
