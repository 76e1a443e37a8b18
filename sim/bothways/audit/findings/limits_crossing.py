"""Fall-off whose two limits cross the wrong way."""

from collections.abc import Iterator

import numpy as np

from ...constants import GAS_CONSTANT as R
from ..finding import NONE, NOTICE, WARNING, Finding
from ..survey import Survey, limits_of, values

NAME = "limits cross the wrong way"
SOURCE = ("K.A. Holbrook, M.J. Pilling, S.H. Robertson, Unimolecular Reactions, 2nd ed., Wiley 1996: fall-off moves to "
          "higher pressure as temperature rises; the range of its centre is common practice, no source")
SEVERITY = ("notice where the pressure of the centre falls with temperature, warning where it falls by more than a decade "
            "or lies outside 1e-8 to 1e8 bar over the whole range")
EXPLANATION = ("The pressure p = RT k_inf/k_0 at which both limits are equal should rise with temperature, since hotter "
               "molecules live shorter. One that falls, or one beyond all pressures, hints at swapped limits or at A in "
               "other units.")
_LOW, _HIGH = 1e-8, 1e8  # bar
_SMALLEST = 0.1


def find(survey: Survey) -> Iterator[Finding]:
    """One row for each reaction in fall-off whose centre moves or lies so."""
    found = [(j, limits) for j, r in enumerate(survey.mechanism.reactions) if (limits := limits_of(r))]
    if not found:
        return
    high, low = (np.log(values([limits[n] for _, limits in found], survey.temperatures)) for n in (0, 1))
    log_p = (high - low + np.log(R * survey.temperatures / 1e5)[:, None]) / np.log(10.0)
    for n, (j, _) in enumerate(found):
        yield from _rows(survey, j, log_p[:, n])


def _rows(survey: Survey, j: int, log_p: np.ndarray) -> Iterator[Finding]:
    T, fall = survey.temperatures, float(log_p[0] - log_p[-1])
    beyond = bool(np.all(log_p > np.log10(_HIGH)) or np.all(log_p < np.log10(_LOW)))
    if beyond or fall > _SMALLEST:
        text = (f"both limits are equal at {10.0 ** log_p[0]:.2g} bar at {T[0]:.4g} K and at {10.0 ** log_p[-1]:.2g} bar at "
                f"{T[-1]:.4g} K" + (": beyond all pressures" if beyond else ": it should rise"))
        severity = WARNING if beyond or fall > 1.0 else NOTICE
        yield Finding(NAME, severity, survey.reaction_place(j), text, NONE, float(T[0]), NONE, float(T[0]), float(T[-1]),
                      float(10.0 ** log_p[0] * 1e5), "Pa", reaction=j + 1)
