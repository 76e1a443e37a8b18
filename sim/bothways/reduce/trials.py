"""Trials: a set of species, made a mechanism of, run in all conditions and held against the limits."""

from collections.abc import Callable, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass, field

import numpy as np

from ..case import Case
from ..compare.correspondence import correspondence
from ..compare.limits import Limit
from ..compare.measures import Pair
from ..compare.runs import Run, case_with, run_once
from ..errors import InputError, SolverError
from ..mechanism import Mechanism, build
from .part import part_of

Told = Callable[[str], None]


@dataclass(eq=False)
class Trials:
    """The conditions with the parent's runs, the limits, and what was tried already.

    margin : share of each limit that a set may use [-]. count : trials made.
    """

    parent: Mechanism
    cases: Sequence[Case]
    limits: Sequence[Limit]
    executor: Executor
    margin: float = 1.0
    told: Told = lambda text: None
    count: int = 0
    runs: list[Run] = field(default_factory=list)
    _tried: dict[frozenset[str], float] = field(default_factory=dict)

    def __post_init__(self) -> None:
        self.runs = list(self.executor.map(run_once, self.cases))
        for case, run in zip(self.cases, self.runs, strict=True):
            if run.failure:
                raise SolverError(f"the parent's run gave up: {run.failure}", file=case.file)
        names = [limit.measure for limit in self.limits]
        measured = [Pair(run, run, correspondence(self.parent, self.parent)).measured(names) for run in self.runs]
        for limit in self.limits:
            if all(np.isnan(row[limit.measure]) for row in measured):
                raise InputError(f"{limit.measure} has no meaning in any condition", entry="--limit",
                                 expected="a measure that the parent's runs have", remedy="let the runs go on for longer, or "
                                 "limit another measure")

    def excess(self, kept: frozenset[str], enough: float = np.inf) -> float:
        """The largest |error| of any condition, of its limit times the margin [-]: up to 1 the set is good.

        Once it is above `enough` the rest of the conditions is left out.
        """
        if kept in self._tried:
            return self._tried[kept]
        self.count += 1
        found = self._excess(kept, enough)
        if not found > enough:
            self._tried[kept] = found
        self.told(f"trial {self.count}: {len(kept)} species, {found:.3g} of the limit")
        return found

    def _excess(self, kept: frozenset[str], enough: float) -> float:
        mechanism = build(part_of(self.parent, kept))
        if not mechanism.reactions:
            return np.inf
        same, worst = correspondence(self.parent, mechanism), 0.0
        order = sorted(range(len(self.runs)), key=lambda k: -self._hardness(k))
        for first in range(0, len(order), 4):
            part = order[first : first + 4]
            for k, value in zip(part, self.executor.map(lambda k: self._one(k, mechanism, same), part), strict=True):
                self._hard[k] = 0.5 * self._hardness(k) + min(value, 10.0)
                worst = max(worst, value)
            if worst > enough:
                break
        return worst

    @property
    def _hard(self) -> dict[int, float]:
        return self.__dict__.setdefault("_hard_kept", {})

    def _hardness(self, k: int) -> float:
        """How far off earlier sets were in condition k: the hard ones come first."""
        return self._hard.get(k, 0.0)

    def _one(self, k: int, mechanism: Mechanism, same) -> float:  # type: ignore[no-untyped-def]
        pair = Pair(self.runs[k], run_once(case_with(self.cases[k], mechanism, same)), same)
        found = pair.measured([limit.measure for limit in self.limits])
        sizes = [abs(found[limit.measure]) / (limit.value * self.margin) for limit in self.limits]
        return float(np.nanmax([0.0, *sizes]))
