"""Temperature ranges of a fit that do not meet, as published, and what that does to the equilibrium constants."""

from collections.abc import Iterator

import numpy as np

from ...thermo.polynomial import Ranges, cp_h_s
from ..finding import NONE, NOTICE, Finding, severity_of
from ..survey import Survey

NAME = "open join"
SOURCE = "S. Gordon, B.J. McBride, NASA SP-273, 1971: fits are constrained to the same h and s at the common temperature"
SEVERITY = "by the jump of g/RT over ln 10: error from a factor of 10 in K, warning from 2, notice from 0.01 in h/RT or s/R"
EXPLANATION = ("At the boundary of two ranges h and s must be continuous, or K(T) jumps where nothing happens. Numbers are "
               "those published, also where the mechanism closes its joins at loading (it then shifts everything above the "
               "boundary by the jump). Ranges that meet elsewhere were probably given a wrong common temperature.")
SMALLEST, SMALLEST_CP = 0.01, 0.1
"""Jumps of h/RT or s/R, and of cp/R, below which a join counts as met [-]."""
_USUAL = 1000.0
"""The customary common temperature [K]."""


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each boundary that is open."""
    for species in survey.mechanism.species:
        ranges = species.potential.ranges()
        for k, T in enumerate(ranges.boundaries[1:-1]):
            cp, h, s = jump(ranges, k, float(T))
            if max(abs(h), abs(s)) >= SMALLEST or abs(cp) >= SMALLEST_CP:
                yield _row(species.name, ranges, k, float(T), (cp, h, s))


def jump(ranges: Ranges, k: int, temperature: float) -> tuple[float, float, float]:
    """By how much cp/R, h/RT and s/R [-] of range k + 1 lie above those of range k at a temperature [K]."""
    below, above = cp_h_s(ranges.rows[k], temperature), cp_h_s(ranges.rows[k + 1], temperature)
    return above[0] - below[0], above[1] - below[1], above[2] - below[2]


def _row(name: str, ranges: Ranges, k: int, T: float, jumps: tuple[float, float, float]) -> Finding:
    cp, h, s = jumps
    decades = abs(h - s) / np.log(10.0)
    elsewhere = T != _USUAL and max(map(abs, jump(ranges, k, _USUAL)[1:])) < 1e-3
    text = (f"at {T:.6g} K h/RT jumps by {h:+.3g}, s/R by {s:+.3g}, cp/R by {cp:+.3g}: g/RT by {h - s:+.3g}"
            + (f"; the ranges meet at {_USUAL:g} K instead" if elsewhere else ""))
    severity = severity_of(decades) if max(abs(h), abs(s)) >= SMALLEST else NOTICE
    return Finding("open join", severity, f"species.{name}.potential", text, float(decades), T, NONE, T, T,
                   float(max(abs(h), abs(s))), "1", species=name)
