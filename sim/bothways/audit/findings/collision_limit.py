"""Rate constants of bimolecular steps above the rate at which the molecules meet, in either direction."""

from collections.abc import Iterator

import numpy as np

from ..culprit import mending, slope_text
from ..encounters import REVERSE, Encounter, decades_above, diameter_note, paired
from ..finding import NONE, Finding, factor_text, severity_of, stretch_text
from ..survey import Survey

NAME = "faster than collisions"
SOURCE = ("D. Chen, K. Wang, H. Wang, Combust. Flame 186 (2017) 208, for the test of both directions; audit/collisions.py "
          "and audit/diameters.py for the limit")
SEVERITY = "by decades above the limit: error from a factor of 10, warning from 2, notice below"
EXPLANATION = ("Two molecules cannot react more often than they meet. A derived reverse constant above that limit means "
               "that the forward rate and the equilibrium constant do not fit together: read the 'likely' column, and where "
               "T is outside the range the forward rate was measured over, mistrust its extrapolation first. Dipoles and "
               "long-range attraction raise the true limit by a factor of 2 to 3 at most.")

SMALLEST = 1e-9
"""Decades above a limit that are more than round-off [-]."""

_OF_PRESSURE = ", or a law for low pressure used at too high a one"


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each direction that exceeds its limit; fall-off is looked at by its high-pressure limit elsewhere."""
    pairs = paired(survey, fall_off=False)
    if pairs:
        excess, log_k = decades_above(survey, pairs, bare=False)
        for n in np.flatnonzero(np.max(excess, axis=(0, 1)) > SMALLEST):
            yield row(survey, pairs[n], excess[:, :, n], log_k[:, :, n], NAME, "k")


def row(survey: Survey, pair: Encounter, excess: np.ndarray, log_k: np.ndarray, name: str, symbol: str) -> Finding:
    """The row of one direction from its decades above the limit and its ln k, (nT, np) each."""
    k, q = np.unravel_index(int(np.argmax(excess)), excess.shape)
    T, decades, p = survey.temperatures, float(excess[k, q]), float(survey.pressures[q])
    where = T[np.any(excess > 0, axis=1)]
    of_pressure = bool(np.ptp(excess[k]) > 1e-6)
    names = " + ".join(survey.mechanism.names[m] for m in pair.molecules)
    what = f"derived reverse {symbol}" if pair.direction == REVERSE else f"forward {symbol}"
    at = f"{T[k]:.4g} K" + f" and {p / 1e5:.4g} bar" * of_pressure
    text = (f"{what} of {names} exceeds the collision rate by {factor_text(decades)} at {at}, above it "
            f"{stretch_text(where[0], where[-1])}{diameter_note(survey, pair)}")
    return Finding(name, severity_of(decades), survey.reaction_place(pair.j), text, decades, float(T[k]),
                   p if of_pressure else NONE, float(where[0]), float(where[-1]),
                   float(np.exp(log_k[k, q])), "m3 mol-1 s-1", mending(survey, pair, decades, int(k)),
                   slope_text(survey, pair, log_k[:, q], int(k)) + _OF_PRESSURE * of_pressure, pair.j + 1)
