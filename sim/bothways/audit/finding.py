"""What an audit finds: one row a finding, with its severity, its size and its place in the file.

One scale serves all findings that have a size: the decades (powers of ten) by which a rate constant or an equilibrium
constant is off. A factor of 2 is within what kinetic data usually claim for themselves (the evaluations of D.L. Baulch
et al., J. Phys. Chem. Ref. Data 34 (2005) 757, doi:10.1063/1.1748524, state ±0.1 to ±0.5 in log k), a factor of 10 is
beyond it: hence the steps below. What is impossible outright is an error whatever its size.
"""

import math
from collections.abc import Iterator, Mapping
from dataclasses import asdict, dataclass, fields, replace
from typing import TYPE_CHECKING, Protocol

if TYPE_CHECKING:
    from .survey import Survey

ERROR, WARNING, NOTICE = "error", "warning", "notice"
SEVERITIES = (ERROR, WARNING, NOTICE)
"""The worst first."""
ERROR_FROM, WARNING_FROM = 1.0, math.log10(2.0)
"""Decades from which a deviation is an error, and a warning [-]."""
NONE = math.nan
"""The value of a number that a finding does not have."""


@dataclass(frozen=True)
class Finding:
    """One row of an audit.

    kind : what was found, by the name of its check. entry : where in the file. text : what is wrong there.
    severity : error, warning or notice. decades : how far a rate or equilibrium constant is off [powers of ten].
    temperature [K], pressure [Pa] : where it is worst. from_temperature, to_temperature [K] : where it holds.
    value, unit : the number that tells most about it. gibbs_change [J/mol] : the error of ΔG that would explain it.
    likely : what is likelier at fault. reaction, species : numbers in the file from 1, or names; empty if none.
    """

    kind: str
    severity: str
    entry: str
    text: str
    decades: float = NONE
    temperature: float = NONE
    pressure: float = NONE
    from_temperature: float = NONE
    to_temperature: float = NONE
    value: float = NONE
    unit: str = ""
    gibbs_change: float = NONE
    likely: str = ""
    reaction: int = 0
    species: str = ""

    def record(self) -> dict[str, str | float | int | None]:
        """The row as a plain dict; None for numbers that it does not have."""
        return {key: None if isinstance(v, float) and math.isnan(v) else v for key, v in asdict(self).items()}

    def at_most(self, severity: str) -> "Finding":
        """The same with its severity capped."""
        worst = max(SEVERITIES.index(self.severity), SEVERITIES.index(severity))
        return replace(self, severity=SEVERITIES[worst])

    @property
    def order(self) -> tuple[int, float]:
        """What rows are sorted by: severity, then size."""
        return SEVERITIES.index(self.severity), -round(self.decades, 6) if self.decades == self.decades else 0.0


FIELDS = tuple(f.name for f in fields(Finding))
NUMBERS = ("decades", "temperature", "pressure", "from_temperature", "to_temperature", "value", "gibbs_change", "reaction")
UNITS: Mapping[str, str] = {"temperature": "K", "pressure": "Pa", "from_temperature": "K", "to_temperature": "K",
                            "gibbs_change": "J mol-1"}


class Check(Protocol):
    """One kind of finding: a module of audit/findings.

    NAME : what the rows bear as their kind. SOURCE : where the limit comes from. SEVERITY : the rule in words.
    EXPLANATION : what it means to a chemist, and what to do.
    """

    NAME: str
    SOURCE: str
    SEVERITY: str
    EXPLANATION: str

    def find(self, survey: "Survey") -> Iterator[Finding]:
        """The findings in a mechanism, in any order."""


def severity_of(decades: float) -> str:
    """By the common scale: error from a factor of 10, warning from a factor of 2, notice below."""
    return ERROR if decades >= ERROR_FROM else WARNING if decades >= WARNING_FROM else NOTICE


def factor_text(decades: float) -> str:
    """A deviation in words that read easily: "a factor of 3.2", "8.1 decades"."""
    return f"a factor of {10.0**decades:.2g}" if abs(decades) < 2 else f"{decades:.1f} decades"


def stretch_text(low: float, high: float) -> str:
    """A stretch of temperatures: "at 300 K", "from 300 to 900 K"."""
    return f"at {low:.4g} K" if low == high else f"from {low:.4g} to {high:.4g} K"
