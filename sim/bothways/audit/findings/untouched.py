"""Species that no reaction touches."""

from collections.abc import Iterator

import numpy as np

from ..finding import NOTICE, Finding
from ..survey import Survey

NAME = "takes no part"
SOURCE = "the stoichiometry of the mechanism"
SEVERITY = "notice: right for a diluent"
EXPLANATION = "No reaction changes the amount of this species: what is charged of it stays, and nothing makes it."


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each such species."""
    for k in np.flatnonzero(~np.any(survey.nu, axis=1)):
        name = survey.mechanism.names[k]
        yield Finding(NAME, NOTICE, f"species.{name}", "no reaction makes or takes it", species=name)
