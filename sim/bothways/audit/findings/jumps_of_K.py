"""How far the equilibrium constant of a reaction jumps where ranges of its species do not meet."""

from collections.abc import Iterator

import numpy as np

from ...thermo.polynomial import cp_h_s
from ..finding import NONE, Finding, factor_text, severity_of
from ..survey import Survey

NAME = "jump of K"
SOURCE = ("ln K° = -Σ ν g°/RT (IUPAC Green Book, 3rd ed., section 2.11), with the published ranges on either side of a "
          "boundary")
SEVERITY = "by decades: error from a factor of 10, warning from 2, notice from 5 %"
EXPLANATION = ("What the open joins of its species do to one reaction: its published K°, and with it the derived reverse "
               "rate, is different by this much just below and just above the temperature.")
_SMALLEST = np.log(1.05) / np.log(10.0)


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction whose K jumps, at the boundary where it does so most."""
    T, jumps = all_jumps(survey)
    if not len(T):
        return
    k = np.argmax(np.abs(jumps), axis=0)
    largest = jumps[k, np.arange(jumps.shape[1])] / np.log(10.0)
    for j in np.flatnonzero(np.abs(largest) > _SMALLEST):
        size, at = abs(float(largest[j])), float(T[k[j]])
        text = f"K° as published jumps {'up' if largest[j] > 0 else 'down'} by {factor_text(size)} at {at:.6g} K"
        yield Finding(NAME, severity_of(size), survey.reaction_place(int(j)), text, size, at, NONE, at, at,
                      float(largest[j] * np.log(10.0)), "1", reaction=int(j) + 1)


def all_jumps(survey: Survey) -> tuple[np.ndarray, np.ndarray]:
    """Boundaries (nb) [K], rising, and the jump of ln K° of every reaction at each, (nb, reactions)."""
    steps = [(float(T), k, _step(r.rows[i], r.rows[i + 1], float(T)))
             for k, r in enumerate(s.potential.ranges() for s in survey.mechanism.species)
             for i, T in enumerate(r.boundaries[1:-1])]
    at = np.unique([T for T, _, _ in steps])
    g = np.zeros((len(at), len(survey.mechanism.species)))
    for T, k, step in steps:
        g[np.searchsorted(at, T), k] = step
    return at, -(g @ survey.nu)


def _step(below: np.ndarray, above: np.ndarray, T: float) -> float:
    """The jump of g/RT [-]."""
    (_, h0, s0), (_, h1, s1) = cp_h_s(below, T), cp_h_s(above, T)
    return (h1 - h0) - (s1 - s0)
