"""One equation stated in either direction in two entries."""

from collections.abc import Iterator

import numpy as np

from ..finding import NONE, NOTICE, WARNING, WARNING_FROM, Finding, factor_text
from ..survey import Survey, mass_action

NAME = "stated both ways round"
SOURCE = "detailed balance: each entry has a reverse of its own already"
SEVERITY = "warning where the two agree within a factor of 2 somewhere, so that the step may be counted twice; else notice"
EXPLANATION = ("Two entries of one step add up as two channels. If they are the two halves of one reaction, the rate is "
               "counted twice: keep one, and record the other as its published_reverse.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each such pair, at the later entry."""
    seen: dict[tuple, int] = {}
    for j, reaction in enumerate(survey.mechanism.reactions):
        if not mass_action(reaction):
            continue
        left, right, partner = reaction.equation.key
        first = seen.get((right, left, partner))
        if first is not None:
            yield _row(survey, first, j)
        seen[reaction.equation.key] = j


def _row(survey: Survey, first: int, second: int) -> Finding:
    """Compares the forward constant of the second with the derived reverse of the first."""
    ratio = survey.log_forward[:, :, second] - (survey.log_forward[:, :, first] - survey.log_Kc[:, None, first])
    decades = np.abs(np.nan_to_num(ratio, nan=np.inf)) / np.log(10.0)
    k, q = np.unravel_index(int(np.argmin(decades)), decades.shape)
    near = float(decades[k, q])
    T = float(survey.temperatures[k])
    text = (f"the opposite of {survey.reaction_place(first)}, whose derived reverse it meets within {factor_text(near)} "
            f"at {T:.4g} K")
    return Finding(NAME, WARNING if near < WARNING_FROM else NOTICE, survey.reaction_place(second), text, NONE, T, NONE,
                   value=float(np.exp(ratio[k, q])), unit="1", reaction=second + 1)
