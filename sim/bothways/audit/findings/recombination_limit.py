"""High-pressure limits of associations above the collision rate, stated or derived from the dissociation's."""

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from ..encounters import decades_above, paired
from ..finding import Finding, factor_text
from ..survey import Survey
from . import collision_limit

NAME = "recombination faster than collisions"
SOURCE = ("R.G. Gilbert, S.C. Smith, Theory of Unimolecular and Recombination Reactions, Blackwell 1990: k_inf is a capture "
          "rate; audit/collisions.py for the limit")
SEVERITY = "by decades above the limit: error from a factor of 10, warning from 2, notice below"
EXPLANATION = ("The high-pressure limit of an association is the rate at which the two find each other. Above the collision "
               "rate it is no capture rate any more: where the dissociation is the stated direction, its k_inf and the "
               "equilibrium constant do not fit together.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each association in fall-off whose k_inf, or k at a working pressure, exceeds the limit, whichever way it is
    written."""
    pairs = paired(survey, fall_off=True)
    if not pairs:
        return
    excess, log_k = decades_above(survey, pairs, bare=True)
    own, own_log_k = decades_above(survey, pairs, bare=False)
    for n, pair in enumerate(pairs):
        if np.max(excess[:, :, n]) > collision_limit.SMALLEST:
            row = collision_limit.row(survey, pair, excess[:, :1, n], log_k[:, :1, n], NAME, "k_inf")
            yield replace(row, text=f"{row.text}; {_at_pressures(survey, own[:, :, n])}")
        elif np.max(own[:, :, n]) > collision_limit.SMALLEST:
            yield collision_limit.row(survey, pair, own[:, :, n], own_log_k[:, :, n], NAME, "k")


def _at_pressures(survey: Survey, excess: np.ndarray) -> str:
    """What k itself does at the working pressures, (nT, np) decades above the limit."""
    top = float(np.max(excess))
    if top <= 0:
        return "k itself stays below it at the working pressures"
    q = int(np.argmax(np.max(excess, axis=0)))
    return f"k itself exceeds it by {factor_text(top)} at {survey.pressures[q] / 1e5:.4g} bar"
