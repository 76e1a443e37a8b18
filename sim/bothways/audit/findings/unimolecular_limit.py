"""Unimolecular rate constants above k_B T/h, in either direction."""

from collections.abc import Iterator

import numpy as np

from ...constants import BOLTZMANN, PLANCK
from ..culprit import mending, slope_text
from ..encounters import REVERSE, Encounter, encounters, log_constants
from ..finding import ERROR, NONE, NOTICE, WARNING, Finding, factor_text, stretch_text
from ..survey import Survey

NAME = "unimolecular above k_B T/h"
SOURCE = ("H. Eyring, J. Chem. Phys. 3 (1935) 107, doi:10.1063/1.1749604; S.W. Benson, Thermochemical Kinetics, 2nd ed., "
          "Wiley 1976")
SEVERITY = ("notice; warning from 2 decades, error from 4, since no bond fission is known with A above 1e18 1/s (common "
            "practice, no source)")
EXPLANATION = ("k_B T/h is the frequency of transition-state theory. A loose transition state (the breaking of a bond) "
               "exceeds it legitimately by one or two decades, by its entropy of activation; more than that needs a reason.")
_WARNING, _ERROR = 2.0, 4.0


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each direction with a single molecule."""
    met = [e for e in encounters(survey, 1) if e.partners == 0 and not survey.mechanism.reactions[e.j].equation.partner]
    if not met:
        return
    log_k = log_constants(survey, met, bare=True)
    frequency = np.log(BOLTZMANN * survey.temperatures / PLANCK)
    excess = (log_k - frequency[:, None, None]) / np.log(10.0)
    top = np.max(np.where(np.isfinite(excess), excess, -np.inf), axis=(0, 1))
    for n in np.flatnonzero(top > 1e-9):
        yield _row(survey, met[n], excess[:, :, n], log_k[:, :, n])


def _row(survey: Survey, one: Encounter, excess: np.ndarray, log_k: np.ndarray) -> Finding:
    known = np.where(np.isfinite(excess), excess, -np.inf)
    k, q = np.unravel_index(int(np.argmax(known)), known.shape)
    T, decades = survey.temperatures, float(known[k, q])
    where = T[np.any(known > 0, axis=1)]
    what = "derived reverse" if one.direction == REVERSE else "forward"
    text = (f"{what} k of {survey.mechanism.names[one.molecules[0]]} exceeds k_B T/h by {factor_text(decades)} at {T[k]:.4g} K, "
            f"above it {stretch_text(where[0], where[-1])}")
    severity = ERROR if decades >= _ERROR else WARNING if decades >= _WARNING else NOTICE
    return Finding(NAME, severity, survey.reaction_place(one.j), text, decades, float(T[k]), NONE, float(where[0]),
                   float(where[-1]), float(np.exp(log_k[k, q])), "s-1", mending(survey, one, decades, int(k)),
                   slope_text(survey, one, log_k[:, q], int(k)), one.j + 1)
