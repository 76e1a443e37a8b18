"""Elements and charge on both sides of every reaction."""

from collections.abc import Iterator

import numpy as np

from ..finding import ERROR, Finding
from ..survey import Survey

NAME = "not balanced"
SOURCE = ("conservation of elements and charge; a file that breaks it is refused at reading, a mechanism made in Python is "
          "looked at here")
SEVERITY = "error"
EXPLANATION = "The equation makes or destroys atoms or charge: no equilibrium constant belongs to it."


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction that is not balanced."""
    m = survey.mechanism
    labels = [*m.used_elements, "charge"]
    excess = m.element_matrix @ survey.nu
    for j in np.flatnonzero(np.any(excess, axis=0)):
        text = ", ".join(f"{label} {value:+g}" for label, value in zip(labels, excess[:, j], strict=False) if value)
        yield Finding(NAME, ERROR, survey.reaction_place(int(j)), f"{text} on the right-hand side", reaction=int(j) + 1)
