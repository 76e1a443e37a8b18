"""Steps that their source states for one direction only: how much the neglected reverse matters."""

from collections.abc import Iterator

import numpy as np

from ..finding import NONE, NOTICE, WARNING, Finding, stretch_text
from ..survey import Survey

NAME = "published one way"
SOURCE = "detailed balance, as for the published reverse; K from the species' potentials (balance.py)"
SEVERITY = "warning where the reverse is the faster one (K below 1) somewhere in the range, else notice"
EXPLANATION = ("With every species at the same partial pressure p, the reverse runs at 1/K of the forward rate, K = K° "
               "(p/p°)^Σν. A K near 1 or below says that what the source left out decides. Here the step runs both ways "
               "like all others; a model that takes the claim literally ends elsewhere.")

_AT = {True: "all at one pressure", False: "all at activity one"}


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction that is published one way, with the smallest K over temperatures and pressures."""
    for j, reaction in enumerate(survey.mechanism.reactions):
        if reaction.published_one_way:
            yield _row(survey, j)


def _row(survey: Survey, j: int) -> Finding:
    change = float(survey.nu[:, j].sum())
    p = survey.pressures / survey.mechanism.standard_pressure if survey.is_gas else np.ones(1)
    log_K = survey.log_K[:, j, None] + change * np.log(p)
    least = np.min(log_K, axis=1)
    k, q = np.unravel_index(int(np.argmin(log_K)), log_K.shape)
    T, below = survey.temperatures, survey.temperatures[least < 0]
    faster = f"the reverse is the faster one {stretch_text(*below[[0, -1]])}" if below.size else "the forward is always faster"
    text = (f"K is {_power(least[0])} at {T[0]:.4g} K and {_power(least[-1])} at {T[-1]:.4g} K, with {_AT[survey.is_gas]}: "
            f"{faster}")
    where = (float(below[0]), float(below[-1])) if below.size else (NONE, NONE)
    pressure = float(survey.pressures[q]) if change and survey.is_gas else NONE
    return Finding(NAME, WARNING if below.size else NOTICE, survey.reaction_place(j), text, NONE, float(T[k]), pressure, *where,
                   float(np.exp(log_K[k, q])), "1", reaction=j + 1)


def _power(log_number: float) -> str:
    """A number from its ln, also one beyond the range of floating point."""
    return f"1e{log_number / np.log(10.0):.0f}" if abs(log_number) > 20 else f"{np.exp(log_number):.2g}"
