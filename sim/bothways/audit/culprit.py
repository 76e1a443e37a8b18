"""What is likelier at fault where a derived constant is impossible: the forward rate, or the thermochemistry.

The rule, in this order: (1) the forward constant breaks its own limit; (2) a species of the reaction has thermochemistry
that is faulty by itself (an open join, an enthalpy of formation off its reference); (3) the reverse falls with rising
temperature faster than an association can: then the activation energy is below what the energies of reaction ask for, and
either may be wrong; (4) else its size, not its slope, is wrong: the forward A, or an entropy. The remedy is stated as the
change of ΔG of reaction that would bring it to the limit, R T ln(excess).
"""

from dataclasses import replace

import numpy as np

from ..constants import GAS_CONSTANT as R
from .encounters import FORWARD, Encounter
from .finding import NONE, NOTICE, Finding
from .survey import Survey

STEEP = -20e3
"""An apparent activation energy below this [J/mol] is no association's (those of atoms with a third body reach about
-10 kJ/mol; common practice, no source)."""


def slope_text(survey: Survey, met: Encounter, log_k: np.ndarray, k: int) -> str:
    """What the course of a reverse constant (nT) near temperature k tells."""
    if met.direction == FORWARD:
        return "the forward rate"
    T = survey.temperatures
    inside = slice(max(k - 1, 0), k + 2)
    x, y = 1.0 / T[inside], log_k[inside]
    known = np.isfinite(y)
    if np.count_nonzero(known) < 2:
        return "unclear"
    energy = -R * float(np.polyfit(x[known], y[known], 1)[0])
    if energy < STEEP:
        delta = float(survey.reaction_energy[k, met.j]) / 1e3
        return (f"the energies: the derived reverse has an apparent activation energy of {energy / 1e3:.0f} kJ/mol (ΔU° of "
                f"reaction {delta:.0f} kJ/mol), so the forward Ea is too low or ΔH° too high")
    return "the size of the forward A, or an entropy of reaction that is off"


def mending(survey: Survey, met: Encounter, decades: float, k: int) -> float:
    """The change of ΔG° of reaction [J/mol] that brings a derived reverse down to its limit; NaN for a forward rate."""
    return NONE if met.direction == FORWARD else float(-R * survey.temperatures[k] * decades * np.log(10.0))


def with_thermochemistry(rows: list[Finding], survey: Survey, suspects: dict[str, str]) -> list[Finding]:
    """The rows, with suspicion moved to species whose own thermochemistry is faulty."""
    moved = []
    for row in rows:
        names = survey.mechanism.reactions[row.reaction - 1].net if row.reaction and row.likely else {}
        faulty = [f"{name} ({suspects[name]})" for name in names if name in suspects]
        forward = row.likely == "the forward rate"
        moved.append(replace(row, likely=f"the thermochemistry of {', '.join(faulty)}") if faulty and not forward else row)
    return moved


def suspects_of(rows: list[Finding]) -> dict[str, str]:
    """Species whose thermochemistry is faulty by itself beyond a notice, with what is wrong."""
    return {row.species: row.kind for row in rows if row.species and row.severity != NOTICE}
