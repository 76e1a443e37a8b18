"""Sums of terms, or rows of one pressure, that are not positive in the working range."""

from collections.abc import Iterator

import numpy as np

from ..finding import ERROR, NONE, Finding, stretch_text
from ..survey import Survey

NAME = "rate not positive"
SOURCE = "a rate constant is a probability per time"
SEVERITY = "error"
EXPLANATION = ("Terms of opposite sign were fitted to one curve and cancel outside its range: the step would run backwards "
               "against its affinity. Narrow the range, or replace the terms by one with a power of T.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction whose forward constant is not positive or not finite somewhere."""
    wrong = ~((survey.forward > 0) & np.isfinite(survey.forward))
    T = survey.temperatures
    for j in np.flatnonzero(np.any(wrong, axis=(0, 1))):
        if np.all(survey.forward[:, :, j] == 0):
            continue  # nothing but a rate too small for a floating-point number
        where = T[np.any(wrong[:, :, j] & (survey.forward[:, :, j] != 0), axis=1)]
        if where.size:
            k, q = np.unravel_index(int(np.argmin(np.nan_to_num(survey.forward[:, :, j]))), wrong.shape[:2])
            text = (f"the forward constant is {survey.forward[k, q, j]:.3g} at {T[k]:.4g} K, not positive "
                    f"{stretch_text(where[0], where[-1])}")
            yield Finding(NAME, ERROR, survey.reaction_place(int(j)), text, NONE, float(T[k]), float(survey.pressures[q]),
                          float(where[0]), float(where[-1]), float(survey.forward[k, q, j]), reaction=int(j) + 1)
