"""The audit of a mechanism: all checks over a working range."""

from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from typing import overload

import numpy as np

from ..errors import InputError
from ..mechanism.model import Mechanism
from ..mechanism.phase import GAS
from .culprit import suspects_of, with_thermochemistry
from .finding import ERROR, SEVERITIES, Finding
from .findings import CHECKS
from .findings.published_reverse import ratios
from .survey import POINTS, Survey

GAS_RANGE, LIQUID_RANGE = (300.0, 2500.0), (273.15, 373.15)
"""Working temperatures [K] where none are asked for: those of flames, and of solutions."""
PRESSURES = (1e4, 1e5, 1e6, 1e7)
"""Working pressures [Pa] where none are asked for."""


@dataclass(frozen=True, eq=False)
class Audit(Sequence[dict]):
    """The rows of an audit as plain records, the worst first (a sequence of dicts, ready for a data frame).

    findings : the same as objects. survey : the numbers behind them.
    """

    survey: Survey = field(repr=False)
    findings: tuple[Finding, ...]

    @overload
    def __getitem__(self, place: int) -> dict: ...

    @overload
    def __getitem__(self, place: slice) -> list[dict]: ...

    def __getitem__(self, place: int | slice) -> dict | list[dict]:
        if isinstance(place, slice):
            return [finding.record() for finding in self.findings[place]]
        return self.findings[place].record()

    def __len__(self) -> int:
        return len(self.findings)

    def of(self, kind: str) -> Iterator[Finding]:
        """The findings of one kind."""
        return (finding for finding in self.findings if finding.kind == kind)

    @property
    def counts(self) -> dict[str, int]:
        """How many errors, warnings and notices."""
        counted = Counter(finding.severity for finding in self.findings)
        return {severity: counted[severity] for severity in SEVERITIES}

    @property
    def passed(self) -> bool:
        """Whether no finding is an error."""
        return self.counts[ERROR] == 0

    @property
    def agreement(self) -> dict[str, float]:
        """Of the published reverse constants, the number, and the shares that agree with the derived ones within a factor
        of 2 and of 10 at every temperature."""
        worst = [float(np.max(np.abs(r))) for r in ratios(self.survey).values()]
        share = {limit: float(np.mean([w <= np.log(limit) for w in worst])) if worst else np.nan for limit in (2, 10)}
        return {"published": float(len(worst)), "within 2": share[2], "within 10": share[10]}


def audit(mechanism: Mechanism, temperatures: tuple[float, float] | None = None,
          pressures: Sequence[float] | None = None) -> Audit:
    """Looks a mechanism over for what is wrong with it.

    Parameters
    ----------
    temperatures : lowest and highest of the working range [K]; 300 to 2500 K for gases if not stated.
    pressures : working pressures [Pa]; 0.1, 1, 10 and 100 bar if not stated.

    Returns
    -------
    A sequence of plain records, the worst finding first: kind, severity, entry, text and numbers (see `Finding`).
    Range joins and the like are looked at as published, rates and equilibrium constants as the mechanism uses them.

    Raises InputError for a range or pressures that cannot be used.
    """
    survey = _survey(mechanism, temperatures, pressures)
    with np.errstate(over="ignore", under="ignore", invalid="ignore"):
        rows = [finding for check in CHECKS for finding in check.find(survey)]
    rows = with_thermochemistry(rows, survey, suspects_of(rows))
    place = {check.NAME: k for k, check in enumerate(CHECKS)}  # causes stand before what follows from them
    return Audit(survey, tuple(sorted(rows, key=lambda finding: (*finding.order, place[finding.kind]))))


def _survey(mechanism: Mechanism, temperatures: tuple[float, float] | None, pressures: Sequence[float] | None) -> Survey:
    default = GAS_RANGE if mechanism.phase == GAS else LIQUID_RANGE
    low, high = map(float, temperatures if temperatures is not None else default)
    p = np.unique(np.asarray(PRESSURES if pressures is None else pressures, dtype=float))
    if not (np.isfinite([low, high]).all() and 0 < low <= high < 1e5):
        raise InputError(f"a working range from {low:g} to {high:g} K", expected="two temperatures in K, rising, above 0")
    if not (p.size and np.all(np.isfinite(p) & (p > 0))):
        raise InputError("working pressures that cannot be used", expected="one or more positive numbers, in Pa")
    return Survey(mechanism, np.linspace(low, high, POINTS if high > low else 1), p)
