"""Pressure tables that turn with pressure, have gaps, or end before the working pressures do."""

from collections.abc import Iterator

import numpy as np

from ...rates.law import Law, PressureNodes
from ..finding import NONE, NOTICE, WARNING, Finding, factor_text, severity_of
from ..survey import Survey, values

NAME = "pressure table"
SOURCE = ("J.A. Miller, S.J. Klippenstein, J. Phys. Chem. A 110 (2006) 10528, doi:10.1021/jp062693x, for what k(T, p) does; "
          "our own limits")
SEVERITY = ("turning points by the decades k falls back, at most warning; gaps of more than two decades of pressure across "
            "which k changes by more than a factor of 2: warning; working pressures outside: notice")
EXPLANATION = ("k of one channel rises with pressure (stabilisation) or falls (a channel past a stabilised well), it does "
               "not turn twice. Between far rows, or beyond the ends, a straight line in ln p stands for a curve.")
_TURN = 0.05
_GAP = 100.0


def find(survey: Survey) -> Iterator[Finding]:
    """Rows for each reaction with such a table."""
    for j, reaction in enumerate(survey.mechanism.reactions):
        for k, term in enumerate(reaction.terms):
            part = term.law.part()
            if isinstance(part, PressureNodes):
                yield from _rows(survey, j, k, part, _nodes(term.law, part, survey.temperatures))


def _nodes(law: Law, part: PressureNodes, temperatures: np.ndarray) -> np.ndarray:
    """log10 k at the table's pressures, (nT, nodes); NaN where the rows of one do not add up to a positive sum."""
    k = np.add.reduceat(values(law.expressions(), temperatures), np.cumsum([0, *part.counts[:-1]]), axis=1)
    return np.where(k > 0, np.log10(np.where(k > 0, k, 1.0)), np.nan)


def _rows(survey: Survey, j: int, term: int, part: PressureNodes, log_k: np.ndarray) -> Iterator[Finding]:
    T, place, p = survey.temperatures, survey.term_place(j, term), np.exp(part.log_p)
    back = turning(log_k)
    if len(p) > 2 and np.nanmax(back) > _TURN:
        k, size = int(np.nanargmax(back)), float(np.nanmax(back))
        text = f"k at {T[k]:.4g} K turns with pressure: {factor_text(size)} up and down again"
        yield Finding(NAME, severity_of(size), place, text, size, float(T[k]), reaction=j + 1).at_most(WARNING)
    for n in np.flatnonzero(p[1:] / p[:-1] > _GAP * (1 + 1e-9)):
        size = float(np.nanmax(np.abs(log_k[:, n + 1] - log_k[:, n])))
        text = f"no row between {p[n] / 1e5:.3g} and {p[n + 1] / 1e5:.3g} bar, across which k changes by {factor_text(size)}"
        yield Finding(NAME, WARNING if size > np.log10(2.0) else NOTICE, place, text, size, NONE, float(p[n]), reaction=j + 1)
    if survey.pressures[0] < p[0] * (1 - 1e-9) or survey.pressures[-1] > p[-1] * (1 + 1e-9):
        text = f"rows from {p[0] / 1e5:.3g} to {p[-1] / 1e5:.3g} bar; beyond, the end row holds"
        yield Finding(NAME, NOTICE, place, text, reaction=j + 1)


def turning(log_k: np.ndarray) -> np.ndarray:
    """How far k goes back on its way from the lowest to the highest pressure, (nT) [decades], (nT, nodes) in: the smaller
    of all its rises and all its falls."""
    steps = np.diff(log_k, axis=1)
    return np.minimum(np.sum(np.maximum(steps, 0.0), axis=1), np.sum(np.maximum(-steps, 0.0), axis=1))
