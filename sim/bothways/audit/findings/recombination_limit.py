"""High-pressure limits of associations above the collision rate, stated or derived from the dissociation's."""

from collections.abc import Iterator

import numpy as np

from ..encounters import decades_above, paired
from ..finding import Finding
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
    """One row for each association in fall-off whose k_inf exceeds the limit, whichever way it is written."""
    pairs = paired(survey, fall_off=True)
    if pairs:
        excess, log_k = decades_above(survey, pairs, bare=True)
        for n in np.flatnonzero(np.max(excess, axis=(0, 1)) > collision_limit.SMALLEST):
            yield collision_limit.row(survey, pairs[n], excess[:, :1, n], log_k[:, :1, n], NAME, "k_inf")
