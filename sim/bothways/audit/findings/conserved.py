"""What the reactions conserve beyond the elements."""

from collections.abc import Iterator

import numpy as np

from ...equilibrium.conserved import combination_text, extra_conserved
from ..finding import NOTICE, Finding
from ..survey import Survey

NAME = "conserved besides the elements"
SOURCE = ("the left null space of the stoichiometry (M. Feinberg, Foundations of Chemical Reaction Network Theory, Springer "
          "2019, ch. 3), by exact elimination, in small integers")
SEVERITY = "notice"
EXPLANATION = ("This combination of amounts never changes, so a run ends at the equilibrium under that constraint, not at "
               "the one that the elements allow. If chemistry does not conserve it, a reaction is missing.")


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each independent combination of more than one species (single ones: `takes no part`)."""
    if not survey.mechanism.reactions:
        return
    for row in extra_conserved(survey.mechanism):
        if np.count_nonzero(row) > 1:
            yield Finding(NAME, NOTICE, "mechanism", f"no reaction changes {combination_text(survey.mechanism, row)}",
                          value=float(np.count_nonzero(row)), unit="species")
