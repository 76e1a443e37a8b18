"""Chebyshev series asked for outside their window."""

from collections.abc import Iterator

import numpy as np

from ...rates.law import Series
from ..finding import NONE, NOTICE, WARNING, Finding
from ..survey import Survey

NAME = "outside the Chebyshev window"
SOURCE = "P.K. Venkatesh et al., AIChE J. 43 (1997) 1331, doi:10.1002/aic.690430522: the series holds within its window only"
SEVERITY = "notice where the edge holds (clamp = true), warning where a run there would be refused"
EXPLANATION = "The working range reaches beyond the temperatures or pressures that the series was fitted over."
_SLACK = 1e-6


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction with such a series."""
    for j, reaction in enumerate(survey.mechanism.reactions):
        for k, term in enumerate(reaction.terms):
            part = term.law.part()
            if isinstance(part, Series):
                yield from _rows(survey, j, k, part, _refused(survey, term.law))


def _refused(survey: Survey, law) -> bool:  # type: ignore[no-untyped-def]
    ends = [(float(T), float(p)) for T in survey.temperatures[[0, -1]] for p in survey.pressures[[0, -1]]]
    return any(law.outside(T, p) for T, p in ends)


def _rows(survey: Survey, j: int, term: int, part: Series, refused: bool) -> Iterator[Finding]:
    T_low, T_high, p_low, p_high = 1 / part.window[0], 1 / part.window[1], *np.exp(part.window[2:])
    T, p = survey.temperatures, survey.pressures
    outside = (T[0] < T_low * (1 - _SLACK), T[-1] > T_high * (1 + _SLACK), p[0] < p_low * (1 - _SLACK),
               p[-1] > p_high * (1 + _SLACK))
    if any(outside):
        text = (f"the window is {T_low:.4g} to {T_high:.4g} K and {p_low / 1e5:.3g} to {p_high / 1e5:.3g} bar"
                + ("" if refused else "; outside, its edge holds"))
        yield Finding(NAME, WARNING if refused else NOTICE, survey.term_place(j, term), text, NONE, NONE, NONE, T_low, T_high,
                      reaction=j + 1)
